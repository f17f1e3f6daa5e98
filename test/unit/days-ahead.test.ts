/** Days past the last observation: normals, the same days of other years, the representative year of rain. Records are made by hand, so that every value can be worked out. */
import { describe, expect, test } from 'vitest';
import { type DayNumber, dayNumber, dayOfYear, isoDate } from '../../lib/base/civil-date.ts';
import { holdAtSaturation, moveSiteDay } from '../../lib/energy/moved-weather.ts';
import { type Forecast, putForecast } from '../../lib/jobs/run-ahead-forecast.ts';
import {
  addToTallies,
  emptyTallies,
  representativeYear,
  sameDay,
  sameDays,
  type YearTally,
  yearsOnRecord,
} from '../../lib/weather/analogue-year.ts';
import { countDayKinds, dayKind, isAhead } from '../../lib/weather/day-kind.ts';
import { lastObservedDay, normalParts } from '../../lib/weather/days-ahead.ts';
import { fillGaps } from '../../lib/weather/gaps-fill.ts';
import { measuredWhere } from '../../lib/weather/measured-values.ts';
import { addToNormals, type DaySpan, emptyNormalSums, normalOfDays, normalsOf } from '../../lib/weather/normal-of-day.ts';
import { type CompletedWeather, FALLBACK, type Site } from '../../lib/weather/variable.ts';

function span(from: string, to: string): DaySpan {
  return { first: dayNumber(from), dayCount: dayNumber(to) - dayNumber(from) + 1 };
}

function series(days: DaySpan, value: (date: string, day: DayNumber) => number): Float64Array {
  return Float64Array.from({ length: days.dayCount }, (_, i) => value(isoDate(days.first + i), days.first + i));
}

const YEARS = span('2021-01-01', '2023-12-31');

describe('normal of a day', () => {
  test('is the mean of the years: 10, 12 and 17 make 13', () => {
    const of: Record<string, number> = { 2021: 10, 2022: 12, 2023: 17 };
    const record = series(YEARS, (date) => of[date.slice(0, 4)]);
    expect([...normalOfDays(record, YEARS, span('2024-06-14', '2024-06-16'))]).toEqual([13, 13, 13]);
  });

  test('looks 7 days to either side and no further', () => {
    // 15 mm on one day of one year: 15 / (15 days × 3 years)
    const record = series(YEARS, (date) => (date === '2022-06-15' ? 15 : 0));
    const normals = normalOfDays(record, YEARS, span('2024-06-07', '2024-06-23'));
    expect(normals[0]).toBe(0);
    expect([...normals.subarray(1, 16)].every((value) => Math.abs(value - 1 / 3) < 1e-12)).toBe(true);
    expect(normals[16]).toBe(0);
  });

  test('follows a straight march of the year exactly', () => {
    const record = series(YEARS, (_, day) => dayOfYear(day));
    expect(normalOfDays(record, YEARS, span('2025-07-01', '2025-07-01'))[0]).toBeCloseTo(182, 9);
  });

  test('leaves out the year of the day itself', () => {
    const days = span('2021-01-01', '2024-06-10');
    const record = series(days, (date) => (date.startsWith('2024') ? -999 : 5));
    expect(normalOfDays(record, days, span('2024-06-11', '2024-06-12'))).toEqual(new Float64Array([5, 5]));
  });

  test('29 February is 1 March in common years', () => {
    // 22 February to 8 March is the window of 1 March in a common year
    const days = span('2022-01-01', '2023-12-31');
    const record = series(days, (date) => (date.slice(5) >= '02-22' && date.slice(5) <= '03-08' ? 100 : 0));
    expect(normalOfDays(record, days, span('2024-02-29', '2024-02-29'))[0]).toBe(100);
    expect(normalOfDays(record, days, span('2024-02-28', '2024-02-28'))[0]).toBeCloseTo((100 * 14) / 15, 9);
  });

  test('missing values are left out; no other year is missing', () => {
    const record = series(YEARS, (date) => (date.startsWith('2023') ? 4 : Number.NaN));
    expect(normalOfDays(record, YEARS, span('2024-05-01', '2024-05-01'))[0]).toBe(4);
    expect(normalOfDays(record, YEARS, span('2023-05-01', '2023-05-01'))[0]).toBeNaN();
  });

  test('a record added in parts gives what it gives whole, across the new year too', () => {
    const days = span('2015-03-01', '2023-10-09');
    const record = series(days, (_, day) => 20 + 8 * Math.sin(day / 50) + ((day * 7919) % 13));
    const wanted = span('2023-10-10', '2024-08-30');
    const whole = normalOfDays(record, days, wanted);
    const sums = emptyNormalSums(1, wanted.dayCount);
    const parts = normalParts(wanted, days, 100);
    for (const part of parts) {
      expect(part.dayCount).toBeLessThanOrEqual(100);
      const from = part.first - days.first;
      addToNormals(sums, { site: 0, days: wanted }, record.subarray(from, from + part.dayCount), part);
    }
    normalsOf(sums).forEach((value, day) => {
      expect(value).toBeCloseTo(whole[day], 9);
    });
  });
});

describe('the same days of another year', () => {
  test.each([
    ['2024-02-29', 1, '2023-02-28', true],
    ['2024-02-29', 4, '2020-02-29', false],
    ['2023-03-01', 3, '2020-03-01', false],
    ['2024-02-28', 1, '2023-02-28', false],
    ['2024-12-31', 1, '2023-12-31', false],
  ])('%s, %i years back', (date, back, then, repeated) => {
    expect(sameDay(dayNumber(date), back)).toEqual({ day: dayNumber(then), repeated });
  });

  test('a span that holds 29 February is a day shorter in a common year', () => {
    expect(sameDays(span('2024-02-01', '2024-03-31'), 1)).toEqual(span('2023-02-01', '2023-03-31'));
    expect(sameDays(span('2023-10-01', '2024-09-30'), 3)).toEqual(span('2020-10-01', '2021-09-30'));
  });
});

function tally(yearsBack: number, rain: number, rainDays = 100, days = 100): YearTally {
  return { yearsBack, rain, rainDays, days };
}

describe('representative year of rain', () => {
  test('is the one in the middle', () => {
    expect(representativeYear([tally(1, 10), tally(2, 50), tally(3, 30)], 100)?.yearsBack).toBe(3);
  });

  test('of an even number, the nearest to the mean of the middle two; of two as near, the later', () => {
    expect(representativeYear([tally(1, 60), tally(2, 40), tally(3, 20), tally(4, 10)], 100)?.yearsBack).toBe(2);
  });

  test('rain of a year that lacks days is raised to all of them; below 80 % it is not looked at', () => {
    // 40 mm on 80 of 100 days count as 50 mm, the middle of 45, 50 and 60
    expect(representativeYear([tally(1, 45), tally(2, 60), tally(3, 40, 80)], 100)?.yearsBack).toBe(3);
    expect(representativeYear([tally(1, 45, 79)], 100)).toBeNull();
    expect(representativeYear([], 100)).toBeNull();
  });

  test('tallies count each day of each year once, only days asked for, and no rain twice on 29 February', () => {
    const days = span('2024-02-27', '2024-03-02');
    const record = span('2022-01-01', '2023-12-31');
    const rain = series(record, (date) => ({ '2023-02-28': 10, '2023-03-01': 2, '2022-02-27': 7 })[date] ?? 0);
    const hasValue = Uint8Array.from(rain, (_, i) => (isoDate(record.first + i).startsWith('2022-03') ? 0 : 1));
    const tallies = emptyTallies(days, record.first);
    addToTallies(tallies, days, Uint8Array.of(0, 1, 1, 1, 1), { part: record, hasValue, meanRain: rain });
    expect(tallies).toEqual([
      { yearsBack: 1, days: 4, rainDays: 4, rain: 12 },
      { yearsBack: 2, days: 2, rainDays: 4, rain: 0 },
    ]);
    expect(yearsOnRecord(tallies, 4).map(({ yearsBack }) => yearsBack)).toEqual([1, 2]);
    expect(yearsOnRecord([{ ...tallies[1], days: 1 }], 4)).toEqual([]);
  });
});

describe('kind of a day', () => {
  test.each([
    [0, 'observed'],
    [FALLBACK.humidityFromDewPoint | FALLBACK.elevationAssumed, 'observed'],
    [FALLBACK.windAssumed, 'filled'],
    [FALLBACK.aheadFromForecast, 'forecast'],
    [FALLBACK.aheadFromForecast | FALLBACK.windAssumed, 'forecast'],
    [FALLBACK.aheadFromAnalogue | FALLBACK.aheadFromForecast, 'analogue'],
    [FALLBACK.aheadFromNormal | FALLBACK.aheadFromForecast, 'normal'],
  ])('bits %i: %s', (flags, kind) => {
    expect(dayKind(flags)).toBe(kind);
    expect(isAhead(dayKind(flags))).toBe(!['observed', 'filled'].includes(kind));
  });

  test('counts add up to the days of the span', () => {
    const flags = [0, FALLBACK.windAssumed, FALLBACK.aheadFromForecast, FALLBACK.aheadFromNormal, FALLBACK.aheadFromNormal];
    expect(countDayKinds(flags, { from: 1, to: 4 })).toEqual({ observed: 0, filled: 1, forecast: 1, analogue: 0, normal: 2 });
  });

  test('no value of a day to come counts as measured, so that none enters a variogram', () => {
    const flags = [0, FALLBACK.aheadFromForecast, FALLBACK.aheadFromNormal, FALLBACK.aheadFromAnalogue];
    for (const name of ['airTemperatureMax', 'precipitation', 'referenceEt', 'windSpeed2m'] as const)
      expect([...measuredWhere(flags, name)]).toEqual([1, 0, 0, 0]);
  });
});

function site(code: string, longitude: number, elevation: number): Site {
  return { code, name: code, longitude, latitude: 40, elevation, windHeight: 2 };
}

function completed(siteCount: number, dayCount: number, maximum: (site: number, day: number) => number): CompletedWeather {
  const fill = (value: (site: number, day: number) => number) =>
    Float64Array.from({ length: siteCount * dayCount }, (_, i) => value(Math.floor(i / dayCount), i % dayCount));
  const or = (value: number) => (at: number, day: number) => (Number.isNaN(maximum(at, day)) ? Number.NaN : value);
  return {
    ...{ siteCount, dayCount, flags: new Uint32Array(siteCount * dayCount) },
    ...{ airTemperatureMax: fill(maximum), airTemperatureMin: fill((at, day) => maximum(at, day) - 10) },
    ...{ actualVapourPressure: fill(or(1)), solarRadiation: fill(or(20)), windSpeed2m: fill(or(2)), precipitation: fill(or(0)) },
  };
}

describe('last observed day', () => {
  const observed = (rows: number[][], variable: 'air_temperature_max_c' | 'precipitation_mm' | 'reference_et_given_mm') => ({
    sites: rows.map((_, i) => site(`S${i}`, i, 0)),
    ...{ startDate: '2024-05-01', dayCount: rows[0].length, values: { [variable]: Float64Array.from(rows.flat()) } },
  });
  test('is the last of any site', () => {
    const rows = [
      [20, Number.NaN, Number.NaN, Number.NaN],
      [20, 21, 22, Number.NaN],
    ];
    expect(lastObservedDay(observed(rows, 'air_temperature_max_c'))).toBe(dayNumber('2024-05-03'));
    expect(lastObservedDay(observed(rows, 'reference_et_given_mm'))).toBe(dayNumber('2024-05-03'));
  });
  test('rain alone is no observation to compute from', () => {
    expect(lastObservedDay(observed([[1, 2, 3]], 'precipitation_mm'))).toBeNull();
  });
});

describe('weather moved to another height', () => {
  test('100 m up at 6.5 °C per km is 0.65 °C cooler; vapour is held at saturation', () => {
    const weather = completed(1, 1, () => 20.65);
    weather.airTemperatureMin[0] = 10.65;
    weather.actualVapourPressure[0] = 2;
    moveSiteDay(weather, 0, 100, 0.0065);
    expect(weather.airTemperatureMax[0]).toBeCloseTo(20, 9);
    expect(weather.airTemperatureMin[0]).toBeCloseTo(10, 9);
    // FAO-56 Table 2.3: e°(20) = 2.338 and e°(10) = 1.228 kPa; their mean is 1.783
    expect(Math.abs(weather.actualVapourPressure[0] - 1.783)).toBeLessThan(0.0006);
  });
  test('dry air is left as it is', () => {
    const weather = completed(1, 1, () => 20);
    holdAtSaturation(weather, 0);
    expect(weather.actualVapourPressure[0]).toBe(1);
  });
});

describe('forecast at the sites', () => {
  const forecast = (of: (site: number, day: number) => number): Forecast => ({
    ...{ source: 'Forecast', issued: null, given: null },
    sites: [site('F0', -100, 200), site('F1', -101, 0)],
    weather: completed(2, 3, of),
  });
  const place = { offset: 2, dayCount: 3, lapseRate: 0.0065, defaultElevation: 0, isGiven: false };

  test('comes from the nearest site that has the day, moved by the lapse rate; what is left is open', () => {
    const told = forecast((at, day) => [25, day === 1 ? Number.NaN : 30][at] + (day === 2 ? Number.NaN : 0));
    const weather = completed(1, 5, (_, day) => (day < 2 ? 10 : Number.NaN));
    const open = putForecast(weather, { ...place, forecast: told, sites: [site('S', -100.9, 100)] });
    // F1 is nearer and 100 m lower: 30 − 0.65; on the second day F0, 100 m higher: 25 + 0.65
    expect(weather.airTemperatureMax[2]).toBeCloseTo(29.35, 9);
    expect(weather.airTemperatureMax[3]).toBeCloseTo(25.65, 9);
    expect(weather.airTemperatureMax[4]).toBeNaN();
    expect([...open]).toEqual([0, 0, 1]);
    expect([...weather.flags]).toEqual([0, 0, FALLBACK.aheadFromForecast, FALLBACK.aheadFromForecast, 0]);
    expect(weather.airTemperatureMax[1]).toBe(10);
  });

  test('takes away what stood on the days to come, so that no gap filling stays there', () => {
    const weather = completed(1, 5, () => 12);
    weather.flags.fill(FALLBACK.temperatureFromNormal);
    putForecast(weather, { ...place, forecast: forecast(() => Number.NaN), sites: [site('S', -100, 0)] });
    expect([...weather.flags]).toEqual([FALLBACK.temperatureFromNormal, FALLBACK.temperatureFromNormal, 0, 0, 0]);
    expect(weather.precipitation[4]).toBeNaN();
  });
});

test('gaps outside the days wanted are left as they are; those within are filled as ever', () => {
  const days = 120;
  const wave = (day: number) => 20 + 5 * Math.sin(day / 3);
  const holed = Float64Array.from({ length: days }, (_, day) => ([10, 11, 60, 61, 100].includes(day) ? Number.NaN : wave(day) + 1));
  const observations = {
    sites: [site('A', -100, 0), site('B', -100.1, 0)],
    ...{ startDate: '2024-03-01', dayCount: days },
    values: { air_temperature_max_c: Float64Array.from([...holed, ...Array.from({ length: days }, (_, day) => wave(day))]) },
  };
  const filled = fillGaps(observations, [], { from: 61, end: 90 });
  const values = filled.values.air_temperature_max_c as Float64Array;
  expect([values[10], values[100]]).toEqual([Number.NaN, Number.NaN]);
  for (const day of [60, 61]) expect(values[day]).toBeCloseTo(wave(day) + 1, 9);
  expect(filled.gaps.map(({ from, to }) => [from, to])).toEqual([[60, 61]]);
});
