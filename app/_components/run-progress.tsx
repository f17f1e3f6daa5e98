'use client';

import { useRouter } from 'next/navigation';
import { useEffect, useState } from 'react';
import { messageOf, sendJson } from './problem-text.ts';
import { isOver, type RunStateName, STATES } from './run-words.ts';

interface Progress {
  readonly state: RunStateName;
  readonly stage: string;
  readonly progress: number;
}

/** Polling interval when the event stream does not come through [ms]. */
const POLL = 2000;

/** Watches a run: the event stream, or polling where a proxy holds the stream back. Calls `over` once. */
function watchRun(id: string, tell: (progress: Progress) => void, over: () => void): () => void {
  let timer: ReturnType<typeof setInterval> | undefined;
  const events = new EventSource(`/api/v1/runs/${id}/events`);
  const stop = () => {
    events.close();
    clearInterval(timer);
  };
  const take = (run: Progress) => {
    tell(run);
    if (!isOver(run.state)) return;
    stop();
    over();
  };
  const poll = async () => {
    const response = await fetch(`/api/v1/runs/${id}`).catch(() => null);
    if (response?.ok) take((await response.json()) as Progress);
  };
  events.addEventListener('run', (event) => take(JSON.parse((event as MessageEvent<string>).data) as Progress));
  events.onerror = () => {
    events.close();
    timer ??= setInterval(poll, POLL);
  };
  return stop;
}

/** Live progress of a run that is under way, with a way to call it off. */
export function RunProgress(props: Progress & { id: string; season: string; mayCancel: boolean }) {
  const router = useRouter();
  const [now, setNow] = useState<Progress>(props);
  const [fault, setFault] = useState<string | null>(null);
  useEffect(() => watchRun(props.id, setNow, () => router.refresh()), [props.id, router]);
  const cancel = () => sendJson('POST', `/api/v1/runs/${props.id}/cancel`).catch((error) => setFault(messageOf(error)));
  return (
    <section className="panel" aria-label={`Run of season ${props.season}`}>
      <div className="spread">
        <p aria-live="polite">
          <strong>Season {props.season}</strong>: {STATES[now.state]}
          {now.state === 'running' && now.stage ? `, ${now.stage}` : ''}, {Math.round(now.progress * 100)} %
        </p>
        {props.mayCancel && !isOver(now.state) ? (
          <button type="button" className="button danger" onClick={cancel}>
            Call off
          </button>
        ) : null}
      </div>
      <progress value={now.progress} max={1} aria-label={`Progress of season ${props.season}`} />
      {fault ? (
        <p className="fault" role="alert">
          {fault}
        </p>
      ) : null}
    </section>
  );
}
