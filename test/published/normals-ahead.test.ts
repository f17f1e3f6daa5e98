/**
 * Normals of days to come, held against a measured record: each summer at Mead, Nebraska, told from the other years as if it lay ahead.
 *
 * Source of the data: FLUXNET2015 site US-Ne1, CC BY 4.0, Pastorello et al. (2020), Scientific Data 7, 225; see test/data/ATTRIBUTION.md. The normals are
 * worked out again here by the calendar, day by day.
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { dayNumber, dayOfYear, isoDate } from '../../lib/base/civil-date.ts';
import { referenceEtDay } from '../../lib/energy/reference-day.ts';
import { vapourPressureFromDeficit } from '../../lib/files/hour-readings.ts';
import { addToTallies, emptyTallies, representativeYear, sameDay } from '../../lib/weather/analogue-year.ts';
import { normalOfDays } from '../../lib/weather/normal-of-day.ts';
import { validation } from '../support/validation.ts';

const check = validation(import.meta.url, {
  title: 'Normals of days to come, Mead, Nebraska',
  source:
    'FLUXNET2015 US-Ne1, summers of 2002 to 2006, each told from the other years; expected values recomputed from the file by the calendar',
  provenance: 'measured',
});

const LATITUDE = 41.1651;
const ELEVATION = 361;
/** u2 from 6 m by FAO-56 Eq. 47 */
const TO_TWO_METRES = 4.87 / Math.log(67.8 * 6 - 5.42);
const YEARS = [2002, 2003, 2004, 2005, 2006] as const;
const [FIRST, LAST] = ['06-01', '08-31'];

const [head, ...lines] = readFileSync('test/data/fluxnet-us-ne1-daily-2001-2006.csv', 'utf8')
  .trim()
  .split(/\r?\n/)
  .map((line) => line.split(','));
const stampDay = (stamp: string) => dayNumber(`${stamp.slice(0, 4)}-${stamp.slice(4, 6)}-${stamp.slice(6, 8)}`);
const record = { first: stampDay(lines[0][0]), dayCount: stampDay(lines[lines.length - 1][0]) - stampDay(lines[0][0]) + 1 };

function column(name: string): Float64Array {
  const values = new Float64Array(record.dayCount).fill(Number.NaN);
  const index = head.indexOf(name);
  for (const line of lines) if (Number(line[index]) > -9000) values[stampDay(line[0]) - record.first] = Number(line[index]);
  return values;
}

const temperature = column('TA_F');
const radiation = column('SW_IN_F').map((watts) => watts * 0.0864);
const wind = column('WS_F').map((speed) => speed * TO_TWO_METRES);
const rain = column('P_F');
const vapour = column('VPD_F').map((hectopascal, day) =>
  vapourPressureFromDeficit(hectopascal / 10, { max: Number.NaN, min: Number.NaN, mean: temperature[day] }),
);
const SERIES = { temperature, radiation, wind, vapour };
type Series = keyof typeof SERIES;

function summer(year: number) {
  const first = dayNumber(`${year}-${FIRST}`);
  return { first, dayCount: dayNumber(`${year}-${LAST}`) - first + 1 };
}

/** The record without the summer that is to be told: everything of its own year is missing. */
function without(values: Float64Array, year: number): Float64Array {
  return values.map((value, day) => (isoDate(record.first + day).startsWith(String(year)) ? Number.NaN : value));
}

/** The same, day by day by the calendar: values within 7 days of the same date in any other year. */
function byCalendar(values: Float64Array, date: string): number {
  const found: number[] = [];
  for (let other = 2001; other <= 2006; other++) {
    if (other === Number(date.slice(0, 4))) continue;
    const centre = Date.parse(`${other}${date.slice(4)}T00:00:00Z`);
    for (let shift = -7; shift <= 7; shift++) {
      const value = values[centre / 86_400_000 + shift - record.first];
      if (value !== undefined && !Number.isNaN(value)) found.push(value);
    }
  }
  return found.reduce((sum, value) => sum + value, 0) / found.length;
}

function referenceEt(day: number, values: Record<Series, number>): number {
  return referenceEtDay(
    {
      ...{ method: 'fao56', surface: 'short', latitude: LATITUDE, elevation: ELEVATION, dayOfYear: dayOfYear(day) },
      ...{ airTemperatureMax: values.temperature, airTemperatureMin: values.temperature },
      ...{ actualVapourPressure: values.vapour, solarRadiation: values.radiation, windSpeed2m: values.wind },
    },
    null,
  );
}

const at = (index: number): Record<Series, number> => ({
  ...{ temperature: temperature[index], radiation: radiation[index], wind: wind[index], vapour: vapour[index] },
});
const observedEt = Float64Array.from({ length: record.dayCount }, (_, day) => referenceEt(record.first + day, at(day)));
const sum = (values: ArrayLike<number>) => Array.from(values).reduce((total, value) => total + value, 0);

describe.each(YEARS)('the summer of %d', (year) => {
  const days = summer(year);
  const told = Object.fromEntries(
    Object.entries(SERIES).map(([name, values]) => [name, normalOfDays(without(values, year), record, days)]),
  ) as Record<Series, Float64Array>;

  it('has the normals that the calendar gives', () => {
    for (const name of ['temperature', 'radiation', 'wind'] as const) {
      for (let day = 0; day < days.dayCount; day += 7)
        expect(told[name][day]).toBeCloseTo(byCalendar(SERIES[name], isoDate(days.first + day)), 9);
    }
    check.held(told.temperature[45], byCalendar(temperature, `${year}-07-16`), 1e-6, { unit: '°C', provenance: 'recomputed' });
  });

  it('by mean weather asks for what the mean of the years asks for, within 3 %', () => {
    const ofMeans = sum(
      Array.from({ length: days.dayCount }, (_, day) =>
        referenceEt(days.first + day, {
          ...{ temperature: told.temperature[day], radiation: told.radiation[day], wind: told.wind[day], vapour: told.vapour[day] },
        }),
      ),
    );
    const mean = sum(normalOfDays(without(observedEt, year), record, days));
    const apart = (100 * (ofMeans - mean)) / mean;
    check.figure(`Reference ET of mean weather over the mean reference ET, ${year}`, apart, {
      ...{ text: 'within 3 %', met: Math.abs(apart) <= 3, unit: '%' },
    });
  });

  it('lies within the other summers, and is out by what this summer differed from them', () => {
    const total = (one: number) => {
      const span = summer(one);
      return sum(observedEt.subarray(span.first - record.first, span.first - record.first + span.dayCount));
    };
    const mean = sum(normalOfDays(without(observedEt, year), record, days));
    const others = YEARS.filter((one) => one !== year).map(total);
    const error = (100 * (mean - total(year))) / total(year);
    // a cool summer lies a fifth below the others (2004): no normal can know it; 2 % for the week that the window reaches beyond the summer
    check.figure(`Summer reference ET told by normals against the summer that followed, ${year}`, error, {
      ...{ text: 'between the least and the greatest of the other summers', unit: '%' },
      met: mean > 0.98 * Math.min(...others) && mean < 1.02 * Math.max(...others),
    });
  });

  it('takes the rain of one year as it fell: as many wet days as a summer has, where mean rain would wet every day', () => {
    const tallies = emptyTallies(days, record.first);
    const hasValue = Uint8Array.from(without(temperature, year), (value) => (Number.isNaN(value) ? 0 : 1));
    const open = new Uint8Array(days.dayCount).fill(1);
    addToTallies(tallies, days, open, { part: record, hasValue, meanRain: without(rain, year) });
    const chosen = representativeYear(tallies, days.dayCount);
    if (!chosen) throw new Error(`no earlier summer has rain on record for ${year}`);
    const isWet = (value: number) => value >= 1;
    const wet = Array.from({ length: days.dayCount }, (_, day) => rain[sameDay(days.first + day, chosen.yearsBack).day - record.first]);
    const drizzle = normalOfDays(without(rain, year), record, days);
    const share = wet.filter(isWet).length / days.dayCount;
    // wet days of the record's summers, counted here
    const shares = YEARS.map((one) => {
      const { first, dayCount } = summer(one);
      return Array.from(rain.subarray(first - record.first, first - record.first + dayCount)).filter(isWet).length / dayCount;
    });
    expect(share).toBeGreaterThanOrEqual(Math.min(...shares));
    expect(share).toBeLessThanOrEqual(Math.max(...shares));
    expect(drizzle.filter(isWet).length / days.dayCount).toBeGreaterThan(0.8);
  });
});
