/** What must hold however a record is holed: observed values never change, every filled value says how, and the order is kept. */
import { describe, expect, test } from 'vitest';
import { mulberry32, normalDeviate } from '../../lib/base/random.ts';
import { type FilledObservations, fillGaps } from '../../lib/weather/gaps-fill.ts';
import { isAccepted } from '../../lib/weather/gaps-regression.ts';
import { ESTIMATED_BITS, QUALITY, type SiteObservations, type WeatherVariable } from '../../lib/weather/variable.ts';

const SITES = 5;
const DAYS = 500;
const FILLED: ReadonlySet<number> = new Set([
  QUALITY.filledFromNeighbour,
  QUALITY.filledFromSource,
  QUALITY.filledInTime,
  QUALITY.filledFromNormal,
]);

/** Stations that see the same weather with noise of their own, with holes of all lengths. Invented. */
function record(seed: number): SiteObservations {
  const random = mulberry32(seed);
  const size = SITES * DAYS;
  const rows: Partial<Record<WeatherVariable, Float64Array>> = {
    air_temperature_max_c: new Float64Array(size),
    air_temperature_min_c: new Float64Array(size),
    dew_point_c: new Float64Array(size),
    solar_radiation_mj_m2_d: new Float64Array(size),
    wind_speed_m_s: new Float64Array(size),
    precipitation_mm: new Float64Array(size),
  };
  for (let day = 0; day < DAYS; day++) {
    const common = 20 + 10 * Math.sin(day / 58) + 3 * normalDeviate(random);
    const wet = random() < 0.25 ? 20 * random() : 0;
    for (let site = 0; site < SITES; site++) {
      const at = site * DAYS + day;
      const noise = () => normalDeviate(random);
      (rows.air_temperature_max_c as Float64Array)[at] = common + site + noise();
      (rows.air_temperature_min_c as Float64Array)[at] = common - 11 + site + noise();
      (rows.dew_point_c as Float64Array)[at] = common - 12 + noise();
      (rows.solar_radiation_mj_m2_d as Float64Array)[at] = Math.max(0.5, common * 0.8 + 3 * noise());
      (rows.wind_speed_m_s as Float64Array)[at] = Math.max(0, 2 + site / 2 + noise());
      (rows.precipitation_mm as Float64Array)[at] = wet === 0 ? 0 : Math.max(0, wet + 2 * noise());
    }
  }
  for (const row of Object.values(rows)) {
    for (let hole = 0; hole < 40; hole++) {
      const [from, length] = [Math.floor(random() * size), 1 + Math.floor(random() ** 3 * 80)];
      row.fill(Number.NaN, from, Math.min(size, from + length));
    }
  }
  const sites = Array.from({ length: SITES }, (_, k) => ({
    ...{ code: `S${k}`, name: `Invented ${k}`, longitude: -1 - k / 20, latitude: 40, elevation: 100, windHeight: 2 },
  }));
  return { sites, startDate: '2022-03-01', dayCount: DAYS, values: rows };
}

function each(observed: SiteObservations, filled: FilledObservations, visit: (variable: WeatherVariable, at: number) => void): void {
  for (const variable of Object.keys(observed.values) as WeatherVariable[]) for (let at = 0; at < SITES * DAYS; at++) visit(variable, at);
  expect(Object.keys(filled.values)).toEqual(Object.keys(observed.values));
}

describe.each([1, 2, 3, 4, 5, 6])('a holed record, seed %i', (seed) => {
  const observed = record(seed);
  const before = new Map(Object.entries(observed.values).map(([name, row]) => [name, row.slice()]));
  const filled = fillGaps(observed);
  const stored = (from: SiteObservations, variable: WeatherVariable, at: number) => (from.values[variable] as Float64Array)[at];

  test('observed values are never changed, and the observations stay as they came', () => {
    each(observed, filled, (variable, at) => {
      const value = stored(observed, variable, at);
      if (!Number.isNaN(value) && stored(filled, variable, at) !== value) expect.fail(`${variable} ${at} changed`);
    });
    for (const [name, row] of Object.entries(observed.values)) expect(row).toEqual(before.get(name));
  });

  test('every value that was missing and is not says how it was filled, in its quality and in the bits of its day; no other does', () => {
    let count = 0;
    each(observed, filled, (variable, at) => {
      const wasFilled = Number.isNaN(stored(observed, variable, at)) && !Number.isNaN(stored(filled, variable, at));
      const code = filled.quality[variable]?.[at] ?? 0;
      if (FILLED.has(code) !== wasFilled) expect.fail(`${variable} ${at}: code ${code}, filled ${wasFilled}`);
      if (wasFilled && (filled.flags[at] & ESTIMATED_BITS) === 0) expect.fail(`${variable} ${at} has no bit`);
      if (wasFilled) count++;
    });
    expect(count).toBeGreaterThan(200);
  });

  test('a day that an accepted neighbour measured is filled by a neighbour', () => {
    let seen = 0;
    for (const gap of filled.gaps) {
      if (!gap.neighbours.some((figures) => figures.accepted && figures.days > 0)) continue;
      for (const { neighbour, accepted } of gap.neighbours) {
        for (let day = gap.from; accepted && day <= gap.to; day++) {
          if (Number.isNaN(stored(observed, gap.variable, neighbour * DAYS + day))) continue;
          const code = filled.quality[gap.variable]?.[gap.site * DAYS + day];
          const temperature = gap.variable.startsWith('air_temperature');
          if (code !== QUALITY.filledFromNeighbour && !temperature) expect.fail(`${gap.variable} of ${gap.site} on ${day}: code ${code}`);
          seen++;
        }
      }
    }
    expect(seen).toBeGreaterThan(100);
  });

  test('only regressions within their limits fill; the days of a gap add up', () => {
    for (const gap of filled.gaps) {
      for (const figures of gap.neighbours) if (figures.days > 0) expect(isAccepted(figures)).toBe(true);
      const { neighbour, source, inTime, normal, left } = gap.days;
      expect(neighbour + source + inTime + normal + left).toBe(gap.to - gap.from + 1);
    }
  });

  test('rain, radiation and wind are never negative, and no maximum lies below its minimum where either was filled', () => {
    each(observed, filled, (variable, at) => {
      if (variable === 'dew_point_c' || variable.startsWith('air_temperature')) return;
      if (stored(filled, variable, at) < 0) expect.fail(`${variable} ${at} is negative`);
    });
    for (let at = 0; at < SITES * DAYS; at++) {
      if ((filled.flags[at] & ESTIMATED_BITS) === 0) continue;
      const [max, min] = [stored(filled, 'air_temperature_max_c', at), stored(filled, 'air_temperature_min_c', at)];
      const measured = stored(observed, 'air_temperature_max_c', at) < stored(observed, 'air_temperature_min_c', at);
      if (max < min && !measured) expect.fail(`site-day ${at}: ${max} below ${min}`);
    }
  });
});
