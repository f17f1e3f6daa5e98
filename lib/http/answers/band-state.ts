/** Where a run’s band stands, as readers see it. */
import type { RunHead } from '../../../db/queries/run-read.ts';
import { type BandStateAnswer, bandState } from '../contract/band.ts';

/** Null where the run was not asked for a band. */
export function bandStateOf(run: Pick<RunHead, 'band'>): BandStateAnswer | null {
  return run.band ? bandState.strip().parse(run.band) : null;
}
