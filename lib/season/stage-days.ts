/**
 * A planting on the run's time axis: when it starts, its cycles and their stages, as dates, thermal time and frost settle them.
 */
import { dayNumber } from '../base/civil-date.ts';
import { type Cycle, cyclesOf, type StageLengths } from '../crop/curve.ts';
import { killingFrostDay } from '../crop/killing-frost.ts';
import { type Flooding, floodingOf } from '../crop/rice.ts';
import { type FoundStart, findStart } from '../crop/start-rule.ts';
import { sumDegreeDays, thermalLengths } from '../crop/thermal-time.ts';
import type { PackedSeason } from './pack.ts';
import type { CropCalendar, Planting, ThermalStages } from './types.ts';

/** A planting on the run's time axis. Days are offsets from the first day of the run. */
export interface PlantedCycles {
  readonly planting: Planting;
  /** place in the parcel's list of plantings */
  readonly index: number;
  /** empty when the crop never starts: harvested before its start rule is met */
  readonly cycles: readonly Cycle[];
  /** first day on which no irrigation starts or goes on; Infinity for none */
  readonly lastIrrigation: number;
  /** first day of each stage of the first cycle, and the first day after the last cycle; −1 throughout when the crop never starts */
  readonly stageDays: readonly [number, number, number, number, number];
  /** day of the planting date: the earliest that a start rule allows, and where dormancy begins */
  readonly earliest: number;
  /** how a start rule was met; null without one */
  readonly start: FoundStart | null;
  /** first day that a killing frost took from the crop; Infinity for none */
  readonly frost: number;
  /** days on which a perennial is dormant: before its start and after its end, to the harvest or the end of the run; null for a crop without dormancy */
  readonly dormantTo: number | null;
  readonly flooding: Flooding | null;
}

/**
 * A planting that makes way for the next one on its land: its cycles end on that day at the latest.
 *
 * @param day first day of the other planting
 */
export function cutShort(planted: PlantedCycles, day: number): PlantedCycles {
  const cycles = planted.cycles.filter(({ start }) => start < day).map((cycle) => (cycle.end <= day ? cycle : { ...cycle, end: day }));
  const { paddy } = planted.planting.crop;
  return {
    ...planted,
    cycles,
    stageDays: stageDaysOf(cycles),
    dormantTo: planted.dormantTo === null ? null : Math.min(planted.dormantTo, day),
    flooding: paddy && cycles.length > 0 ? floodingOf(cycles[0].start, cycles[cycles.length - 1].end, paddy) : null,
  };
}

/** Whether the weather decides any of a calendar's days, so that its cycles differ from parcel to parcel. */
export function followsWeather({ thermal, laterThermal, start, killingFrost }: CropCalendar): boolean {
  return thermal !== undefined || laterThermal !== undefined || start !== undefined || killingFrost !== undefined;
}

/**
 * Lays one planting on the time axis. A calendar that follows the weather reads `season.weather`, which must be the parcel's own.
 *
 * The harvest date, where there is one, ends the crop; a killing frost ends it earlier. Without a harvest date an annual crop ends with its stages, a
 * standing crop that waits for a killing frost with the frost or the run.
 *
 * Source: FAO-56 chapter 6, growing seasons and forage.
 */
export function plantedCycles(season: PackedSeason, planting: Planting, index: number): PlantedCycles {
  const { crop, calendar } = planting;
  const runEnd = season.input.dayCount;
  const earliest = dayNumber(planting.plantingDate) - season.firstDay;
  const given = planting.harvestDate === null ? Number.POSITIVE_INFINITY : dayNumber(planting.harvestDate) - season.firstDay;
  const found = foundStart(season, calendar, earliest);
  const start = found === null ? earliest : Math.max(earliest, found.day + (calendar.start?.offset ?? 0));
  const frost = frostDay(season, calendar, start);
  const standing = crop.type !== 'annual';
  const until = standing && calendar.killingFrost ? Math.min(given, frost, runEnd) : Math.min(given, frost);
  const cuts = planting.cutDates.map((date) => dayNumber(date) - season.firstDay);
  const harvest = Number.isFinite(frost) ? endOfAnnual(season, planting, start, until) : until;
  const cycles = harvest <= start ? [] : cyclesTo(season, planting, { start, until: harvest, cuts });
  const end = cycles.length > 0 ? cycles[cycles.length - 1].end : start;
  const waits = standing && (calendar.start !== undefined || calendar.killingFrost !== undefined);
  return {
    planting,
    index,
    cycles,
    lastIrrigation: lastIrrigationOf(planting, cycles, cuts.length > 0),
    stageDays: stageDaysOf(cycles),
    earliest,
    start: found,
    frost: frost <= end ? frost : Number.POSITIVE_INFINITY,
    dormantTo: waits ? Math.min(given, runEnd) : null,
    flooding: crop.paddy && cycles.length > 0 ? floodingOf(cycles[0].start, end, crop.paddy) : null,
  };
}

function cyclesTo(
  season: PackedSeason,
  { crop, calendar }: Planting,
  { start, until, cuts }: { start: number; until: number; cuts: readonly number[] },
): Cycle[] {
  return cyclesOf({
    start,
    harvest: until,
    lengths: calendar,
    later: calendar.laterCycle,
    cuts,
    repeats: crop.type === 'forage-cut',
    runEnd: season.input.dayCount,
    lengthsOf: calendar.thermal || calendar.laterThermal ? (cycle, first) => lengthsByWeather(season, calendar, cycle, first) : undefined,
  });
}

/** A frost does not keep an annual crop standing past its stages: the earlier of the two ends it, unless a harvest date does. */
function endOfAnnual(season: PackedSeason, planting: Planting, start: number, until: number): number {
  const { crop, harvestDate, cutDates } = planting;
  if (crop.type !== 'annual' || harvestDate !== null || cutDates.length > 0) return until;
  const [cycle] = cyclesTo(season, planting, { start, until: Number.POSITIVE_INFINITY, cuts: [] });
  return Math.min(until, cycle.end);
}

function foundStart(season: PackedSeason, calendar: CropCalendar, earliest: number): FoundStart | null {
  return calendar.start ? findStart(calendar.start, earliest, calendar.start.latest, season.weather) : null;
}

function frostDay(season: PackedSeason, { killingFrost }: CropCalendar, start: number): number {
  return killingFrost ? killingFrostDay(season.weather.airTemperatureMin, start, killingFrost) : Number.POSITIVE_INFINITY;
}

/** Stages of a cycle by thermal time; a kind of cycle without sums of its own goes by its days, a later one else by the first one's sums. */
function lengthsByWeather(season: PackedSeason, calendar: CropCalendar, cycle: number, start: number): StageLengths {
  const days: StageLengths = cycle === 0 ? calendar : (calendar.laterCycle ?? calendar);
  const stages = stagesOfCycle(calendar, cycle);
  return stages === undefined ? days : thermalLengths(start, stages, days, degreeDaySums(season, stages));
}

/** Sums of the stages of a cycle; undefined where it goes by days. */
export function stagesOfCycle(calendar: CropCalendar, cycle: number): ThermalStages | undefined {
  if (cycle === 0) return calendar.thermal;
  return calendar.laterThermal ?? (calendar.laterCycle ? undefined : calendar.thermal);
}

const scratch = new WeakMap<PackedSeason, Float64Array>();

/** Running sums of the parcel's degree days; overwritten by the next call for the same season. */
export function degreeDaySums(season: PackedSeason, limits: { readonly base: number; readonly ceiling: number }): Float64Array {
  let into = scratch.get(season);
  if (into === undefined) {
    into = new Float64Array(season.input.dayCount + 1);
    scratch.set(season, into);
  }
  return sumDegreeDays(season.weather.airTemperatureMax, season.weather.airTemperatureMin, limits, into);
}

function lastIrrigationOf({ crop }: Planting, cycles: readonly Cycle[], cut: boolean): number {
  if (crop.type === 'forage-cut' || cut || crop.lastIrrigation >= 1 || cycles.length === 0) return Number.POSITIVE_INFINITY;
  const [{ start, lengths }] = cycles;
  return start + lengths.initial + lengths.development + lengths.mid + crop.lastIrrigation * lengths.late;
}

function stageDaysOf(cycles: readonly Cycle[]): PlantedCycles['stageDays'] {
  if (cycles.length === 0) return [-1, -1, -1, -1, -1];
  const { start, end, lengths } = cycles[0];
  const within = (day: number) => Math.min(end, day);
  const development = start + lengths.initial;
  const mid = development + lengths.development;
  return [start, within(development), within(mid), within(mid + lengths.mid), cycles[cycles.length - 1].end];
}
