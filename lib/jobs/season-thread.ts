/** A thread of the season pool: takes parcels or a slice of a run, runs the season, hands the arrays back. */
import { parentPort } from 'node:worker_threads';
import { Refused, TillwaterError } from '../base/errors.ts';
import { runSeason } from '../season/kernel.ts';
import type { SeasonInput, SeasonOutput } from '../season/types.ts';
import { buffersOf, computeSliceOutput, type SliceOutput, type SliceTask } from './slice-work.ts';

/** What a thread is asked: a season, or a slice of a run. */
export type SeasonTask = { readonly input: SeasonInput } | { readonly slice: SliceTask };

/** What the pool gets back for one task: the output, or the error told in words that cross a thread. */
export type SeasonReply =
  | { readonly output: SeasonOutput | SliceOutput }
  | { readonly failure: { readonly code: string; readonly message: string; readonly findings: Refused['findings'] } };

function answer(task: SeasonTask): { output: SeasonOutput | SliceOutput; arrays: ArrayBuffer[] } {
  if ('slice' in task) {
    const output = computeSliceOutput(task.slice);
    return { output, arrays: buffersOf(output) };
  }
  const output = runSeason(task.input);
  const { daily, flags, stageEt, stageDays } = output;
  return { output, arrays: [daily, flags, stageEt, stageDays].map(({ buffer }) => buffer as ArrayBuffer) };
}

function failureOf(error: unknown): SeasonReply {
  const code = error instanceof TillwaterError ? error.code : 'failure';
  const message = error instanceof Error ? `${error.message}` : String(error);
  return { failure: { code, message, findings: error instanceof Refused ? error.findings : [] } };
}

parentPort?.on('message', (task: SeasonTask) => {
  try {
    const { output, arrays } = answer(task);
    parentPort?.postMessage({ output } satisfies SeasonReply, arrays);
  } catch (error) {
    parentPort?.postMessage(failureOf(error));
  }
});
