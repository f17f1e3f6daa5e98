/**
 * The calendar of a parcel's plantings as a season settles it: dates of every stage of every cycle, weather included.
 */
import { type IsoDate, isoDate } from '../base/civil-date.ts';
import type { Cycle, Stage } from '../crop/curve.ts';
import { placeParcel } from './kernel.ts';
import { packSeason } from './pack.ts';
import type { PlantedCycles } from './stage-days.ts';
import type { SeasonInput } from './types.ts';

const STAGES = ['initial', 'development', 'mid', 'late'] as const;

/** Days of a stage of a cycle, first and last. */
export interface StageSpan {
  /** 1 for the first cycle; more for a crop that is cut */
  readonly cycle: number;
  readonly stage: Stage;
  readonly start: IsoDate;
  readonly end: IsoDate;
}

/**
 * Stages of the plantings of one parcel, in the order of its list; empty for a planting that never starts.
 *
 * Stages before and after the run are told too: they go by the calendar's days or, past the end, by the warmth of the last days.
 *
 * @param input the season as it was run (other parcels may be left out)
 * @throws as `runSeason`
 */
export function plantingStages(input: SeasonInput, parcelIndex: number): StageSpan[][] {
  const season = packSeason(input);
  const { plantings } = placeParcel(season, input.parcels[parcelIndex]);
  return plantings.map((planted) => stagesOfPlanting(planted, season.firstDay));
}

function stagesOfPlanting({ cycles }: PlantedCycles, firstDay: number): StageSpan[] {
  return cycles.flatMap((cycle, k) => stagesOfCycle(cycle, k + 1, firstDay));
}

function stagesOfCycle({ start, end, lengths }: Cycle, cycle: number, firstDay: number): StageSpan[] {
  const spans: StageSpan[] = [];
  let from = start;
  for (const stage of STAGES) {
    const to = stage === 'late' ? end : Math.min(end, from + lengths[stage]);
    if (to > from) spans.push({ cycle, stage, start: isoDate(firstDay + from), end: isoDate(firstDay + to - 1) });
    from = Math.max(from, to);
  }
  return spans;
}
