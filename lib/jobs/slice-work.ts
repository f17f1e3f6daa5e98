/** One slice of a run from the text of its parcels to what is stored: rows, period values, sums. Runs on a thread; touches nothing but its arguments. */

import { packParcelDays } from '../season/daily-store.ts';
import { mostPackedBytes, packFlags } from '../season/day-pack.ts';
import { runSeason } from '../season/kernel.ts';
import { keptDays } from '../season/pack.ts';
import { DAILY_VARIABLE_COUNT, type SeasonOutput } from '../season/types.ts';
import type { FrozenSeason } from './frozen-season.ts';
import { type PeriodSet, packPeriods } from './map-arrays.ts';
import { packSums, sliceSums } from './reach-demand.ts';
import { seasonInput } from './run-plan.ts';
import { readSliceText, type SliceParcel } from './slice-text.ts';

export interface SliceTask {
  readonly season: FrozenSeason;
  /** see `slice-text` */
  readonly text: Uint8Array;
  /** place of the slice's first parcel in the run */
  readonly position: number;
  readonly sets: readonly PeriodSet[];
}

/** Rows of some parcels: what is text as a JSON array, what is bytes as places in `bytes`. */
export interface StoredParcels {
  readonly rows: string;
  readonly bytes: Uint8Array;
}

export interface SliceOutput {
  readonly parcels: readonly StoredParcels[];
  /** for each of KEPT_NAMES, see `packPeriods` */
  readonly periods: readonly Uint8Array[];
  readonly parcelCount: number;
  readonly periodCount: number;
  /** see `packSums` */
  readonly sums: Uint8Array;
  readonly maxResidual: number;
}

/** Parcels in one statement: about 2 MB of bytes. */
const PARCELS_TOGETHER = 400;

/**
 * Computes a slice.
 *
 * @throws as `seasonInput` and `runSeason`
 */
export function computeSliceOutput({ season, text, position, sets }: SliceTask): SliceOutput {
  const parcels = readSliceText(text);
  const input = seasonInput({ ...season, parcels });
  const output = runSeason(input);
  const dayCount = keptDays(input);
  const demanding = parcels.map(({ reach, input: { area } }) => ({ reach, area }));
  return {
    parcels: storedParcels(parcels, position, output, dayCount),
    periods: packPeriods(output.daily, output.flags, dayCount, sets),
    parcelCount: parcels.length,
    periodCount: sets.reduce((count, { periods }) => count + periods.length, 0),
    sums: packSums(sliceSums(demanding, output.daily, output.flags, dayCount)),
    maxResidual: output.maxBalanceResidual,
  };
}

/** Buffers that may be handed over rather than copied. */
export function buffersOf(output: SliceOutput): ArrayBuffer[] {
  const all = [...output.parcels.map(({ bytes }) => bytes), ...output.periods, output.sums];
  return [...new Set(all.map(({ buffer }) => buffer as ArrayBuffer))];
}

function storedParcels(parcels: readonly SliceParcel[], position: number, output: SeasonOutput, dayCount: number): StoredParcels[] {
  const stored: StoredParcels[] = [];
  const most = parcels.reduce((count, parcel) => Math.max(count, plantingCount(parcel)), 0);
  const scratch = new Uint8Array(Math.min(PARCELS_TOGETHER, parcels.length) * mostBytes(dayCount, most));
  let planting = 0;
  for (let from = 0; from < parcels.length; from += PARCELS_TOGETHER) {
    const rows: string[] = [];
    let end = 0;
    for (let p = from; p < Math.min(from + PARCELS_TOGETHER, parcels.length); p++) {
      const at = end;
      end = packParcelDays(output.daily, p, dayCount, scratch, at);
      const lengths = [end - at];
      for (const part of restOf(output, p, dayCount, planting, plantingCount(parcels[p]))) {
        scratch.set(part, end);
        end += part.byteLength;
        lengths.push(part.byteLength);
      }
      planting += plantingCount(parcels[p]);
      rows.push(rowText(parcels[p], { position: position + p, at, lengths, closing: output.closing[p] }));
    }
    stored.push({ rows: `[${rows.join(',')}]`, bytes: scratch.slice(0, end) });
  }
  return stored;
}

/** Most bytes of a parcel: days, flags of a run each, stage ET and stage days. */
function mostBytes(dayCount: number, plantings: number): number {
  return mostPackedBytes(DAILY_VARIABLE_COUNT, dayCount) + 4 + 6 * dayCount + plantings * (8 * 8 + 5 * 4);
}

function plantingCount({ input }: SliceParcel): number {
  return input.plantings.length + (input.earlier?.length ?? 0);
}

/** Flags, stage ET and stage days of a parcel, whose plantings begin at `planting` in the output. */
function restOf(output: SeasonOutput, parcel: number, dayCount: number, planting: number, count: number): Uint8Array[] {
  const stageEt = output.stageEt.slice(8 * planting, 8 * (planting + count));
  const stageDays = output.stageDays.slice(5 * planting, 5 * (planting + count));
  return [packFlags(output.flags, parcel * dayCount, dayCount), new Uint8Array(stageEt.buffer), new Uint8Array(stageDays.buffer)];
}

/** A parcel's row as JSON: its days, flags, stage ET and stage days lie one after another from `at` on. The text of its input is not made again. */
function rowText(
  { code, turnout, reach, input, json }: SliceParcel,
  stored: { position: number; at: number; lengths: number[]; closing: unknown },
): string {
  const { position, at, closing } = stored;
  const [daily, flags, et, days] = stored.lengths;
  const crops = [...new Set(input.plantings.map(({ crop }) => crop))];
  const { method, soil, area } = input;
  const told = JSON.stringify({ position, code, turnout, reach, crops, method, soil, area, closing, at, daily, flags, et, days });
  return `${told.slice(0, -1)},"input":${json}}`;
}
