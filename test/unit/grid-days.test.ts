/** Steps in time: which day they make, and which days stay missing. */
import { describe, expect, it } from 'vitest';
import { dayNumberOf } from '../../lib/base/civil-date.ts';
import { instantOfWallClock, localDayOf, startOfLocalDay, zoneOffsetOf } from '../../lib/files/grid-zone.ts';
import {
  blocksOf,
  type FakeVariable,
  fakeArrays,
  findingCodes,
  gridAxes,
  gridField,
  readFakes,
  stagedValue,
} from '../support/fake-arrays.ts';

const hours = (count: number) => Array.from({ length: count }, (_, hour) => hour);
const axes = (times: readonly number[], units: string, attributes = {}) => gridAxes([40, 39], [-4, -3], times, { units, ...attributes });
const field = (count: number, attributes: Record<string, string | readonly number[]>, value: (time: number) => number) =>
  gridField([count, 2, 2], attributes, (time) => value(time));

describe('zones', () => {
  const hoursOf = (zone: string, year: number, month: number, day: number) => {
    const offset = zoneOffsetOf(zone);
    if (!offset) throw new Error(zone);
    const number = dayNumberOf(year, month, day);
    return (startOfLocalDay(number + 1, offset) - startOfLocalDay(number, offset)) / 3600;
  };

  it.each([
    ['Europe/Madrid', 2024, 3, 31, 23],
    ['Europe/Madrid', 2024, 10, 27, 25],
    ['America/Sao_Paulo', 2018, 11, 4, 23],
    ['America/Sao_Paulo', 2018, 2, 17, 25],
    ['Asia/Kolkata', 2024, 3, 31, 24],
    ['UTC-07:00', 2024, 3, 10, 24],
  ])('%s %d-%d-%d has %d hours', (zone, year, month, day, expected) => {
    expect(hoursOf(zone, year, month, day)).toBe(expected);
  });

  it('begins a day whose midnight the clocks skip at its first instant', () => {
    const offset = zoneOffsetOf('America/Sao_Paulo') as NonNullable<ReturnType<typeof zoneOffsetOf>>;
    const day = dayNumberOf(2018, 11, 4);
    const start = startOfLocalDay(day, offset);
    expect(start).toBe(day * 86400 + 3 * 3600);
    expect(localDayOf(start - 1, offset)).toBe(day - 1);
  });

  it('takes the first of an hour that occurs twice', () => {
    const offset = zoneOffsetOf('Europe/Madrid') as NonNullable<ReturnType<typeof zoneOffsetOf>>;
    const midnight = dayNumberOf(2024, 10, 27) * 86400;
    expect(instantOfWallClock(midnight + 2.5 * 3600, offset)).toBe(midnight + 0.5 * 3600);
  });

  it('knows no zone of another name', () => {
    expect(zoneOffsetOf('Middle/Earth')).toBeNull();
  });
});

describe('daily steps', () => {
  it.each([
    ['stamped at midnight', [0, 1, 2], undefined, '2024-01-01'],
    ['stamped at noon', [0.5, 1.5, 2.5], undefined, '2024-01-01'],
    ['stamped at the end, by the options', [1, 2, 3], 'end', '2024-01-01'],
    ['stamped at the start, by the options', [0.25, 1.25, 2.25], 'start', '2024-01-01'],
  ] as const)('%s', async (_, times, stamp, first) => {
    const file = fakeArrays({ ...axes(times, 'days since 2024-01-01'), tas: field(3, { units: 'degC' }, (t) => t) });
    const reading = await readFakes({ 'a.nc': file }, { stamp });
    expect(reading.understood.dateRange?.start).toBe(first);
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r0c0', '2024-01-02')).toBe(1);
  });

  it('lets the bounds of a step say its day', async () => {
    const bounds: FakeVariable = { dimensions: ['time', 'bnds'], shape: [3, 2], data: [0, 1, 1, 2, 2, 3] };
    const file = fakeArrays({
      ...axes([1, 2, 3], 'days since 2024-01-01', { bounds: 'time_bnds' }),
      time_bnds: bounds,
      tas: field(3, { units: 'degC' }, (t) => t),
    });
    expect((await readFakes({ 'a.nc': file })).understood.dateRange).toEqual({ start: '2024-01-01', end: '2024-01-03' });
  });

  it('reads the day of an offset of the epoch', async () => {
    const file = fakeArrays({ ...axes([0, 1, 2], 'days since 1949-12-01T00:00:00Z'), tas: field(3, { units: 'degC' }, (t) => t) });
    expect((await readFakes({ 'a.nc': file })).understood.dateRange?.start).toBe('1949-12-01');
  });

  it('leaves 29 February missing in the 365-day calendar and says so', async () => {
    const times = hours(366).map((day) => day);
    const file = fakeArrays({
      ...axes(times, 'days since 2023-12-31', { calendar: 'noleap' }),
      tas: field(366, { units: 'degC' }, (t) => t / 10),
    });
    const reading = await readFakes({ 'a.nc': file });
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r0c0', '2024-02-28')).toBeCloseTo(5.9, 5);
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r0c0', '2024-02-29')).toBeNaN();
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r0c0', '2024-03-01')).toBeCloseTo(6, 5);
    expect(reading.understood.dateRange?.end).toBe('2024-12-31');
    expect(findingCodes(reading)).toContain('calendar-365');
  });

  it('says how the 360-day calendar was placed', async () => {
    const file = fakeArrays({
      ...axes(hours(360), 'days since 2023-01-01', { calendar: '360_day' }),
      tas: field(360, { units: 'degC' }, () => 9),
    });
    const reading = await readFakes({ 'a.nc': file });
    expect(reading.staged).toMatchObject({ rows: 4 * 360 });
    expect(reading.findings.find(({ code }) => code === 'calendar-360')?.severity).toBe('warning');
  });

  it.each([
    ['days since 1582-10-14', 'gregorian', 'bad-time-units'],
    ['months since 2024-01-01', 'standard', 'bad-time-units'],
    ['days since 2024-01-01', 'julian', 'unknown-calendar'],
  ])('refuses "%s" in the calendar %s', async (units, calendar, code) => {
    const file = fakeArrays({ ...axes([0, 1], units, { calendar }), tas: field(2, { units: 'degC' }, () => 9) });
    const reading = await readFakes({ 'a.nc': file });
    expect(findingCodes(reading)).toContain(code);
    expect(blocksOf(reading)).toEqual([]);
  });

  it('uses year, month and day where the count cannot be used', async () => {
    const parts = (values: readonly number[]): FakeVariable => ({ dimensions: ['time'], shape: [2], data: values });
    const file = fakeArrays({
      ...axes([0, 1], 'days since 1582-10-14'),
      year: parts([2024, 2024]),
      month: parts([2, 3]),
      day: parts([29, 1]),
      tas: field(2, { units: 'degC' }, (t) => t),
    });
    const reading = await readFakes({ 'a.nc': file });
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r0c0', '2024-02-29')).toBe(0);
    expect(findingCodes(reading)).toContain('time-from-parts');
  });

  it('joins files of one quantity, and keeps the first of a day that comes twice', async () => {
    const part = (start: string, value: number) =>
      fakeArrays({ ...axes([0, 1], `days since ${start}`), tas: field(2, { units: 'degC' }, () => value) });
    const reading = await readFakes({ 'b.nc': part('2024-01-02', 2), 'a.nc': part('2024-01-01', 1) });
    expect([1, 2, 3].map((day) => stagedValue(reading, 'air_temperature_mean_c', 'r0c0', `2024-01-0${day}`))).toEqual([1, 1, 2]);
    expect(findingCodes(reading)).toContain('repeated-steps');
  });

  it('leaves out monthly means', async () => {
    const file = fakeArrays({ ...axes([0, 31, 60], 'days since 2024-01-01'), tas: field(3, { units: 'degC' }, () => 9) });
    expect(findingCodes(await readFakes({ 'a.nc': file }))).toContain('step-too-long');
  });

  it('leaves out one moment beside good fields', async () => {
    const moment = fakeArrays({
      ...axes([12], 'hours since 2024-01-01'),
      d2m: field(1, { units: 'K', cell_methods: 'time: point' }, () => 280),
    });
    const days = fakeArrays({ ...axes([0, 1], 'days since 2024-01-01'), tas: field(2, { units: 'degC' }, () => 9) });
    const reading = await readFakes({ 'a.nc': days, 'b.nc': moment });
    expect(reading.findings.find(({ code }) => code === 'single-moment')?.severity).toBe('warning');
    expect(reading.findingCounts.error).toBe(0);
    expect(new Set(blocksOf(reading).map(({ variable }) => variable))).toEqual(new Set(['air_temperature_mean_c']));
  });
});

describe('steps shorter than a day', () => {
  it('leaves a day with too few hours missing, and counts it', async () => {
    const file = fakeArrays({
      ...axes(hours(72), 'hours since 2024-06-01'),
      t2m: field(72, { units: 'degC' }, (h) => (h >= 24 && h < 27 ? Number.NaN : 20)),
    });
    const reading = await readFakes({ 'a.nc': file }, { stamp: 'start' });
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r0c0', '2024-06-01')).toBe(20);
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r0c0', '2024-06-02')).toBeNaN();
    expect(reading.findings.find(({ code }) => code === 'short-day')?.message).toContain('4 days of places');
    const lenient = await readFakes({ 'a.nc': file }, { stamp: 'start', minimumHours: 20 });
    expect(stagedValue(lenient, 'air_temperature_mean_c', 'r0c0', '2024-06-02')).toBe(20);
  });

  it('reads stamps at half past as the middle of their hour', async () => {
    const file = fakeArrays({
      ...axes(
        hours(24).map((hour) => 60 * hour),
        'minutes since 2024-06-01 00:30:00',
      ),
      rsds: field(24, { units: 'W m-2' }, () => 100),
    });
    const reading = await readFakes({ 'a.nc': file });
    // 100 W m⁻² for 86 400 s
    expect(stagedValue(reading, 'solar_radiation_mj_m2_d', 'r0c0', '2024-06-01')).toBeCloseTo(8.64, 5);
    expect(reading.understood.stamp).toBe('centre');
  });

  it('takes amounts that grow through a forecast apart', async () => {
    // rain of 0.1 mm in each hour, as metres since midnight, stamped at the end of the hour; the first stamp holds the whole day before
    const file = fakeArrays({
      ...axes(hours(169), 'hours since 2024-06-01'),
      tp: field(169, { units: 'm' }, (h) => (h % 24 === 0 ? 24 : h % 24) * 1e-4),
    });
    const reading = await readFakes({ 'a.nc': file });
    expect(findingCodes(reading)).toContain('amount-since-start');
    for (const day of [1, 2, 7]) expect(stagedValue(reading, 'precipitation_mm', 'r0c0', `2024-06-0${day}`)).toBeCloseTo(2.4, 5);
    expect(stagedValue(reading, 'precipitation_mm', 'r0c0', '2024-05-31')).toBeNaN();
  });

  it('stages hours of few cells beside the days, on the clock without summer time', async () => {
    const file = fakeArrays({ ...axes(hours(72), 'hours since 2024-06-01'), t2m: field(72, { units: 'degC' }, (h) => h / 10) });
    const reading = await readFakes({ 'a.nc': file }, { stamp: 'start' }, { timeZone: 'Europe/Madrid' });
    // 00 h of 2 June in standard time (UTC+1) is 23 h UTC of 1 June
    expect(stagedValue(reading, 'hour_air_temperature_c', 'r0c0', '2024-06-02', 0)).toBeCloseTo(2.3, 5);
    expect(stagedValue(reading, 'hour_air_temperature_c', 'r0c0', '2024-06-02', 23)).toBeCloseTo(4.6, 5);
  });

  it('moves stamps of another zone', async () => {
    const file = fakeArrays({ ...axes(hours(48), 'hours since 2024-06-01'), t2m: field(48, { units: 'degC' }, (h) => (h < 24 ? 10 : 20)) });
    const reading = await readFakes({ 'a.nc': file }, { stamp: 'start', stampZone: 'UTC-07:00' }, { timeZone: 'America/Phoenix' });
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r0c0', '2024-06-01')).toBe(10);
    expect(stagedValue(reading, 'air_temperature_max_c', 'r0c0', '2024-06-02')).toBe(20);
  });

  it('warns once that the stamp was assumed', async () => {
    const file = fakeArrays({
      ...axes(hours(48), 'hours since 2024-06-01'),
      t2m: field(48, { units: 'degC' }, () => 10),
      d2m: field(48, { units: 'degC' }, () => 5),
    });
    expect(findingCodes(await readFakes({ 'a.nc': file })).filter((code) => code === 'stamp-assumed')).toHaveLength(1);
  });

  it('does not let a given maximum be overwritten', async () => {
    const file = fakeArrays({
      ...axes(hours(24), 'hours since 2024-06-01'),
      t2m: field(24, { units: 'degC' }, () => 10),
      mx2t: field(24, { units: 'degC' }, () => 12),
    });
    const reading = await readFakes({ 'a.nc': file }, { stamp: 'start' });
    expect(stagedValue(reading, 'air_temperature_max_c', 'r0c0', '2024-06-01')).toBe(12);
    expect(blocksOf(reading).filter(({ variable }) => variable === 'air_temperature_max_c')).toHaveLength(1);
  });
});
