/** Soil water on the first morning of a run: measured at the parcel, or as the season before left it. */
import type { Tx } from '../../db/connect.ts';
import type { MeasurementRow } from '../../db/queries/field-measurements.ts';
import { findRunBefore, listClosings } from '../../db/queries/run-inputs.ts';
import { addDays, dayNumber } from '../base/civil-date.ts';
import { Refused } from '../base/errors.ts';
import { profileFromContents, profileFromDepletion } from '../season/measured-water.ts';
import type { DepletionProfile, InitialWater, Soil } from '../season/types.ts';

/** A measurement counts for the first morning when it was made on it or in so many days before. The product's own limit. */
const MEASURED_WITHIN = 14;
/** Most days between two seasons that are stepped to carry the soil over. The product's own limit: the longest season. */
const LONGEST_GAP = 400;
/** Root zone of a depletion that names no depth, where nothing is planted [m]. FAO-56 Table 22: the middle of field crops. */
const USUAL_ROOT_ZONE = 1;

/** First day whose measurements can tell the first morning. */
export function measuredFrom(startDate: string): string {
  return addDays(startDate, -MEASURED_WITHIN);
}

/**
 * The profile of a parcel from its measurements: those of the latest day that has any. Water contents by depth go before a depletion of the root zone. A
 * depletion that names no depth is of the deepest root of the first planting, or of 1 m where nothing is planted, and never reaches past the root limit.
 *
 * @param rows of one parcel, by day; other quantities are passed over
 * @param rootDepth deepest root of the first planting [m]; NaN where nothing is planted
 * @returns null where nothing was measured
 */
export function measuredWater(rows: readonly MeasurementRow[], soil: Soil, rootDepth: number): InitialWater | null {
  const water = rows.filter(({ quantity }) => quantity === 'water_content_m3_m3' || quantity === 'root_zone_depletion_mm');
  const day = water.at(-1)?.date;
  if (day === undefined) return null;
  const latest = water.filter(({ date }) => date === day);
  const contents = latest
    .filter(({ quantity, depth }) => quantity === 'water_content_m3_m3' && depth > 0)
    .map(({ depth, value }) => ({ bottom: depth, content: value }))
    .sort((a, b) => a.bottom - b.bottom);
  if (contents.length > 0) return { profile: profileFromContents(soil, contents) };
  const depletion = latest.find(({ quantity }) => quantity === 'root_zone_depletion_mm');
  return depletion ? { profile: depletionProfile(depletion, soil, rootDepth) } : null;
}

function depletionProfile({ depth, value }: MeasurementRow, soil: Soil, rootDepth: number): DepletionProfile {
  const roots = Number.isNaN(rootDepth) ? USUAL_ROOT_ZONE : rootDepth;
  const limited = Number.isNaN(soil.rootLimit) ? roots : Math.min(roots, soil.rootLimit);
  return profileFromDepletion(soil, value, depth > 0 ? depth : limited);
}

/** The run that a season's soil water is carried over from. */
export interface CarriedFrom {
  readonly runId: string;
  readonly season: string;
  readonly endDate: string;
  /** true: inputs of that run have changed since it was computed */
  readonly stale: boolean;
  /** days between the two seasons */
  readonly gap: number;
}

/**
 * The standing run of the latest season that ends before this one begins.
 *
 * @throws Refused when there is none, or too long a time lies between
 */
export async function findCarriedFrom(tx: Tx, districtId: string, startDate: string): Promise<CarriedFrom> {
  const before = await findRunBefore(tx, districtId, startDate);
  if (!before) {
    throw new Refused(
      `Soil water is to be carried over, but no season that ends before ${startDate} has a run. Run the season before first, or let the soil begin otherwise: as a fraction, measured, or spun up.`,
    );
  }
  const gap = dayNumber(startDate) - dayNumber(before.endDate) - 1;
  if (gap > LONGEST_GAP) {
    throw new Refused(
      `Soil water is to be carried over from season "${before.seasonCode}", which ended on ${before.endDate}, ${gap} days before this one; at most ${LONGEST_GAP} days may lie between. Run the season between, or spin the soil up.`,
    );
  }
  return { runId: before.runId, season: before.seasonCode, endDate: before.endDate, stale: before.staleSince !== null, gap };
}

/** Closing water of some parcels of a run, by code. */
export async function closingsOf(
  tx: Tx,
  districtId: string,
  from: CarriedFrom,
  codes: readonly string[],
): Promise<Map<string, InitialWater>> {
  const rows = await listClosings(tx, districtId, from.runId, codes);
  return new Map(rows.map(({ parcelCode, closing }) => [parcelCode, closing as InitialWater]));
}

/** @throws Refused when a run is to be carried on that kept no soil water of any parcel */
export function requireCarried(from: CarriedFrom, carried: number): void {
  if (carried > 0) return;
  throw new Refused(
    `Soil water is to be carried over from season "${from.season}", whose run kept none of any parcel of today: it is of an earlier version, or its parcels are others. Run that season again first.`,
  );
}
