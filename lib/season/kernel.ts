/**
 * All parcels through a season: parcel outer, strip, day inner. Pure: one input gives one output, to the last bit, whatever else runs.
 */
import { checkParcel } from './check.ts';
import { storedValue } from './daily-store.ts';
import { type StripDay, type StripGround, stepDay } from './day.ts';
import { MARK, type PackedSeason, packSeason } from './pack.ts';
import { placeWeather } from './parcel-weather.ts';
import { drawCurve, groundOf, layStrips, type StripPlan } from './strip-curve.ts';
import {
  DAILY_VARIABLE_COUNT,
  DAILY_VARIABLES,
  MISSING_STORED,
  type ParcelInput,
  type SeasonInput,
  type SeasonOutput,
  type Trace,
} from './types.ts';

/** Someone who wants the working of one day; `strip` hears about each strip of the parcel before its days are stepped. */
interface Listener {
  readonly day: number;
  strip(plan: StripPlan, index: number, count: number): Trace;
}

/**
 * Runs the season of every parcel.
 *
 * Weather is interpolated to the parcel, reference ET computed there, and each strip of the parcel stepped day by day (`stepDay`). Depths are over the
 * whole parcel: strips weighted by share. Depletion, TAW, RAW and Ks are means over the strips that carry a planting in the run (over the bare
 * strip where there is none); Kcb is over all.
 *
 * Missing: no NaN leaves; a parcel-day without weather is refused.
 *
 * @param input see `SeasonInput`
 * @param options `keep: 'double'` also returns the daily variables before rounding to storage
 * @returns daily [parcel × variable × day]
 * @throws {RangeViolation} naming parcel and date for a value outside its limits or a day without weather
 * @throws {Refused} for a crop on another reference surface than the run
 * @throws {ShapeError} when arrays do not agree
 * Source: FAO-56 chapters 3, 7 and 8.
 */
export function runSeason(input: SeasonInput, options: { readonly keep?: 'stored' | 'double' } = {}): SeasonOutput {
  const season = packSeason(input);
  const days = input.dayCount;
  const size = DAILY_VARIABLE_COUNT * days;
  const daily = new Uint16Array(input.parcels.length * size);
  const flags = new Uint32Array(input.parcels.length * days);
  const exact = options.keep === 'double' ? new Float64Array(input.parcels.length * size) : undefined;
  let worst = 0;
  for (let p = 0; p < input.parcels.length; p++) {
    worst = Math.max(worst, walkParcel(season, input.parcels[p], null));
    storeDaily(season.daily, daily, p * size, days);
    flags.set(season.flags, p * days);
    exact?.set(season.daily, p * size);
  }
  return {
    daily,
    maxBalanceResidual: worst,
    flags,
    dailyExact: exact,
    stageEt: new Float64Array(0),
    stageDays: new Int32Array(0),
    closing: [],
  };
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

/**
 * Takes one parcel through the season: fills `season.daily` [variable × day] and `season.flags` [day].
 *
 * @param listener hears the working of its day; null in a batch run
 * @returns largest absolute balance residual of its strips and days [mm]
 * @throws as `runSeason`
 */
export function walkParcel(season: PackedSeason, parcel: ParcelInput, listener: Listener | null): number {
  checkParcel(parcel, season.input.sites.length, season.checked);
  const strips = layStrips(season, parcel);
  placeWeather(season, parcel);
  layParcelRows(season);
  let planted = 0;
  for (const strip of strips) if (strip.planted.length > 0) planted += strip.share;
  const ground = groundOf(parcel);
  let worst = 0;
  for (let k = 0; k < strips.length; k++) {
    const plan = strips[k];
    ground.deepestRoot = drawCurve(season, parcel, plan);
    const trace = listener === null ? null : listener.strip(plan, k, strips.length);
    const state = plan.planted.length > 0 ? plan.share / planted : planted > 0 ? 0 : plan.share;
    openStrip(season, ground);
    const shares = { share: plan.share, state, gross: plan.share / parcel.method.efficiency };
    worst = Math.max(worst, walkStrip(season, ground, shares, listener === null ? null : { day: listener.day, trace }));
  }
  return worst;
}

/** How a strip counts in its parcel: by area, in the means of the soil's state, and for water as applied (area ÷ efficiency). */
interface Shares {
  readonly share: number;
  readonly state: number;
  readonly gross: number;
}

/** First morning: both stores and the surface layer at the settings' depletion, the surface wet all over when last wetted. */
function openStrip(season: PackedSeason, ground: StripGround): void {
  const { state, curve } = season;
  const { initialDepletion } = season.input.settings;
  const perMetre = 1000 * (ground.fieldCapacity - ground.wiltingPoint);
  state.rootDepth = curve.rootDepth[0];
  state.depletion = initialDepletion * perMetre * state.rootDepth;
  state.belowDepletion = initialDepletion * perMetre * (ground.deepestRoot - state.rootDepth);
  state.surfaceDepletion = initialDepletion * ground.totalEvaporable;
  state.wettedFraction = 1;
  state.exposedWetted = 1;
  state.depletionFraction = curve.tableFraction[0];
  state.irrigating = false;
}

function walkStrip(season: PackedSeason, ground: StripGround, shares: Shares, heard: { day: number; trace: Trace | null } | null): number {
  const { weather, curve, state, day, daily } = season;
  const { dayCount: days, settings } = season.input;
  const heardDay = heard === null ? -1 : heard.day;
  let worst = 0;
  for (let d = 0; d < days; d++) {
    const mark = curve.mark[d];
    day.referenceEt = weather.referenceEt[d];
    day.climate = weather.climate[d];
    day.precipitation = weather.precipitation[d];
    day.surfaceRunoff = weather.surfaceRunoff[d];
    day.basal = curve.basal[d];
    day.height = curve.height[d];
    day.heightFactor = curve.heightFactor[d];
    day.rootDepth = curve.rootDepth[d];
    day.scheduleDepth = curve.scheduleDepth[d];
    day.tableFraction = curve.tableFraction[d];
    day.planted = (mark & MARK.planted) !== 0;
    day.firstDay = (mark & MARK.firstDay) !== 0;
    day.mayIrrigate = settings.irrigate && (mark & MARK.mayIrrigate) !== 0;
    stepDay(ground, state, day, d === heardDay && heard !== null ? heard.trace : null);
    addDay(daily, day, shares, d, days);
    worst = Math.max(worst, Math.abs(day.residual));
  }
  return worst;
}

/** Rows that are the same on every strip. */
function layParcelRows(season: PackedSeason): void {
  const { weather, daily } = season;
  const days = season.input.dayCount;
  daily.fill(0);
  daily.set(weather.referenceEt, 0);
  daily.set(weather.precipitation, 4 * days);
  daily.set(weather.surfaceRunoff, 5 * days);
}

/** Adds a strip's day to the parcel's rows, in the order of DAILY_VARIABLES. */
function addDay(daily: Float64Array, day: StripDay, shares: Shares, d: number, days: number): void {
  const { share, state } = shares;
  daily[days + d] += share * day.cropEt;
  daily[2 * days + d] += share * (day.transpiration + day.evaporation);
  daily[3 * days + d] += share * day.evaporation;
  daily[6 * days + d] += share * day.effectivePrecipitation;
  daily[9 * days + d] += share * day.deepPercolation;
  daily[10 * days + d] += state * day.closingDepletion;
  daily[11 * days + d] += state * day.available;
  daily[12 * days + d] += state * day.readilyAvailable;
  daily[13 * days + d] += share * day.basal;
  daily[14 * days + d] += state * day.stress;
  daily[15 * days + d] += share * (day.closingDepletion + day.closingBelow);
  if (day.irrigation === 0) return;
  daily[7 * days + d] += share * day.irrigation;
  daily[8 * days + d] += shares.gross * day.irrigation;
}
