/**
 * How often the bare soil of an initial stage is wetted: by the rain of the run, and by irrigation as its rule will have it.
 */

import { scheduleDepth } from '../crop/root-zone.ts';
import { type InitialStage, initialFromWettings, rainEvents, type Wettings } from '../crop/single-coefficient.ts';
import { MARK, type PackedSeason } from './pack.ts';
import { availableTo, profileOf } from './soil-profile.ts';
import type { PlantedCycles } from './stage-days.ts';
import type { ParcelInput } from './types.ts';

/**
 * The initial stage of a cycle as far as it lies in the run; null where no day of it does.
 *
 * Irrigation is not stepped yet when the curve is drawn. Recorded deliveries, germination and rules that go by days are counted as they will be; a
 * rule that goes by depletion is taken to give, in applications of its own depth, what the table's Kc asks beyond rain.
 *
 * Source: FAO-56 chapter 6, Kc ini from the interval between wettings; the count of irrigations by depletion is a choice of ours.
 */
export function initialStageOf(season: PackedSeason, parcel: ParcelInput, planted: PlantedCycles, k: number): InitialStage | null {
  const { weather, input } = season;
  const { start, end, lengths } = planted.cycles[k];
  const from = Math.max(0, start);
  const to = Math.min(input.dayCount, end, start + lengths.initial);
  if (to <= from) return null;
  let referenceEt = 0;
  for (let d = from; d < to; d++) referenceEt += weather.referenceEt[d];
  const rain = rainEvents(weather.precipitation, weather.referenceEt, from, to);
  const asked = Math.max(0, (planted.planting.crop.basalInitial + 0.15) * referenceEt - rain.depth);
  return {
    days: to - from,
    referenceEt: referenceEt / (to - from),
    rain,
    irrigation: input.settings.irrigate ? irrigations(season, parcel, planted, { from, to, asked }) : { count: 0, depth: 0 },
    wettedFraction: parcel.method.wettedFraction,
    texture: parcel.soil.texture === 'coarse' ? 'coarse' : 'medium-fine',
  };
}

interface Span {
  readonly from: number;
  readonly to: number;
  /** water the stage asks beyond rain [mm] */
  readonly asked: number;
}

function irrigations(season: PackedSeason, parcel: ParcelInput, planted: PlantedCycles, span: Span): Wettings {
  const { water, recordedUntil } = season.input.settings;
  const recorded = water === 'recorded' || (water === 'recorded-then-rule' && (recordedUntil ?? 0) >= span.to);
  if (recorded) return delivered(parcel, span);
  const given = germinations(planted, span);
  const ruled = byRule(parcel, planted, span);
  return { count: given.count + ruled.count, depth: given.depth + ruled.depth };
}

function delivered({ deliveries, method, efficiency }: ParcelInput, { from, to }: Span): Wettings {
  let count = 0;
  let depth = 0;
  for (const [k, day] of (deliveries?.days ?? []).entries()) {
    if (day < from || day >= to) continue;
    count++;
    depth += (deliveries?.values[k] ?? 0) * (efficiency ?? method.efficiency);
  }
  return { count, depth };
}

function germinations({ planting, cycles }: PlantedCycles, { from, to }: Span): Wettings {
  const within = (planting.germination ?? []).filter(({ daysAfter }) => {
    const day = cycles[0].start + daysAfter;
    return day >= from && day < to;
  });
  return { count: within.length, depth: within.reduce((sum, { depth }) => sum + depth, 0) };
}

function byRule(parcel: ParcelInput, { planting }: PlantedCycles, { from, to, asked }: Span): Wettings {
  const rule = planting.irrigation ?? { kind: 'depletion' as const };
  if (rule.kind === 'none') return { count: 0, depth: 0 };
  if (rule.kind === 'interval' || rule.kind === 'daily') {
    const count = Math.ceil((to - from) / (rule.kind === 'daily' ? 1 : rule.days));
    return { count, depth: asked };
  }
  const depth =
    rule.kind === 'fixed-depth' ? rule.depth : depthOfRefill(parcel, planting.crop, triggerOf(rule, parcel.method.triggerFraction));
  const count = Math.floor(asked / depth);
  return { count, depth: count * depth };
}

function triggerOf(
  rule: { kind: 'depletion'; trigger?: number } | { kind: 'deficit'; stages: { initial: { trigger: number } } },
  method: number,
): number {
  return rule.kind === 'deficit' ? rule.stages.initial.trigger : (rule.trigger ?? method);
}

/** Net depth of an application that refills the soil of the seedling: trigger × p × what the scheduling depth holds, at most a day's depth of the system. */
function depthOfRefill({ soil, method }: ParcelInput, crop: PlantedCycles['planting']['crop'], trigger: number): number {
  const held = availableTo(profileOf(soil), scheduleDepth(crop.rootDepthMin, crop.rootDepthMax));
  return Math.min(method.maximumDailyDepth, trigger * crop.depletionFraction * held);
}

/** Days of bare ground that share one Kc. Choice of ours: about a month, as the charts of FAO-56 are read. */
const BARE_DAYS = 30;

/**
 * Kc of bare ground between crops, for runs on single coefficients: from the rain of the days around, as in an initial stage.
 *
 * Days are taken in blocks of 30 of the run, each with the bare days in it. Puddled ground under water has the Kc of the crop's first day.
 *
 * Source: FAO-56 Annex 7; chapter 11 (bare soil outside the growing season, recalled).
 */
export function drawBareGround(season: PackedSeason, parcel: ParcelInput): void {
  const { curve } = season;
  const days = curve.basal.length;
  for (let d = 0; d < days; ) {
    if (curve.basal[d] !== 0) d++;
    else if (curve.planting[d] >= 0) curve.basal[d++] = curve.basal[firstPlantedDay(curve.mark, d)] ?? 0;
    else {
      const end = Math.min(days, (Math.floor(d / BARE_DAYS) + 1) * BARE_DAYS);
      let to = d + 1;
      while (to < end && curve.basal[to] === 0 && curve.planting[to] < 0) to++;
      curve.basal.fill(initialFromWettings(bareStage(season, parcel, d, to)), d, to);
      d = to;
    }
  }
}

function firstPlantedDay(mark: Uint8Array, from: number): number {
  let d = from;
  while (d < mark.length && (mark[d] & MARK.planted) === 0) d++;
  return d;
}

/** The bare days that share the Kc of a day, once drawn; null where the day is not bare. */
export function bareStageOf(season: PackedSeason, parcel: ParcelInput, day: number): InitialStage | null {
  const { basal, planting } = season.curve;
  if (planting[day] >= 0) return null;
  const block = Math.floor(day / BARE_DAYS) * BARE_DAYS;
  const same = (d: number) => d >= block && d < Math.min(basal.length, block + BARE_DAYS) && planting[d] < 0 && basal[d] === basal[day];
  let from = day;
  while (same(from - 1)) from--;
  let to = day + 1;
  while (same(to)) to++;
  return bareStage(season, parcel, from, to);
}

function bareStage({ weather }: PackedSeason, { soil }: ParcelInput, from: number, to: number): InitialStage {
  let referenceEt = 0;
  for (let d = from; d < to; d++) referenceEt += weather.referenceEt[d];
  return {
    days: to - from,
    referenceEt: referenceEt / (to - from),
    rain: rainEvents(weather.precipitation, weather.referenceEt, from, to),
    irrigation: { count: 0, depth: 0 },
    wettedFraction: 1,
    texture: soil.texture === 'coarse' ? 'coarse' : 'medium-fine',
  };
}
