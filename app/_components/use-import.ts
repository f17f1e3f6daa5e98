import { useRouter } from 'next/navigation';
import { useEffect, useState } from 'react';
import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import { isGoingOn } from './import-words.ts';
import { messageOf, problemText, sendJson } from './problem-text.ts';

/** Polling while something is going on [ms]: soon at first, then at leisure. */
const SOON = 500;
const LATER = 2000;
const SOON_TIMES = 40;

export type ImportAct = 'apply' | 'undo' | 'cancel';
export type Patch = (options: Readonly<Record<string, unknown>>) => Promise<void>;

async function fetchImport(id: string, preview: boolean): Promise<ImportAnswer> {
  const response = await fetch(`/api/v1/imports/${id}${preview ? '' : '?preview=0'}`);
  if (!response.ok) throw new Error(await problemText(response));
  return (await response.json()) as ImportAnswer;
}

/** Looks at a working import again and again until it rests, then once more in full. */
function watchImport(id: string, tell: (answer: ImportAnswer) => void, over: () => void): () => void {
  let timer: ReturnType<typeof setTimeout>;
  let looks = 0;
  let stopped = false;
  const look = async () => {
    const answer = await fetchImport(id, false).catch(() => null);
    if (stopped) return;
    if (answer && !isGoingOn(answer)) {
      const full = await fetchImport(id, true).catch(() => answer);
      if (stopped) return;
      tell(full);
      over();
      return;
    }
    if (answer) tell(answer);
    timer = setTimeout(look, looks++ < SOON_TIMES ? SOON : LATER);
  };
  timer = setTimeout(look, SOON);
  return () => {
    stopped = true;
    clearTimeout(timer);
  };
}

/** The import as it is now, and the ways to change it. */
export function useImport(first: ImportAnswer) {
  const router = useRouter();
  const [now, setNow] = useState(first);
  const [fault, setFault] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  const working = isGoingOn(now);
  useEffect(() => {
    if (!working) return;
    const tell = (answer: ImportAnswer) => setNow((before) => ({ ...answer, preview: answer.preview ?? before.preview }));
    return watchImport(first.id, tell, () => router.refresh());
  }, [working, first.id, router]);
  const send = async (method: 'POST' | 'PATCH', address: string, body?: unknown) => {
    setBusy(true);
    setFault(null);
    try {
      const answer = await sendJson<ImportAnswer>(method, address, body);
      if (answer) setNow((before) => ({ ...answer, preview: before.preview }));
    } catch (error) {
      setFault(messageOf(error));
    }
    setBusy(false);
  };
  return {
    now,
    fault,
    busy,
    act: (name: ImportAct) => send('POST', `/api/v1/imports/${first.id}/${name}`),
    patch: (options: Readonly<Record<string, unknown>>) => send('PATCH', `/api/v1/imports/${first.id}`, options),
  };
}
