/**
 * Readings of a file with several a day → hours and days of each site by its standard clock, with findings on what was decided and left out.
 */
import { type DayNumber, isoDate } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import { hourVapourPressure } from '../energy/hourly-day.ts';
import {
  bridgeHours,
  type DaySpan,
  dailyExtremes,
  dailyMeans,
  dailySums,
  HOURS_PER_DAY,
  hourlyMeans,
  hourlySums,
  type Readings,
  USUAL_MINIMUM_HOURS,
  usableHours,
} from '../weather/hours.ts';
import { type HourVariable, WEATHER_VARIABLES, type WeatherVariable } from '../weather/variable.ts';
import type { FindingList } from './finding-list.ts';
import type { ImportContext, ImportOptions } from './reading.ts';
import { type StampClock, standardStamps, zoneOfSite } from './weather-clock.ts';
import { ClockNotes } from './weather-clock-notes.ts';
import type { ReadingStore } from './weather-readings.ts';
import { type HourStore, VARIABLE_NAMES, type WeatherStore } from './weather-store.ts';

const MINUTES_PER_DAY = 1440;
const LONGEST_HOUR_STEP = 60;
/** Most years that the readings of one site may span: a stray date must not make arrays of centuries. */
const MOST_DAYS = 366 * 120;

export type Stamp = 'start' | 'centre' | 'end';

/** Files whose stamps mean the same. */
export interface ReadingBatch {
  readonly stores: readonly ReadingStore[];
  readonly step: number;
  readonly stamp: Stamp;
  readonly clock: StampClock;
}

interface Target {
  readonly store: WeatherStore;
  readonly hours: HourStore;
  readonly findings: FindingList;
  readonly options: ImportOptions;
  readonly context: ImportContext;
}

/** Daily variables made from readings of a variable, beside those of its own name. */
type Daily = Partial<Record<WeatherVariable, Float64Array>>;
type Hourly = Partial<Record<HourVariable, Float64Array>>;

const HOUR_OF: Partial<Record<WeatherVariable, HourVariable>> = {
  air_temperature_mean_c: 'hour_air_temperature_c',
  dew_point_c: 'hour_dew_point_c',
  vapour_pressure_kpa: 'hour_vapour_pressure_kpa',
  relative_humidity_mean_pct: 'hour_relative_humidity_pct',
  wind_speed_m_s: 'hour_wind_speed_m_s',
  solar_radiation_mj_m2_d: 'hour_solar_radiation_mj_m2',
  precipitation_mm: 'hour_precipitation_mm',
  pressure_kpa: 'hour_pressure_kpa',
};
/** Readings that are amounts of the time they cover; the others are states, means or rates. */
const AMOUNTS: ReadonlySet<WeatherVariable> = new Set(['precipitation_mm', 'sunshine_duration_h', 'reference_et_given_mm']);
/** Rates per hour whose missing hours are bridged before they are summed. */
const RATES: ReadonlySet<WeatherVariable> = new Set(['solar_radiation_mj_m2_d', 'net_radiation_mj_m2_d']);

/** Adds the days and hours of a batch to the stores. */
export function addReadings(batch: ReadingBatch, siteCodes: readonly string[], target: Target): void {
  const minimum = target.options.minimumHours ?? USUAL_MINIMUM_HOURS;
  const notes = new ClockNotes(batch, siteCodes);
  const short = new Map<WeatherVariable, { days: number; first: string }>();
  const bridged = new Map<WeatherVariable, number>();
  const tallies = { repeated: 0, differing: 0, clashing: 0 };
  for (const site of sitesOf(batch)) {
    const readings = readingsOf(batch, site, target, notes, tallies);
    if (readings) addSite(batch, site, readings, { ...target, minimum, siteCode: siteCodes[site], short, bridged, tallies });
  }
  notes.tell(target.findings, target.options);
  tellTallies(batch, tallies, target.findings);
  tellShort(short, minimum, batch, target.findings);
  for (const [variable, hours] of bridged) {
    target.findings.note({
      code: 'hours-bridged',
      message: `${WEATHER_VARIABLES[variable].term}: ${counted(hours, 'missing hour is', 'missing hours are')} bridged by the mean of the hours before and after, for the sum of the day.`,
      file: batch.stores[0].file,
    });
  }
}

function sitesOf(batch: ReadingBatch): number[] {
  return [...new Set(batch.stores.flatMap((store) => [...store.bySite().keys()]))].sort((a, b) => a - b);
}

/** Readings of one site in time order, one per time. */
interface SiteReadings {
  readonly centres: Float64Array;
  readonly lines: Int32Array;
  readonly values: Partial<Record<WeatherVariable, Float64Array>>;
}

interface Tallies {
  repeated: number;
  differing: number;
  clashing: number;
}

function readingsOf(batch: ReadingBatch, site: number, target: Target, notes: ClockNotes, tallies: Tallies): SiteReadings | null {
  const parts = batch.stores.map((store) => ({ store, rows: store.bySite().get(site) ?? new Int32Array(0) }));
  const stamps = Float64Array.from(parts.flatMap(({ store, rows }) => Array.from(rows, (row) => store.stamps[row])));
  const lines = Int32Array.from(parts.flatMap(({ store, rows }) => Array.from(rows, (row) => store.lines[row])));
  const zone = zoneOfSite(target.context.knownSites[site]?.zone, target.context.timeZone);
  const clock = standardStamps(stamps, batch.clock, zone, batch.stamp === 'end');
  notes.add(site, zone, clock, stamps, lines);
  const shift = batch.stamp === 'start' ? batch.step / 2 : batch.stamp === 'end' ? -batch.step / 2 : 0;
  const order = Array.from(stamps.keys())
    .filter((i) => !Number.isNaN(clock.stamps[i]))
    .sort((a, b) => clock.stamps[a] - clock.stamps[b] || a - b);
  const columns = VARIABLE_NAMES.map((name, v) => ({ name, column: joined(parts, v, stamps.length) })).filter(
    ({ column }) => column !== null,
  );
  const kept = withoutRepeats(
    order,
    clock.stamps,
    columns.map(({ column }) => column as Float32Array),
    tallies,
  );
  if (kept.length === 0) return null;
  return {
    centres: Float64Array.from(kept, (i) => clock.stamps[i] + shift),
    lines: Int32Array.from(kept, (i) => lines[i]),
    values: Object.fromEntries(columns.map(({ name, column }) => [name, Float64Array.from(kept, (i) => (column as Float32Array)[i])])),
  };
}

function joined(parts: readonly { store: ReadingStore; rows: Int32Array }[], v: number, length: number): Float32Array | null {
  if (!parts.some(({ store }) => store.values[v])) return null;
  const column = new Float32Array(length).fill(Number.NaN);
  let at = 0;
  for (const { store, rows } of parts) {
    const from = store.values[v];
    for (let i = 0; i < rows.length; i++, at++) if (from) column[at] = from[rows[i]];
  }
  return column;
}

/** Of readings for one time the first is kept. */
function withoutRepeats(order: readonly number[], stamps: Float64Array, columns: readonly Float32Array[], tallies: Tallies): number[] {
  const kept: number[] = [];
  for (const i of order) {
    const last = kept[kept.length - 1];
    if (last === undefined || stamps[last] !== stamps[i]) kept.push(i);
    else if (columns.every((column) => Object.is(column[last], column[i]))) tallies.repeated++;
    else tallies.differing++;
  }
  return kept;
}

interface SiteTarget extends Target {
  readonly minimum: number;
  readonly siteCode: string;
  readonly short: Map<WeatherVariable, { days: number; first: string }>;
  readonly bridged: Map<WeatherVariable, number>;
  readonly tallies: Tallies;
}

function addSite(batch: ReadingBatch, site: number, readings: SiteReadings, target: SiteTarget): void {
  for (const part of stretches(readings)) addStretch(batch, site, part, target);
}

/** A record cut where it jumps over more than a year, so that nothing is bridged across and no array spans what is not there. */
function* stretches(readings: SiteReadings): Generator<SiteReadings> {
  const { centres } = readings;
  const cut = (from: number, to: number): SiteReadings => ({
    centres: centres.subarray(from, to),
    lines: readings.lines.subarray(from, to),
    values: Object.fromEntries(Object.entries(readings.values).map(([name, values]) => [name, values.subarray(from, to)])),
  });
  let from = 0;
  for (let i = 1; i <= centres.length; i++) {
    if (i < centres.length && centres[i] - centres[i - 1] <= 31 * MINUTES_PER_DAY) continue;
    yield cut(from, i);
    from = i;
  }
}

function addStretch(batch: ReadingBatch, site: number, readings: SiteReadings, target: SiteTarget): void {
  const { centres } = readings;
  const firstDay = Math.floor(centres[0] / MINUTES_PER_DAY);
  const dayCount = Math.min(MOST_DAYS, Math.floor(centres[centres.length - 1] / MINUTES_PER_DAY) - firstDay + 1);
  const span = { firstDay, dayCount };
  const hourly: Hourly = {};
  const daily: Daily = {};
  for (const [name, values] of Object.entries(readings.values) as [WeatherVariable, Float64Array][]) {
    aggregate(name, { centres, values, step: batch.step }, span, { hourly, daily }, target);
  }
  vapourPressureOfHours(readings, batch.step, span, { hourly, daily }, target);
  storeDays(site, span, daily, firstLines(readings, span), target);
  if (batch.step > LONGEST_HOUR_STEP) return;
  for (const [name, hours] of Object.entries(hourly) as [HourVariable, Float64Array][]) {
    for (let day = 0; day < dayCount; day++) {
      target.hours.add(name, site, firstDay + day, hours.subarray(day * HOURS_PER_DAY, (day + 1) * HOURS_PER_DAY));
    }
  }
}

interface Made {
  readonly hourly: Hourly;
  readonly daily: Daily;
}

function aggregate(name: WeatherVariable, readings: Readings, span: DaySpan, made: Made, target: SiteTarget): void {
  const amounts = AMOUNTS.has(name);
  const hours = amounts ? hourlySums(readings, span) : hourlyMeans(readings, span);
  const hourName = HOUR_OF[name];
  if (hourName) made.hourly[hourName] = hours;
  countShort(name, hours, span, target);
  const enough = usableHours(hours).map((count) => (count >= target.minimum ? 1 : 0));
  const extreme = (which: 'max' | 'min') => dailyExtremes(readings, span, which).map((value, day) => (enough[day] ? value : Number.NaN));
  const { daily } = made;
  if (name === 'air_temperature_max_c' || name === 'relative_humidity_max_pct') daily[name] = extreme('max');
  else if (name === 'air_temperature_min_c' || name === 'relative_humidity_min_pct') daily[name] = extreme('min');
  else if (amounts) daily[name] = dailySums(hours, target.minimum);
  else if (RATES.has(name)) daily[name] = bridgedSums(name, hours, target);
  else daily[name] = dailyMeans(hours, target.minimum);
  if (name === 'air_temperature_mean_c') {
    daily.air_temperature_max_c ??= extreme('max');
    daily.air_temperature_min_c ??= extreme('min');
  }
  if (name === 'relative_humidity_mean_pct') {
    daily.relative_humidity_max_pct ??= extreme('max');
    daily.relative_humidity_min_pct ??= extreme('min');
  }
}

function bridgedSums(name: WeatherVariable, hours: Float64Array, { minimum, bridged }: SiteTarget): Float64Array {
  const bridge = bridgeHours(hours, HOURS_PER_DAY - minimum);
  const count = bridge.bridged.reduce((sum, each) => sum + each, 0);
  if (count > 0) bridged.set(name, (bridged.get(name) ?? 0) + count);
  return dailySums(bridge.hours, minimum);
}

/** Mean vapour pressure of the day from the readings' own humidity, where the file brings none. Source: FAO-56 Eq. 14 and 54. */
function vapourPressureOfHours(readings: SiteReadings, step: number, span: DaySpan, { daily }: Made, target: SiteTarget): void {
  const { dew_point_c: dew, relative_humidity_mean_pct: humidity, air_temperature_mean_c: temperature } = readings.values;
  if (daily.vapour_pressure_kpa || !(dew || (humidity && temperature))) return;
  const of = (values: Float64Array | undefined, i: number) => values?.[i] ?? Number.NaN;
  const values = readings.centres.map((_, i) => hourVapourPressure(Number.NaN, of(dew, i), of(humidity, i), of(temperature, i)));
  daily.vapour_pressure_kpa = dailyMeans(hourlyMeans({ centres: readings.centres, values, step }, span), target.minimum);
}

function countShort(name: WeatherVariable, hours: Float64Array, { firstDay }: DaySpan, { minimum, short, siteCode }: SiteTarget): void {
  const counts = usableHours(hours);
  for (let day = 0; day < counts.length; day++) {
    if (counts[day] === 0 || counts[day] >= minimum) continue;
    const entry = short.get(name);
    if (entry) entry.days++;
    else short.set(name, { days: 1, first: `${isoDate(firstDay + day)} at ${siteCode} with ${counted(counts[day], 'hour', 'hours')}` });
  }
}

function firstLines({ centres, lines }: SiteReadings, { firstDay, dayCount }: DaySpan): Int32Array {
  const first = new Int32Array(dayCount);
  for (let i = 0; i < centres.length; i++) {
    const day = Math.floor(centres[i] / MINUTES_PER_DAY) - firstDay;
    if (day < dayCount && first[day] === 0) first[day] = lines[i];
  }
  return first;
}

function storeDays(site: number, { firstDay, dayCount }: DaySpan, daily: Daily, lines: Int32Array, target: SiteTarget): void {
  const values = new Float64Array(VARIABLE_NAMES.length);
  for (let day = 0; day < dayCount; day++) {
    const number: DayNumber = firstDay + day;
    for (let v = 0; v < values.length; v++) values[v] = daily[VARIABLE_NAMES[v]]?.[day] ?? Number.NaN;
    if (values.every(Number.isNaN)) continue;
    if (target.store.find(site, number) >= 0) target.tallies.clashing++;
    else target.store.add(site, number, lines[day], values);
  }
}

function tellTallies({ stores }: ReadingBatch, { repeated, differing, clashing }: Tallies, findings: FindingList): void {
  const { file } = stores[0];
  if (repeated > 0) {
    findings.note({
      code: 'duplicate-row',
      message: `${counted(repeated, 'reading repeats', 'readings repeat')} another of the same site and time.`,
      file,
    });
  }
  if (differing > 0) {
    findings.error({
      code: 'duplicate-differs',
      message: `${counted(differing, 'reading gives', 'readings give')} other values for a site and time that the file has already; the first is kept.`,
      file,
      limit: 'one reading per site and time',
      advice:
        'Delete the wrong rows. Where an hour stands twice because the clock was put back, choose the zone of the stamps in the options.',
    });
  }
  if (clashing > 0) {
    findings.warn({
      code: 'duplicate-day',
      message: `${counted(clashing, 'site-day comes', 'site-days come')} from two files of this import; the first is kept.`,
      file,
    });
  }
}

function tellShort(
  short: ReadonlyMap<WeatherVariable, { days: number; first: string }>,
  minimum: number,
  { stores }: ReadingBatch,
  findings: FindingList,
): void {
  const alike = new Map<string, { terms: string[]; days: number; first: string }>();
  for (const [variable, { days, first }] of short) {
    const key = `${days} ${first}`;
    const entry = alike.get(key) ?? { terms: [], days, first };
    entry.terms.push(WEATHER_VARIABLES[variable].term);
    alike.set(key, entry);
  }
  for (const { terms, days, first } of alike.values()) {
    findings.warn({
      code: 'day-incomplete',
      message: `${terms.join(', ')}: ${counted(days, 'site-day has', 'site-days have')} fewer than ${minimum} usable hours and ${days === 1 ? 'is' : 'are'} left out; the first is ${first}.`,
      file: stores[0].file,
      limit: `${minimum} h`,
      advice: 'Days at either end of a record are often incomplete. Choose other minimum hours in the options if fewer will do.',
    });
  }
}
