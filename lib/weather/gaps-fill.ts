/**
 * Gaps of daily weather filled by a stated order, each filled value with its method.
 *
 *   1. a neighbouring site of the same record, by regression within its published limits (FAO-56 Annex 4), best r² first;
 *   2. the nearest site or cell of another source, less the mean difference of the common days (temperature, dew point) or times their ratio;
 *   3. the published estimates of `lib/energy/site-day` (humidity, radiation); for temperature a straight line over at most five days, which is
 *      interpolation in time and so comes after what was measured nearby;
 *   4. the normal of the day from the other years of the site's own record: temperature, and wind. FAO-56 chapter 3 keeps its 2 m/s for places without any
 *      record of wind, so a site with a record takes its normal before.
 *
 * Rain is filled by regression only, never in time: a day that was dry at the neighbour is dry, and nothing is below zero. A value that was
 * rejected is a gap. What is left over is for the completion of the site-day, or missing.
 */
import { dayNumber } from '../base/civil-date.ts';
import { LONGEST_GAP_IN_TIME, normalOfDay } from './gaps.ts';
import { type Candidate, fromNeighbours, fromSources, type NeighbourFigures, type SourceFigures } from './gaps-candidates.ts';
import { nearestFinder } from './gaps-neighbours.ts';
import { REGRESSION_LIMITS } from './gaps-regression.ts';
import { FALLBACK, QUALITY, type SiteObservations, WEATHER_VARIABLES, type WeatherVariable } from './variable.ts';

/** How the days of a gap were filled, by method; `left` went on to the completion of the site-day. */
export interface GapDays {
  neighbour: number;
  source: number;
  inTime: number;
  normal: number;
  left: number;
}

/** One gap of one variable of one site. */
export interface Gap {
  readonly site: number;
  readonly variable: WeatherVariable;
  /** days from the first day of the observations, both included */
  readonly from: number;
  readonly to: number;
  readonly days: GapDays;
  /** regressions that filled days of it; where none was accepted, the best that was refused */
  readonly neighbours: readonly NeighbourFigures[];
  readonly sources: readonly SourceFigures[];
}

/**
 * Observations with their gaps filled; a series that lacked nothing is the observed one. `quality` stands beside every series that lacked something or
 * had codes before; bits of FALLBACK say what was filled, [site × day].
 */
export interface FilledObservations extends SiteObservations {
  readonly quality: Partial<Record<WeatherVariable, Uint8Array>>;
  readonly flags: Uint32Array;
  readonly gaps: readonly Gap[];
}

type Group = 'temperature' | 'humidity' | 'radiation' | 'wind' | 'precipitation';

/** Variables that stand in for one another: one of a group observed means there is no gap. Temperature extremes are filled each by itself. */
const GROUPS: Readonly<Record<Group, readonly WeatherVariable[]>> = {
  temperature: ['air_temperature_max_c', 'air_temperature_min_c'],
  humidity: [
    'vapour_pressure_kpa',
    'dew_point_c',
    'relative_humidity_max_pct',
    'relative_humidity_min_pct',
    'relative_humidity_mean_pct',
    'specific_humidity_kg_kg',
  ],
  radiation: ['solar_radiation_mj_m2_d', 'sunshine_duration_h'],
  wind: ['wind_speed_m_s'],
  precipitation: ['precipitation_mm'],
};

interface Bits {
  readonly neighbour: number;
  readonly source: number;
  readonly normal: number;
}
const BITS: Readonly<Record<Group, Bits>> = {
  temperature: {
    neighbour: FALLBACK.temperatureFromNeighbour,
    source: FALLBACK.temperatureFromSource,
    normal: FALLBACK.temperatureFromNormal,
  },
  humidity: { neighbour: FALLBACK.humidityFromNeighbour, source: FALLBACK.humidityFromSource, normal: 0 },
  radiation: { neighbour: FALLBACK.radiationFromNeighbour, source: FALLBACK.radiationFromSource, normal: 0 },
  wind: { neighbour: FALLBACK.windFromNeighbour, source: FALLBACK.windFromSource, normal: FALLBACK.windFromNormal },
  precipitation: { neighbour: FALLBACK.precipitationFromNeighbour, source: 0, normal: 0 },
};

/**
 * Fills the gaps of a set of sites.
 *
 * @param observations of the sites; never changed
 * @param others observations of other sources over days of their own, in the order in which they stand in
 * @param within days that are wanted, as offsets of the first and of the day after the last: gaps that touch none of them are left as they are. Left out: every day
 * @returns filled values, quality codes (0 where a value is still missing), bits of FALLBACK, and every gap with its figures
 */
export function fillGaps(
  observations: SiteObservations,
  others: readonly SiteObservations[] = [],
  within: DayWindow = { from: 0, end: observations.dayCount },
): FilledObservations {
  const filled = copyOf(observations);
  const near = nearestFinder(observations.sites);
  const nearOthers = others.map(({ sites }) => nearestFinder(sites));
  for (const [group, variables] of Object.entries(GROUPS) as [Group, readonly WeatherVariable[]][]) {
    const reported = variables.filter((variable) => observations.values[variable]);
    const missing = group === 'temperature' ? null : groupMissing(observations, reported);
    for (const variable of reported) {
      const lacks = missing ?? groupMissing(observations, [variable]);
      const reporting = reportingSites(observations, variable);
      for (let site = 0; site < observations.sites.length; site++) {
        fillSite({ observations, others, within, filled, near, nearOthers, group, variable, site, lacks, reporting });
      }
    }
  }
  withdrawCrossed(observations, filled);
  return filled;
}

interface DayWindow {
  readonly from: number;
  readonly end: number;
}

interface Work {
  readonly observations: SiteObservations;
  readonly others: readonly SiteObservations[];
  readonly within: DayWindow;
  readonly filled: FilledObservations & { gaps: Gap[] };
  readonly near: ReturnType<typeof nearestFinder>;
  readonly nearOthers: readonly ReturnType<typeof nearestFinder>[];
  readonly group: Group;
  readonly variable: WeatherVariable;
  readonly site: number;
  /** 1 on site-days on which nothing of the group was observed */
  readonly lacks: Uint8Array;
  /** sites that report the variable, by day */
  readonly reporting: Uint32Array;
}

/** A series with nothing missing is taken as it is, without a copy: grids are large and mostly whole. */
function copyOf(observations: SiteObservations): FilledObservations & { gaps: Gap[] } {
  const length = observations.sites.length * observations.dayCount;
  const values: Partial<Record<WeatherVariable, Float64Array>> = {};
  const quality: Partial<Record<WeatherVariable, Uint8Array>> = {};
  for (const [name, row] of Object.entries(observations.values) as [WeatherVariable, Float64Array][]) {
    const whole = !row.some(Number.isNaN);
    values[name] = whole ? row : row.slice();
    const known = observations.quality?.[name];
    if (known) quality[name] = whole ? known : known.slice();
    else if (!whole) quality[name] = measuredWhere(row);
  }
  return { ...observations, values, quality, flags: new Uint32Array(length), gaps: [] };
}

function measuredWhere(row: Float64Array): Uint8Array {
  const codes = new Uint8Array(row.length);
  for (let i = 0; i < row.length; i++) if (!Number.isNaN(row[i])) codes[i] = QUALITY.measured;
  return codes;
}

function groupMissing({ values, sites, dayCount }: SiteObservations, variables: readonly WeatherVariable[]): Uint8Array {
  const missing = new Uint8Array(sites.length * dayCount).fill(1);
  for (const variable of variables) {
    const row = values[variable] as Float64Array;
    for (let i = 0; i < row.length; i++) if (!Number.isNaN(row[i])) missing[i] = 0;
  }
  return missing;
}

function reportingSites({ values, sites, dayCount }: SiteObservations, variable: WeatherVariable): Uint32Array {
  const count = new Uint32Array(dayCount);
  const row = values[variable] as Float64Array;
  for (let site = 0; site < sites.length; site++) {
    for (let day = 0; day < dayCount; day++) if (!Number.isNaN(row[site * dayCount + day])) count[day]++;
  }
  return count;
}

/** Fills one variable of one site, gap by gap. A site that hardly ever reports the variable is left to the published estimates. */
function fillSite(work: Work): void {
  const { observations, variable, site, lacks } = work;
  const { dayCount } = observations;
  const observed = (observations.values[variable] as Float64Array).subarray(site * dayCount, (site + 1) * dayCount);
  let count = 0;
  for (let day = 0; day < dayCount; day++) if (!Number.isNaN(observed[day])) count++;
  if (count === 0) return;
  const fallsShort = count < REGRESSION_LIMITS.leastDays;
  for (let day = 0; day < dayCount; day++) {
    if (lacks[site * dayCount + day] === 0) continue;
    let end = day;
    while (end < dayCount && lacks[site * dayCount + end] === 1) end++;
    if (end > work.within.from && day < work.within.end) fillGap(work, observed, [day, end], fallsShort);
    day = end;
  }
}

function fillGap(work: Work, observed: Float64Array, [start, end]: [number, number], fallsShort: boolean): void {
  const { observations, group, variable, site } = work;
  const days: GapDays = { neighbour: 0, source: 0, inTime: 0, normal: 0, left: 0 };
  const measuredNearby = work.reporting.subarray(start, end).some((count) => count > 0);
  const neighbours: Candidate<NeighbourFigures>[] =
    fallsShort || !measuredNearby
      ? []
      : fromNeighbours(observations, work.near(observations.sites[site], site), { site, variable, start, end });
  const sources: Candidate<SourceFigures>[] =
    fallsShort || group === 'precipitation' ? [] : fromSources(work, { site, variable, start, end });
  for (let day = start; day < end; day++) {
    if (!take(work, day, neighbours, 'neighbour', days)) take(work, day, sources, 'source', days);
  }
  if (group === 'temperature') bridge(work, [start, end], days);
  if (group === 'temperature' || group === 'wind') takeNormals(work, observed, [start, end], days);
  days.left = end - start - days.neighbour - days.source - days.inTime - days.normal;
  const used = neighbours.filter(({ figures }) => figures.days > 0).map(({ figures }) => figures);
  const shown = used.length > 0 ? used : neighbours.slice(0, 1).map(({ figures }) => figures);
  const gap = { site, variable, from: start, to: end - 1, days, neighbours: shown };
  work.filled.gaps.push({ ...gap, sources: sources.filter(({ figures }) => figures.days > 0).map(({ figures }) => figures) });
}

/** Puts the first candidate that has a value on the day; true when one had. */
function take(
  work: Work,
  day: number,
  candidates: readonly Candidate<{ days: number }>[],
  method: 'neighbour' | 'source',
  days: GapDays,
): boolean {
  for (const candidate of candidates) {
    if (!candidate.accepted) continue;
    const value = candidate.valueOn(day);
    if (Number.isNaN(value) || crosses(work, day, value)) continue;
    const code = method === 'neighbour' ? QUALITY.filledFromNeighbour : QUALITY.filledFromSource;
    put(work, day, value, code, BITS[work.group][method]);
    candidate.figures.days++;
    days[method]++;
    return true;
  }
  return false;
}

function put({ filled, variable, site, observations }: Work, day: number, value: number, code: number, bit: number): void {
  const at = site * observations.dayCount + day;
  const { low, high } = WEATHER_VARIABLES[variable];
  const most = variable.startsWith('relative_humidity') ? 100 : high;
  (filled.values[variable] as Float64Array)[at] = Math.min(most, Math.max(low, value));
  (filled.quality[variable] as Uint8Array)[at] = code;
  filled.flags[at] |= bit;
}

/** A filled extreme that contradicts the observed other one is not taken. */
function crosses({ observations, variable, site }: Work, day: number, value: number): boolean {
  const at = site * observations.dayCount + day;
  if (variable === 'air_temperature_max_c') return value < (observations.values.air_temperature_min_c?.[at] ?? Number.NaN);
  if (variable === 'air_temperature_min_c') return value > (observations.values.air_temperature_max_c?.[at] ?? Number.NaN);
  return false;
}

/** A straight line over what is still missing, where at most five days lie between two values. */
function bridge(work: Work, [start, end]: [number, number], days: GapDays): void {
  const { dayCount } = work.observations;
  const offset = work.site * dayCount;
  const series = (work.filled.values[work.variable] as Float64Array).subarray(offset, offset + dayCount);
  for (let day = start; day < end; day++) {
    if (!Number.isNaN(series[day])) continue;
    let stop = day;
    while (stop < dayCount && Number.isNaN(series[stop])) stop++;
    if (day > 0 && stop < dayCount && stop - day <= LONGEST_GAP_IN_TIME) {
      const [before, after, first] = [series[day - 1], series[stop], day];
      for (; day < stop; day++) {
        const value = before + ((after - before) * (day - first + 1)) / (stop - first + 1);
        if (crosses(work, day, value)) continue;
        put(work, day, value, QUALITY.filledInTime, FALLBACK.temperatureFilledInTime);
        days.inTime++;
      }
    }
    day = stop;
  }
}

function takeNormals(work: Work, observed: Float64Array, [start, end]: [number, number], days: GapDays): void {
  const first = dayNumber(work.observations.startDate);
  const offset = work.site * work.observations.dayCount;
  const series = work.filled.values[work.variable] as Float64Array;
  for (let day = start; day < end; day++) {
    if (!Number.isNaN(series[offset + day])) continue;
    const value = normalOfDay(observed, first, day);
    if (Number.isNaN(value) || crosses(work, day, value)) continue;
    put(work, day, value, QUALITY.filledFromNormal, BITS[work.group].normal);
    days.normal++;
  }
}

const TEMPERATURE_BITS =
  FALLBACK.temperatureFromNeighbour | FALLBACK.temperatureFromSource | FALLBACK.temperatureFilledInTime | FALLBACK.temperatureFromNormal;

/** Two filled extremes may contradict each other; then the day goes back to what was observed. */
function withdrawCrossed({ values, quality }: SiteObservations, filled: FilledObservations): void {
  const [max, min] = [filled.values.air_temperature_max_c, filled.values.air_temperature_min_c];
  for (let at = 0; max && min && at < filled.flags.length; at++) {
    if ((filled.flags[at] & TEMPERATURE_BITS) === 0 || !(max[at] < min[at])) continue;
    for (const variable of GROUPS.temperature) {
      const observed = values[variable]?.[at] ?? Number.NaN;
      if (filled.values[variable] !== values[variable]) (filled.values[variable] as Float64Array)[at] = observed;
      const codes = filled.quality[variable];
      if (codes) codes[at] = quality?.[variable]?.[at] ?? (Number.isNaN(observed) ? 0 : QUALITY.measured);
    }
    filled.flags[at] &= ~TEMPERATURE_BITS;
  }
}
