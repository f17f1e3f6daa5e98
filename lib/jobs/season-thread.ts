/** A thread of the season pool: takes parcels, runs their season, hands the arrays back. */
import { parentPort } from 'node:worker_threads';
import { Refused, TillwaterError } from '../base/errors.ts';
import { runSeason } from '../season/kernel.ts';
import type { SeasonInput, SeasonOutput } from '../season/types.ts';

/** What the pool gets back for one task: the output, or the error told in words that cross a thread. */
export type SeasonReply =
  | { readonly output: SeasonOutput }
  | { readonly failure: { readonly code: string; readonly message: string; readonly findings: Refused['findings'] } };

function replyTo(input: SeasonInput): SeasonReply {
  try {
    return { output: runSeason(input) };
  } catch (error) {
    const code = error instanceof TillwaterError ? error.code : 'failure';
    const message = error instanceof Error ? `${error.message}` : String(error);
    return { failure: { code, message, findings: error instanceof Refused ? error.findings : [] } };
  }
}

parentPort?.on('message', (input: SeasonInput) => {
  const reply = replyTo(input);
  const arrays = 'output' in reply ? [reply.output.daily.buffer as ArrayBuffer, reply.output.flags.buffer as ArrayBuffer] : [];
  parentPort?.postMessage(reply, arrays);
});
