/** Progress of a run as it happens: one LISTEN a process, fanned out to the open streams. */
import type { Caller } from '../access/caller.ts';
import { database } from '../access/database.ts';
import { log } from '../access/log.ts';
import { answerRun, isOver } from './answers/run.ts';
import type { RunAnswer } from './contract/run.ts';
import type { EventSink } from './streams.ts';

/** A notification that got lost costs this long, never the result. */
const REREAD_MS = 5000;

interface Hub {
  readonly handle: unknown;
  readonly listeners: Set<(payload: string) => void>;
}
const held = globalThis as unknown as { tillwaterRunHub?: Hub };

async function hub(): Promise<Hub> {
  const handle = database();
  if (held.tillwaterRunHub?.handle !== handle) {
    const made: Hub = { handle, listeners: new Set() };
    held.tillwaterRunHub = made;
    await handle.listen('run_progress', (payload) => {
      for (const heard of made.listeners) heard(payload);
    });
  }
  return held.tillwaterRunHub as Hub;
}

/** Sends the run now, at each change, and ends the stream when the run is over. Answers what stops it. */
export async function followRun(caller: Caller, first: RunAnswer, sink: EventSink): Promise<() => void> {
  sink.send('run', first);
  if (isOver(first)) {
    sink.close();
    return () => {};
  }
  const { listeners } = await hub();
  let last = JSON.stringify(first);
  const reread = async () => {
    const run = await answerRun(caller, first.id);
    const text = JSON.stringify(run);
    if (text !== last) sink.send('run', run);
    last = text;
    if (isOver(run)) sink.close();
  };
  const look = () => {
    reread().catch((error) => {
      log().warn({ err: error, run: first.id }, 'progress of a run could not be read');
      sink.close();
    });
  };
  const heard = (payload: string) => {
    if (payload.includes(first.id)) look();
  };
  listeners.add(heard);
  const timer = setInterval(look, REREAD_MS);
  look();
  return () => {
    listeners.delete(heard);
    clearInterval(timer);
  };
}
