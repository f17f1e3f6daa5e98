/** Gaps filled by the stated order. The records are invented so that every expected value can be worked by hand. */
import { describe, expect, test } from 'vitest';
import { completeWeather } from '../../lib/energy/complete-weather.ts';
import { type FilledObservations, fillGaps } from '../../lib/weather/gaps-fill.ts';
import { methodSpans, recordMethods } from '../../lib/weather/gaps-summary.ts';
import { FALLBACK, fallbackNames, QUALITY, type Site, type SiteObservations, type WeatherVariable } from '../../lib/weather/variable.ts';

const NONE = Number.NaN;
const DAYS = 90;
/** first and last day of the hole */
const [HOLE, END] = [40, 44];

function site(code: string, longitude: number): Site {
  return { code, name: `Site ${code} (invented)`, longitude, latitude: 36, elevation: 100, windHeight: 2 };
}

/** A wave that no straight line follows. */
const wave = (day: number) => 20 + 5 * Math.sin(day / 3);

function observe(rows: Partial<Record<WeatherVariable, ((day: number) => number)[]>>, start = '2024-05-01', days = DAYS): SiteObservations {
  const count = Object.values(rows)[0]?.length ?? 0;
  const values: Partial<Record<WeatherVariable, Float64Array>> = {};
  for (const [name, ofSite] of Object.entries(rows) as [WeatherVariable, ((day: number) => number)[]][]) {
    values[name] = Float64Array.from({ length: count * days }, (_, i) => ofSite[Math.floor(i / days)](i % days));
  }
  return { sites: Array.from({ length: count }, (_, i) => site(`S${i}`, -119 + i / 10)), startDate: start, dayCount: days, values };
}

const holed = (value: (day: number) => number) => (day: number) => (day >= HOLE && day <= END ? NONE : value(day));

function inHole(filled: FilledObservations, variable: WeatherVariable): number[] {
  return [...(filled.values[variable] as Float64Array).subarray(HOLE, END + 1)];
}

function codesInHole(filled: FilledObservations, variable: WeatherVariable): Set<number> {
  return new Set((filled.quality[variable] as Uint8Array).subarray(HOLE, END + 1));
}

describe('from a neighbour', () => {
  test('a site that runs at 1 + 0.9 × its neighbour takes exactly that', () => {
    const filled = fillGaps(observe({ air_temperature_max_c: [holed((day) => 1 + 0.9 * wave(day)), wave] }));
    inHole(filled, 'air_temperature_max_c').forEach((value, i) => {
      expect(value).toBeCloseTo(1 + 0.9 * wave(HOLE + i), 9);
    });
    expect(codesInHole(filled, 'air_temperature_max_c')).toEqual(new Set([QUALITY.filledFromNeighbour]));
    expect(fallbackNames(filled.flags[HOLE])).toEqual(['temperatureFromNeighbour']);
    const [gap] = filled.gaps;
    expect(gap).toMatchObject({ site: 0, from: HOLE, to: END, days: { neighbour: 5, source: 0, inTime: 0, normal: 0, left: 0 } });
    expect(gap.neighbours[0].slope).toBeCloseTo(0.9, 9);
    expect(gap.neighbours[0].n).toBe(85);
  });

  test('a slope outside 0.7 to 1.3 is not taken, and the figures of the refusal are kept', () => {
    const filled = fillGaps(observe({ wind_speed_m_s: [holed((day) => 0.5 * wave(day)), wave] }));
    expect(inHole(filled, 'wind_speed_m_s').every(Number.isNaN)).toBe(true);
    expect(filled.gaps[0].neighbours[0]).toMatchObject({ accepted: false, days: 0 });
    expect(filled.gaps[0].neighbours[0].slope).toBeCloseTo(0.5, 9);
  });

  test('the best r² comes first, though it stands further off; where it has a hole itself, the next', () => {
    const rough = (day: number) => wave(day) + (day % 2 === 0 ? 1 : -1);
    const best = (day: number) => (day === HOLE ? NONE : wave(day) + 2);
    const filled = fillGaps(observe({ dew_point_c: [holed(wave), rough, best] }));
    const values = inHole(filled, 'dew_point_c');
    expect(values[1]).toBeCloseTo(wave(HOLE + 1), 9);
    expect(values[0]).not.toBeCloseTo(wave(HOLE), 3);
    expect(filled.gaps[0].neighbours.map(({ neighbour, days }) => [neighbour, days])).toEqual([
      [2, 4],
      [1, 1],
    ]);
  });

  test('rain: dry at the neighbour is dry, and a regression below zero is zero', () => {
    const rain = (day: number) => (day % 3 === 0 ? 4 + (day % 5) : 0);
    const site0 = holed((day) => Math.max(0, 1.1 * rain(day) - 0.4));
    const filled = fillGaps(observe({ precipitation_mm: [site0, rain] }));
    const values = inHole(filled, 'precipitation_mm');
    values.forEach((value, i) => {
      if (rain(HOLE + i) === 0) expect(value).toBe(0);
      else expect(value).toBeGreaterThan(0);
    });
    expect(fallbackNames(filled.flags[HOLE])).toEqual(['precipitationFromNeighbour']);
  });

  test('humidity is filled only where nothing of humidity was measured', () => {
    const rows = {
      dew_point_c: [holed((d) => wave(d) - 10), (d: number) => wave(d) - 9],
      relative_humidity_mean_pct: [() => 55, () => 50],
    };
    const filled = fillGaps(observe(rows));
    expect(inHole(filled, 'dew_point_c').every(Number.isNaN)).toBe(true);
    expect(filled.gaps).toEqual([]);
  });

  test('a value that was rejected is a gap', () => {
    const rejected = observe({ air_temperature_max_c: [holed(wave), wave] });
    const quality = Uint8Array.from({ length: 2 * DAYS }, (_, i) => (i >= HOLE && i <= END ? QUALITY.rejected : QUALITY.measured));
    const filled = fillGaps({ ...rejected, quality: { air_temperature_max_c: quality } });
    expect(codesInHole(filled, 'air_temperature_max_c')).toEqual(new Set([QUALITY.filledFromNeighbour]));
  });
});

describe('from another source', () => {
  const other = (value: (day: number) => number, variable: WeatherVariable) =>
    observe({ [variable]: [(day: number) => value(day - 10)] }, '2024-04-21', DAYS + 20);

  test('temperature less the mean difference of the common days', () => {
    const filled = fillGaps(observe({ air_temperature_max_c: [holed(wave)] }), [other((day) => wave(day) + 3, 'air_temperature_max_c')]);
    inHole(filled, 'air_temperature_max_c').forEach((value, i) => {
      expect(value).toBeCloseTo(wave(HOLE + i), 9);
    });
    expect(filled.gaps[0].sources[0]).toMatchObject({ by: 'difference', n: 85, days: 5, source: 0, site: 0 });
    expect(filled.gaps[0].sources[0].adjustment).toBeCloseTo(-3, 9);
    expect(fallbackNames(filled.flags[HOLE])).toEqual(['temperatureFromSource']);
  });

  test('radiation times the ratio of the sums', () => {
    const filled = fillGaps(observe({ solar_radiation_mj_m2_d: [holed(wave)] }), [
      other((day) => 1.25 * wave(day), 'solar_radiation_mj_m2_d'),
    ]);
    expect(inHole(filled, 'solar_radiation_mj_m2_d')[2]).toBeCloseTo(wave(HOLE + 2), 9);
    expect(filled.gaps[0].sources[0].adjustment).toBeCloseTo(0.8, 9);
  });

  test('a neighbour within its limits goes before it; rain is never taken from it', () => {
    const rows = { air_temperature_max_c: [holed(wave), (day: number) => wave(day) + 1], precipitation_mm: [holed(() => 1), () => NONE] };
    const filled = fillGaps(observe(rows), [other((day) => wave(day) + 3, 'air_temperature_max_c'), other(() => 1, 'precipitation_mm')]);
    expect(codesInHole(filled, 'air_temperature_max_c')).toEqual(new Set([QUALITY.filledFromNeighbour]));
    expect(inHole(filled, 'precipitation_mm').every(Number.isNaN)).toBe(true);
  });
});

describe('in time, and from normals', () => {
  test('temperature on the straight line over five days, when nobody nearby measured', () => {
    const filled = fillGaps(observe({ air_temperature_max_c: [holed((day) => 10 + day)] }));
    expect(inHole(filled, 'air_temperature_max_c')).toEqual([50, 51, 52, 53, 54]);
    expect(codesInHole(filled, 'air_temperature_max_c')).toEqual(new Set([QUALITY.filledInTime]));
  });

  test('wind takes its normal of other years, not the 2 m/s of a place without a record', () => {
    const day = 365 + HOLE;
    const record = observe({ wind_speed_m_s: [(d) => (d === day ? NONE : 3.5)] }, '2022-05-01', 730);
    const filled = fillGaps(record);
    expect(filled.values.wind_speed_m_s?.[day]).toBe(3.5);
    expect(fallbackNames(filled.flags[day])).toEqual(['windFromNormal']);
  });

  test('an extreme that would contradict the measured one is not taken', () => {
    const max = holed(() => 10);
    const filled = fillGaps(observe({ air_temperature_max_c: [max], air_temperature_min_c: [(day) => (day === HOLE ? 18 : 5)] }));
    expect(filled.values.air_temperature_max_c?.[HOLE]).toBeNaN();
    expect(filled.values.air_temperature_min_c?.[HOLE]).toBe(18);
    expect(filled.values.air_temperature_max_c?.[HOLE + 1]).toBe(10);
  });
});

describe('the completed record', () => {
  const record = observe({
    air_temperature_max_c: [wave, wave],
    air_temperature_min_c: [(d) => wave(d) - 12, (d) => wave(d) - 12],
    wind_speed_m_s: [holed(() => 3), () => NONE],
    solar_radiation_mj_m2_d: [holed(wave), (d) => wave(d) + 1],
  });
  const filled = fillGaps(record);
  const completed = completeWeather(filled, { defaultElevation: 0, radiationCoefficient: 0.16 });

  test('a filled value stands before the published estimate and is flagged by its method', () => {
    expect(completed.solarRadiation[HOLE]).toBeCloseTo(wave(HOLE), 9);
    expect(completed.flags[HOLE] & FALLBACK.radiationFromNeighbour).not.toBe(0);
    expect(completed.flags[HOLE] & FALLBACK.radiationFromTemperatureRange).toBe(0);
    expect(completed.flags[HOLE - 1] & FALLBACK.radiationFromNeighbour).toBe(0);
  });

  test('is told day by day: measured, filled, estimated', () => {
    expect(methodSpans(recordMethods(filled, completed, 0, 'radiation'))).toEqual([
      { code: QUALITY.measured, from: 0, to: HOLE - 1 },
      { code: QUALITY.filledFromNeighbour, from: HOLE, to: END },
      { code: QUALITY.measured, from: END + 1, to: DAYS - 1 },
    ]);
    expect(methodSpans(recordMethods(filled, completed, 0, 'wind')).map(({ code }) => code)).toEqual([
      QUALITY.measured,
      QUALITY.estimated,
      QUALITY.measured,
    ]);
    expect(methodSpans(recordMethods(filled, completed, 1, 'wind'))).toEqual([{ code: QUALITY.estimated, from: 0, to: DAYS - 1 }]);
  });
});
