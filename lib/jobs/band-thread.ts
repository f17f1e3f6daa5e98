/** A thread that computes parts of bands: takes parcels, walks every member, hands the arrays back. */
import { parentPort } from 'node:worker_threads';
import { TillwaterError } from '../base/errors.ts';
import { type EnsembleOutput, type EnsembleWanted, runEnsemble } from '../season/ensemble.ts';
import type { SeasonInput } from '../season/types.ts';

export interface BandTask {
  readonly input: SeasonInput;
  readonly wanted: EnsembleWanted;
}

export type BandReply = { readonly output: EnsembleOutput } | { readonly failure: string; readonly refused: boolean };

function replyTo({ input, wanted }: BandTask): BandReply {
  try {
    return { output: runEnsemble(input, wanted) };
  } catch (error) {
    return { failure: error instanceof Error ? error.message : String(error), refused: error instanceof TillwaterError };
  }
}

parentPort?.on('message', (task: BandTask) => {
  const reply = replyTo(task);
  const arrays = 'output' in reply ? Object.values(reply.output).map((array) => array.buffer as ArrayBuffer) : [];
  parentPort?.postMessage(reply, arrays);
});
