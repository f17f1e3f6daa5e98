/**
 * All parcels through a season: parcel outer, strip, day inner. Pure: one input gives one output, to the last bit, whatever else runs.
 */
import { checkParcel } from './check.ts';
import { storedValue } from './daily-store.ts';
import type { DayRecord } from './day-record.ts';
import { openingSnow, placeGroundWater } from './ground-water.ts';
import { closingWater, openState } from './initial-water.ts';
import { keptDays, type PackedSeason, packSeason } from './pack.ts';
import { placeAtmosphere } from './parcel-weather.ts';
import { sameSky } from './same-sky.ts';
import { drawCurve, type ParcelPlan, planParcel, type StripPlan } from './strip-curve.ts';
import { groundOf, type StripGround } from './strip-ground.ts';
import {
  DAILY_VARIABLE_COUNT,
  DAILY_VARIABLES,
  type InitialWater,
  MISSING_STORED,
  type ParcelInput,
  type SeasonInput,
  type SeasonOutput,
} from './types.ts';
import { walkStrip } from './walk.ts';

/** Someone who wants the working of one day; `strip` hears about each strip of the parcel before its days are stepped. */
export interface Listener {
  /** day stepped, lead days counted */
  readonly day: number;
  strip(plan: StripPlan, index: number, count: number, ground: StripGround): (record: DayRecord) => void;
}

/** Rows of a whole output, and where a parcel's begin. */
interface StoredRows {
  readonly into: Uint16Array;
  readonly at: number;
}

/**
 * Runs the season of every parcel.
 *
 * Weather is interpolated to the parcel, reference ET computed there, and each strip of the parcel stepped day by day (`walkStrip`). Depths are over the
 * whole parcel: strips weighted by share. Depletion, TAW, RAW and Ks are means over the strips that carry a planting in the run (over the bare
 * strip where there is none); Kcb is over all. Lead days are stepped, and nothing of them is kept.
 *
 * Missing: no NaN leaves; a parcel-day without weather is refused.
 *
 * @param input see `SeasonInput`
 * @param options `keep: 'double'` also returns the daily variables before rounding to storage
 * @returns daily [parcel × variable × day kept]
 * @throws {RangeViolation} naming parcel and date for a value outside its limits or a day without weather
 * @throws {ShapeError} when arrays do not agree
 * Source: FAO-56 chapters 3, 7 and 8.
 */
export function runSeason(input: SeasonInput, options: { readonly keep?: 'stored' | 'double' } = {}): SeasonOutput {
  const season = packSeason(input);
  const days = keptDays(input);
  const lead = input.dayCount - days;
  const size = DAILY_VARIABLE_COUNT * days;
  const plantings = input.parcels.reduce((count, parcel) => count + parcel.plantings.length, 0);
  const daily = new Uint16Array(input.parcels.length * size);
  const flags = new Uint32Array(input.parcels.length * days);
  const exact = options.keep === 'double' ? new Float64Array(input.parcels.length * size) : undefined;
  const stageEt = new Float64Array(8 * plantings);
  const stageDays = new Int32Array(5 * plantings);
  const closing: InitialWater[] = [];
  let worst = 0;
  let first = 0;
  for (let p = 0; p < input.parcels.length; p++) {
    const parcel = input.parcels[p];
    const plan = placeParcel(season, parcel);
    const whole = exact === undefined && plan.strips.length === 1;
    worst = Math.max(worst, walkPlaced(season, parcel, plan, null, whole ? { into: daily, at: p * size } : null));
    if (!whole) storeDaily(season.daily, daily, p * size, days);
    for (let d = 0, i = p * days; d < days; d++, i++) flags[i] = season.flags[lead + d];
    exact?.set(season.daily, p * size);
    layStages(season, plan, first, stageEt, stageDays);
    closing.push(closingWater(parcel, input.settings, season.closing, season.weather.snowWater[input.dayCount - 1]));
    first += parcel.plantings.length;
  }
  return { daily, maxBalanceResidual: worst, flags, dailyExact: exact, stageEt, stageDays, closing };
}

/**
 * Takes one parcel through the season: fills `season.daily` [variable × day kept], `season.flags` [day], `season.stageEt` and `season.closing`.
 *
 * @param listener hears the working of its day; null in a batch run
 * @returns largest absolute balance residual of its strips and days [mm]
 * @throws as `runSeason`
 */
export function walkParcel(season: PackedSeason, parcel: ParcelInput, listener: Listener | null): number {
  return walkPlaced(season, parcel, placeParcel(season, parcel), listener, null);
}

/** Checks a parcel, puts its weather in place (that of the parcel before where it is the same) and lays its plantings on the time axis. */
export function placeParcel(season: PackedSeason, parcel: ParcelInput): ParcelPlan {
  checkParcel(parcel, season.input.sites.length, season.checked);
  if (season.sky === null || !sameSky(season.sky, parcel)) {
    season.sky = null;
    placeAtmosphere(season, parcel);
    season.sky = parcel;
  }
  placeGroundWater(season, parcel);
  return planParcel(season, parcel);
}

function walkPlaced(
  season: PackedSeason,
  parcel: ParcelInput,
  plan: ParcelPlan,
  listener: Listener | null,
  stored: StoredRows | null,
): number {
  const { strips } = plan;
  const { walk } = season;
  layParcelRows(season, stored);
  season.stageEt.fill(0);
  season.closing.length = 0;
  walk.ground = groundOf(parcel, season.input.settings);
  walk.stored = stored === null ? null : stored.into;
  walk.storedAt = stored === null ? 0 : stored.at;
  walk.daily = stored === null ? season.daily : null;
  walk.heardDay = listener === null ? -1 : listener.day;
  let planted = 0;
  for (const strip of strips) if (strip.planted.length > 0) planted += strip.share;
  let worst = 0;
  for (let k = 0; k < strips.length; k++) {
    const strip = strips[k];
    openStrip(season, parcel, strip, strips, planted);
    walk.hear = listener === null ? null : listener.strip(strip, k, strips.length, walk.ground);
    worst = Math.max(worst, walkStrip(walk));
    closeStrip(season, strip);
  }
  return worst;
}

/** Draws a strip's curves and lays its first morning in `season.walk`. */
export function openStrip(
  season: PackedSeason,
  parcel: ParcelInput,
  strip: StripPlan,
  strips: readonly StripPlan[],
  planted: number,
): void {
  const { walk, curve, input } = season;
  const deepestRoot = drawCurve(season, parcel, strip, strips);
  const opening = openState(parcel, input.settings, { rootDepth: curve.rootDepth[0], deepestRoot });
  walk.deepestRoot = deepestRoot;
  walk.depletion = opening.rootDepletion;
  walk.below = opening.belowDepletion;
  walk.surface = opening.surfaceDepletion;
  walk.snow = input.settings.snow ? openingSnow(parcel) : 0;
  walk.share = strip.share;
  walk.stateShare = strip.planted.length > 0 ? strip.share / planted : planted > 0 ? 0 : strip.share;
  for (const { planting, index } of strip.planted) season.walk.plantingShare[index] = strip.share / planting.areaShare;
}

function closeStrip({ walk, curve, closing, input }: PackedSeason, { share }: StripPlan): void {
  closing.push({
    share,
    rootDepth: curve.rootDepth[input.dayCount - 1],
    deepestRoot: walk.deepestRoot,
    rootDepletion: walk.depletion,
    belowDepletion: walk.below,
    surfaceDepletion: walk.surface,
    percolation: walk.percolated,
  });
}

/** Rows that are the same on every strip. */
function layParcelRows(season: PackedSeason, stored: StoredRows | null): void {
  const { weather, daily, walk } = season;
  const { lead } = walk;
  const days = walk.days - lead;
  if (stored !== null) {
    storeRow(weather.referenceEt, lead, stored.into, stored.at, days);
    storeRow(weather.precipitation, lead, stored.into, stored.at + 4 * days, days);
    if (season.input.settings.snow) storeRow(weather.snowWater, lead, stored.into, stored.at + 18 * days, days);
    return;
  }
  daily.fill(0);
  for (let d = 0; d < days; d++) {
    daily[d] = weather.referenceEt[lead + d];
    daily[4 * days + d] = weather.precipitation[lead + d];
    daily[18 * days + d] = weather.snowWater[lead + d];
  }
}

/** Rounds a depth of every day to storage, as `storedValue` does. */
function storeRow(from: Float64Array, lead: number, into: Uint16Array, at: number, days: number): void {
  for (let d = 0; d < days; d++) into[at + d] = Math.min(MISSING_STORED - 1, from[lead + d] * 100 + 0.5);
}

/** Rounds the parcel's day rows to storage: `storedValue` of every one, written so that it costs little. */
function storeDaily(from: Float64Array, into: Uint16Array, at: number, days: number): void {
  const beyond = MISSING_STORED;
  for (let v = 0, i = 0; v < DAILY_VARIABLE_COUNT; v++) {
    const { scale } = DAILY_VARIABLES[v];
    for (const end = i + days; i < end; i++) {
      const scaled = from[i] * scale + 0.5;
      if (scaled >= 0 && scaled < beyond) into[at + i] = scaled;
      else into[at + i] = storedValue(from[i], scale);
    }
  }
}

/** Stage sums and stage days of a parcel's plantings, from the `first` planting of the output on. */
function layStages(season: PackedSeason, plan: ParcelPlan, first: number, stageEt: Float64Array, stageDays: Int32Array): void {
  const { lead } = season.walk;
  for (let k = 0; k < plan.plantings.length; k++) {
    for (let i = 0; i < 8; i++) stageEt[8 * (first + k) + i] = season.stageEt[8 * k + i];
    const days = plan.plantings[k].stageDays;
    for (let i = 0; i < 5; i++) stageDays[5 * (first + k) + i] = days[i] - lead;
  }
}
