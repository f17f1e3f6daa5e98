/** Each rule against a fault of its kind put into a faultless record: found where it is, and nowhere else. */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import type { FlagRow, NewFlagRow } from '../../db/queries/quality.ts';
import { dayNumber, isoDate } from '../../lib/base/civil-date.ts';
import { checkSource } from '../../lib/energy/quality-check.ts';
import { carryStates, flagRows } from '../../lib/jobs/flag-rows.ts';
import type { Flag } from '../../lib/weather/quality/flag.ts';
import type { Rule } from '../../lib/weather/quality/rules.ts';
import type { SiteObservations, WeatherVariable } from '../../lib/weather/variable.ts';
import { soundRecord, withFault } from '../support/quality-record.ts';

const DAYS = 1096;
const SOUND = soundRecord(DAYS);
const OPTIONS = { defaultElevation: 0, radiationCoefficient: 0.16, today: '2026-01-01' };
const checked = new Map<SiteObservations, ReturnType<typeof checkSource>>();
function check(record: SiteObservations) {
  const found = checked.get(record) ?? checkSource(record, OPTIONS);
  checked.set(record, found);
  return found;
}
const flagsOf = (record: SiteObservations, rule: Rule): Flag[] => check(record).flags.filter((flag) => flag.rule === rule);

it('a faultless record has no flag that doubts a value', () => {
  const { flags, aridity } = check(SOUND);
  expect(flags.filter(({ severity }) => severity !== 'note').map(({ detail }) => detail)).toEqual([]);
  expect(flags.length).toBeLessThan(10);
  expect(aridity).toEqual([]);
});

interface Planted {
  readonly rule: Rule;
  readonly variable: WeatherVariable;
  readonly fault: (value: number, day: number) => number;
  readonly first: number;
  readonly last: number;
  readonly severity: Flag['severity'];
}

const PLANTED: readonly Planted[] = [
  {
    rule: 'range',
    variable: 'air_temperature_max_c',
    fault: (v, d) => (d === 500 ? 99 : v),
    first: 500,
    last: 500,
    severity: 'impossible',
  },
  {
    rule: 'extremes-crossed',
    variable: 'air_temperature_max_c',
    fault: (v, d) => (d === 500 ? v - 20 : v),
    first: 500,
    last: 500,
    severity: 'impossible',
  },
  {
    rule: 'spike',
    variable: 'air_temperature_min_c',
    fault: (v, d) => (d === 500 ? v - 28 : v),
    first: 500,
    last: 500,
    severity: 'suspect',
  },
  { rule: 'step', variable: 'air_temperature_max_c', fault: (v, d) => (d >= 500 ? v + 26 : v), first: 500, last: 500, severity: 'note' },
  {
    rule: 'persistence',
    variable: 'dew_point_c',
    fault: (v, d) => (d >= 500 && d < 506 ? 9.5 : v),
    first: 500,
    last: 505,
    severity: 'suspect',
  },
  {
    rule: 'wind-stuck',
    variable: 'wind_speed_m_s',
    fault: (v, d) => (d >= 500 && d < 504 ? 2.2 : v),
    first: 500,
    last: 503,
    severity: 'suspect',
  },
  {
    rule: 'wind-still',
    variable: 'wind_speed_m_s',
    fault: (v, d) => (d >= 500 && d < 504 ? 0.01 * (d - 499) : v),
    first: 500,
    last: 503,
    severity: 'suspect',
  },
  {
    rule: 'wind-below-neighbours',
    variable: 'wind_speed_m_s',
    fault: (v, d) => (d >= 480 && d < 600 ? v * 0.45 : v),
    first: 480,
    last: 599,
    severity: 'suspect',
  },
  {
    rule: 'radiation-above-extraterrestrial',
    variable: 'solar_radiation_mj_m2_d',
    fault: (v, d) => (d === 500 ? 44 : v),
    first: 500,
    last: 500,
    severity: 'impossible',
  },
  {
    rule: 'radiation-above-clear-sky',
    variable: 'solar_radiation_mj_m2_d',
    fault: (v, d) => (d === 498 ? v * 1.2 : v),
    first: 498,
    last: 498,
    severity: 'suspect',
  },
  {
    rule: 'radiation-dark',
    variable: 'solar_radiation_mj_m2_d',
    fault: (v, d) => (d >= 500 && d < 503 ? 0.1 * (d - 499) : v),
    first: 500,
    last: 502,
    severity: 'suspect',
  },
  {
    rule: 'vapour-pressure-above-saturation',
    variable: 'dew_point_c',
    fault: (v, d) => (d === 500 ? v + 22 : v),
    first: 500,
    last: 500,
    severity: 'impossible',
  },
  {
    rule: 'dew-point-above-minimum',
    variable: 'dew_point_c',
    fault: (v, d) => (d >= 500 && d < 504 ? v + 6 : v),
    first: 500,
    last: 503,
    severity: 'suspect',
  },
  {
    rule: 'neighbour-outlier',
    variable: 'air_temperature_max_c',
    fault: (v, d) => (d === 500 ? v + 11 : v),
    first: 500,
    last: 500,
    severity: 'suspect',
  },
];

/** The record without humidity, so that the clear-sky curve is the one of elevation that the record was made with. */
function withoutHumidity(record: SiteObservations): SiteObservations {
  const { dew_point_c: _, ...values } = record.values;
  return { ...record, values };
}

describe('a planted fault', () => {
  it.each(PLANTED)('of rule $rule is found on its days', ({ rule, variable, fault, first, last, severity }) => {
    const clean = flagsOf(SOUND, rule).map(({ site, firstDay }) => `${site}/${firstDay}`);
    const found = flagsOf(withFault(SOUND, variable, 1, fault), rule).filter(
      ({ site, firstDay }) => !clean.includes(`${site}/${firstDay}`),
    );
    expect(found).toHaveLength(1);
    expect(found[0]).toMatchObject({ site: 1, firstDay: first, lastDay: last, severity });
    expect(found[0].detail).toMatch(/\d/);
  });

  it('of the level of a pyranometer gives the year and the factor that undoes it', () => {
    const dry = withoutHumidity(SOUND);
    const low = withFault(dry, 'solar_radiation_mj_m2_d', 0, (value, day) => (day >= 365 && day < 730 ? value * 0.9 : value));
    const found = flagsOf(low, 'radiation-envelope').filter(({ site, severity }) => site === 0 && severity === 'suspect');
    expect(found).toHaveLength(1);
    expect(found[0]).toMatchObject({ firstDay: 365, lastDay: 729 });
    // the year was read at 0.9 of its level
    const years = (record: SiteObservations) => check(record).pyranometers[0].years.map(({ ratio }) => ratio);
    expect(years(low)[1] / years(dry)[1]).toBeCloseTo(0.9, 6);
    // the record was made at 0.985 of the curve
    expect(years(dry)[1]).toBeCloseTo(0.985, 5);
    expect(found[0].figures?.suggested_factor).toBeCloseTo(1 / years(low)[1], 12);
  });

  it('of drift is found with its slope', () => {
    const drifting = withFault(withoutHumidity(SOUND), 'solar_radiation_mj_m2_d', 0, (value, day) => value * (1 - (0.05 * day) / 365.25));
    const [found] = flagsOf(drifting, 'radiation-drift').filter(({ site }) => site === 0);
    expect(found.severity).toBe('suspect');
    // 5 % a year of a level of about 0.98
    expect(found.value).toBeGreaterThan(-5.5);
    expect(found.value).toBeLessThan(-4.3);
    expect(flagsOf(SOUND, 'radiation-drift')).toEqual([]);
  });

  it('of level against the neighbours gives the month of the break and the change', () => {
    const moved = withFault(SOUND, 'air_temperature_min_c', 1, (value, day) => (day >= 546 ? value + 1.5 : value));
    const found = flagsOf(moved, 'inhomogeneous').filter(({ site, variable }) => site === 1 && variable === 'air_temperature_min_c');
    expect(found).toHaveLength(1);
    expect(found[0].severity).toBe('suspect');
    // day 546 is 1 July 2023
    expect(Math.abs(found[0].firstDay - 546)).toBeLessThanOrEqual(31);
    expect(Math.abs(Number(found[0].figures?.change) - 1.5)).toBeLessThan(0.3);
    expect(flagsOf(SOUND, 'inhomogeneous')).toEqual([]);
  });

  it('of dry surroundings is told by the month and offered', () => {
    const dry = withFault(
      withFault(SOUND, 'dew_point_c', 0, (value) => value - 7),
      'precipitation_mm',
      0,
      () => 0,
    );
    const { flags, aridity } = check(dry);
    expect(flags.filter(({ rule, site }) => rule === 'dew-point-far-below-minimum' && site === 0)).toMatchObject([
      { firstDay: 0, lastDay: 1095, severity: 'note' },
    ]);
    expect(aridity).toMatchObject([{ site: 0, first: 0, last: 1095, ko: 2 }]);
    // Tmin − Tdew was 1.2 to 1.5 °C before 7 °C were taken off
    expect(aridity[0].difference).toBeGreaterThan(8.2);
    expect(aridity[0].difference).toBeLessThan(8.5);
    expect(aridity[0].after).toBeLessThan(aridity[0].before);
  });

  it('of humidity is told: above saturation, never saturated, low in rain', () => {
    const humid = (rh: (day: number) => number) => withFault(SOUND, 'relative_humidity_max_pct', 0, (_, day) => rh(day));
    const over = flagsOf(
      humid((day) => (day === 500 ? 104.5 : 97)),
      'humidity-above-saturation',
    );
    expect(over).toMatchObject([{ firstDay: 500, lastDay: 500, value: 104.5, limit: 103 }]);
    const never = flagsOf(
      humid((day) => 70 + (day % 7)),
      'humidity-never-saturated',
    );
    expect(never).toMatchObject([{ firstDay: 0, lastDay: 1095, severity: 'suspect', value: 76, limit: 80 }]);
    const rain = withFault(
      humid((day) => 84 + (day % 4)),
      'precipitation_mm',
      0,
      (_, day) => (day % 20 === 1 ? 12 : 0),
    );
    // rain days are 1, 21, 41, …: day % 4 is 1 on each
    expect(flagsOf(rain, 'humidity-low-in-rain')).toMatchObject([{ value: 85, limit: 95, severity: 'suspect' }]);
  });

  it('of sunshine, the mean and net radiation is told', () => {
    const sunshine = withFault(SOUND, 'sunshine_duration_h', 0, (_, day) => (day === 180 ? 17 : 5));
    expect(flagsOf(sunshine, 'sunshine-above-daylight')).toMatchObject([
      { firstDay: 180, lastDay: 180, value: 17, severity: 'impossible' },
    ]);
    const mean = withFault(
      SOUND,
      'air_temperature_mean_c',
      0,
      (_, day) => (SOUND.values.air_temperature_max_c?.[day] ?? 0) + (day === 9 ? 1 : -5),
    );
    expect(flagsOf(mean, 'mean-outside-extremes')).toMatchObject([{ firstDay: 9, lastDay: 9, severity: 'suspect' }]);
    const net = withFault(SOUND, 'net_radiation_mj_m2_d', 0, () => 2);
    expect(flagsOf(net, 'net-radiation-off')).toMatchObject([{ severity: 'note' }]);
    const rain = withFault(SOUND, 'precipitation_mm', 0, (value, day) => (day === 498 ? 25 : value));
    expect(flagsOf(rain, 'rain-on-clear-day')).toMatchObject([{ firstDay: 498, value: 25, severity: 'note' }]);
  });
});

describe('coarse records', () => {
  it('do not call rounding a stuck logger', () => {
    const coarse = withFault(SOUND, 'wind_speed_m_s', 0, (value) => Math.round(value));
    expect(flagsOf(coarse, 'wind-stuck').filter(({ site }) => site === 0)).toEqual([]);
  });
});

/** The committed extract of 14 stations of the U.S. Climate Reference Network, 2020, which its operator checks itself. */
function climateReference(): SiteObservations {
  const [head, ...lines] = readFileSync('test/data/uscrn-daily-2020.csv', 'utf8').trim().split('\n');
  const columns = head.split(',');
  const rows = lines.map((line) => Object.fromEntries(line.split(',').map((cell, i) => [columns[i], cell])));
  const codes = [...new Set(rows.map((row) => row.wban))];
  const first = dayNumber('2020-01-01');
  const names: readonly (readonly [WeatherVariable, string])[] = [
    ['air_temperature_max_c', 't_daily_max'],
    ['air_temperature_min_c', 't_daily_min'],
    ['air_temperature_mean_c', 't_daily_mean'],
    ['precipitation_mm', 'p_daily_calc'],
    ['solar_radiation_mj_m2_d', 'solarad_daily'],
    ['relative_humidity_max_pct', 'rh_daily_max'],
    ['relative_humidity_min_pct', 'rh_daily_min'],
  ];
  const values = Object.fromEntries(names.map(([name]) => [name, new Float64Array(codes.length * 366).fill(Number.NaN)]));
  const sites = codes.map((code) => {
    const row = rows.find(({ wban }) => wban === code) ?? {};
    return {
      code,
      name: code,
      longitude: Number(row.longitude),
      latitude: Number(row.latitude),
      elevation: Number.NaN,
      windHeight: Number.NaN,
    };
  });
  for (const row of rows) {
    const at = codes.indexOf(row.wban) * 366 + dayNumber(row.lst_date) - first;
    for (const [name, column] of names) if (row[column] !== '') values[name][at] = Number(row[column]);
  }
  return { sites, startDate: isoDate(first), dayCount: 366, values };
}

describe('a checked network', () => {
  it('has nothing impossible, and doubts on fewer than one site-day in a hundred', () => {
    const record = climateReference();
    const { flags, pyranometers } = check(record);
    expect(flags.filter(({ severity }) => severity === 'impossible')).toEqual([]);
    const days = flags.filter(({ severity, lastDay, firstDay }) => severity === 'suspect' && lastDay - firstDay < 28);
    const doubted = days.reduce((sum, { firstDay, lastDay }) => sum + lastDay - firstDay + 1, 0);
    expect(doubted).toBeGreaterThan(0);
    expect(doubted / (14 * 366)).toBeLessThan(0.02);
    // clear days within a tenth of the curve at every station, although no elevation is known
    expect(pyranometers.every(({ level }) => Math.abs(level - 1) < 0.1)).toBe(true);
  });
});

describe('decisions over a new check', () => {
  const key = {
    districtId: 'd',
    sourceId: 1,
    ordinal: 0,
    variable: 'wind_speed_m_s',
    rule: 'wind-still',
    firstDay: '2024-04-01',
    lastDay: '2024-04-03',
  };
  const found: NewFlagRow = { ...key, severity: 'suspect', value: 0.1, limit: 0.5, detail: 'x', figures: {} };
  const known = (state: FlagRow['state'], value = 0.1): FlagRow =>
    ({ ...found, state, value, correctionId: 'c', limit: 0.5, figures: {} }) as FlagRow;

  it.each([
    ['an acceptance of the same value stays', [known('accepted')], [found], ['c'], ['accepted']],
    ['another value is open again', [known('accepted', 0.2)], [found], ['c'], [undefined]],
    ['a decision that was undone counts no more', [known('accepted')], [found], [], [undefined]],
    ['a flag that its decision cured is kept', [known('rejected')], [], ['c'], ['rejected']],
    ['a cured flag whose decision was undone is gone', [known('rejected')], [], [], []],
    ['an open flag that is not found again is gone', [{ ...known('open'), correctionId: null }], [], ['c'], []],
  ] as const)('%s', (_, old, now, standing, states) => {
    expect(carryStates(old, now, new Set(standing)).map(({ state }) => state)).toEqual([...states]);
  });

  it('keeps the graver of two flags with one key', () => {
    const flag = {
      site: 0,
      variable: 'wind_speed_m_s',
      rule: 'wind-still',
      firstDay: 2,
      lastDay: 2,
      value: 0.1,
      limit: 0.5,
      detail: 'x',
    } as const;
    const rows = flagRows(
      [
        { ...flag, severity: 'note' },
        { ...flag, severity: 'suspect', lastDay: 4 },
      ],
      {
        ...{ districtId: 'd', sourceId: 1, ordinals: [7], startDate: '2024-01-01' },
      },
    );
    expect(rows).toMatchObject([{ ordinal: 7, severity: 'suspect', firstDay: '2024-01-03', lastDay: '2024-01-05' }]);
  });
});
