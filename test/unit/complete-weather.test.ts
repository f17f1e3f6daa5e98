/**
 * Completing a site-day: which of the things a site reports is used, what is flagged, and what the trace tells. Numbers are those of the
 * worked examples of FAO Irrigation and Drainage Paper 56 (1998).
 */
import { describe, expect, test } from 'vitest';
import type { WorkingStep } from '../../lib/base/working.ts';
import { completeWeather, traceCompletion } from '../../lib/energy/complete-weather.ts';
import { fillGaps } from '../../lib/weather/gaps-fill.ts';
import { FALLBACK, fallbackNames, type Site, type SiteObservations, type WeatherVariable } from '../../lib/weather/variable.ts';

const NONE = Number.NaN;
const OPTIONS = { defaultElevation: 150, radiationCoefficient: 0.16 };
const UCCLE: Site = { code: 'U1', name: 'Site U1 (invented)', longitude: 4.35, latitude: 50.8, elevation: 100, windHeight: 10 };
const LYON: Site = { code: 'L1', name: 'Site L1 (invented)', longitude: 4.83, latitude: 45.72, elevation: 200, windHeight: 10 };
const BANGKOK: Site = { code: 'B1', name: 'Site B1 (invented)', longitude: 100.5, latitude: 13.73, elevation: 2, windHeight: 2 };

/** Every form of humidity at once: 6 July at Uccle, FAO-56 Example 18, with others that lead elsewhere. */
const HUMIDITY = {
  vapour_pressure_kpa: 1.3,
  dew_point_c: 11,
  relative_humidity_max_pct: 84,
  relative_humidity_min_pct: 63,
  relative_humidity_mean_pct: 70,
  specific_humidity_kg_kg: 0.008,
} as const;

type DayValues = Partial<Record<WeatherVariable, number>>;

function oneDay(site: Site, startDate: string, day: DayValues): SiteObservations {
  const values = Object.fromEntries(Object.entries(day).map(([name, value]) => [name, Float64Array.of(value)]));
  return { sites: [site], startDate, dayCount: 1, values };
}

function uccle(day: DayValues): SiteObservations {
  return oneDay(UCCLE, '2023-07-06', { air_temperature_max_c: 21.5, air_temperature_min_c: 12.3, precipitation_mm: 0, ...day });
}

function flagsOf(observations: SiteObservations): string[] {
  return fallbackNames(completeWeather(observations, OPTIONS).flags[0]);
}

describe('humidity, best first', () => {
  const measured = { solar_radiation_mj_m2_d: 22.07, wind_speed_m_s: 2.78 };
  const steps: [name: string, without: WeatherVariable[], expected: number, digits: number, flags: string[]][] = [
    ['vapour pressure as given', [], 1.3, 9, []],
    ['dew point 11 °C: Table 2.3 prints 1.313', ['vapour_pressure_kpa'], 1.313, 3, ['humidityFromDewPoint']],
    ['both extremes: Example 18 prints 1.409', ['dew_point_c'], 1.409, 3, []],
    ['maximum alone: Eq 18, 0.84 × 1.431 (printed e°)', ['relative_humidity_min_pct'], 0.84 * 1.431, 3, ['humidityFromRhMax']],
    ['mean: Eq 19, 0.70 × 1.997 (printed es)', ['relative_humidity_max_pct'], 0.7 * 1.997, 3, ['humidityFromRhMean']],
    ['specific humidity: 0.008 × 100.12 / (0.622 + 0.378 × 0.008)', ['relative_humidity_mean_pct'], 1.2815, 3, []],
    ['minimum temperature: Example 18 prints 1.431', ['specific_humidity_kg_kg'], 1.431, 3, ['humidityFromMinimumTemperature']],
  ];
  steps.forEach(([name, , expected, digits, flags], i) => {
    const gone = steps.slice(0, i + 1).flatMap(([, without]) => without);
    test(name, () => {
      const left = Object.fromEntries(Object.entries(HUMIDITY).filter(([variable]) => !gone.includes(variable as WeatherVariable)));
      const observations = uccle({ ...measured, ...left });
      const { actualVapourPressure } = completeWeather(observations, OPTIONS);
      expect(Math.abs(actualVapourPressure[0] - expected)).toBeLessThanOrEqual(0.5 * 10 ** -digits + 1e-4);
      expect(flagsOf(observations)).toEqual(flags);
    });
  });
  test('measured pressure goes before that of the elevation', () => {
    const { actualVapourPressure } = completeWeather(uccle({ specific_humidity_kg_kg: 0.008, pressure_kpa: 90 }), OPTIONS);
    expect(actualVapourPressure[0]).toBeCloseTo((0.008 * 90) / (0.622 + 0.378 * 0.008), 9);
  });
  test('never above saturation: Example 18 prints es 1.997', () => {
    const { actualVapourPressure } = completeWeather(uccle({ vapour_pressure_kpa: 3 }), OPTIONS);
    expect(Math.abs(actualVapourPressure[0] - 1.997)).toBeLessThanOrEqual(0.0005);
  });
});

describe('radiation, best first', () => {
  test('measured radiation is kept, even above the clear sky', () => {
    const observations = uccle({ solar_radiation_mj_m2_d: 33, sunshine_duration_h: 9.25, wind_speed_m_s: 2, vapour_pressure_kpa: 1.4 });
    expect(completeWeather(observations, OPTIONS).solarRadiation[0]).toBe(33);
    expect(flagsOf(observations)).toEqual([]);
  });
  test('sunshine 9.25 h: Example 18 prints 22.07', () => {
    const observations = uccle({ sunshine_duration_h: 9.25, wind_speed_m_s: 2, vapour_pressure_kpa: 1.4 });
    expect(Math.abs(completeWeather(observations, OPTIONS).solarRadiation[0] - 22.07)).toBeLessThanOrEqual(0.005);
    expect(flagsOf(observations)).toEqual(['radiationFromSunshine']);
  });
  test('temperature range by the coast: Example 16 prints 21.9', () => {
    const observations = oneDay(BANGKOK, '2023-04-15', {
      air_temperature_max_c: 34.8,
      air_temperature_min_c: 25.6,
      vapour_pressure_kpa: 2.85,
    });
    const { solarRadiation } = completeWeather(observations, { ...OPTIONS, radiationCoefficient: 0.19 });
    expect(Math.abs(solarRadiation[0] - 21.9)).toBeLessThanOrEqual(0.05);
  });
  test('an estimate stops at the clear sky: Example 18 prints Rso 30.90', () => {
    const observations = oneDay(UCCLE, '2023-07-06', { air_temperature_max_c: 40, air_temperature_min_c: 8 });
    expect(Math.abs(completeWeather(observations, OPTIONS).solarRadiation[0] - 30.9)).toBeLessThanOrEqual(0.005);
    expect(flagsOf(observations)).toContain('radiationCappedAtClearSky');
  });
  test('polar night has none', () => {
    const arctic = { ...UCCLE, latitude: 75 };
    const { solarRadiation } = completeWeather(
      oneDay(arctic, '2023-12-21', { air_temperature_max_c: -8, air_temperature_min_c: -15 }),
      OPTIONS,
    );
    expect(solarRadiation[0]).toBe(0);
  });
});

describe('wind, rain, elevation', () => {
  test('10 km/h at 10 m: Example 18 prints 2.078 from 2.78', () => {
    const { windSpeed2m } = completeWeather(uccle({ wind_speed_m_s: 2.78 }), OPTIONS);
    expect(Math.abs(windSpeed2m[0] - 2.078)).toBeLessThanOrEqual(0.0025);
  });
  test('an anemometer of unknown height is taken to stand at the standard 10 m: Example 14 prints 2.4 from 3.2', () => {
    const site = { ...UCCLE, windHeight: NONE };
    const observations = oneDay(site, '2023-07-06', { air_temperature_max_c: 21, air_temperature_min_c: 12, wind_speed_m_s: 3.2 });
    expect(Math.abs(completeWeather(observations, OPTIONS).windSpeed2m[0] - 2.4)).toBeLessThanOrEqual(0.05);
  });
  test('no wind is 2 m/s, no rain is none, and both are flagged', () => {
    const observations = uccle({ precipitation_mm: NONE, solar_radiation_mj_m2_d: 22, vapour_pressure_kpa: 1.4 });
    const completed = completeWeather(observations, OPTIONS);
    expect(completed.windSpeed2m[0]).toBe(2);
    expect(completed.precipitation[0]).toBe(0);
    expect(flagsOf(observations)).toEqual(['windAssumed', 'precipitationAssumedZero']);
  });
  test('a site without elevation takes that of the district: cap of an estimate at (0.75 + 2e-5 × 150) Ra', () => {
    const day = { air_temperature_max_c: 40, air_temperature_min_c: 8 };
    const unknown = oneDay({ ...UCCLE, elevation: NONE }, '2023-07-06', day);
    // Example 18 prints Ra 41.09
    expect(Math.abs(completeWeather(unknown, OPTIONS).solarRadiation[0] - (0.75 + 2e-5 * 150) * 41.09)).toBeLessThanOrEqual(0.005);
    expect(flagsOf(unknown)).toContain('elevationAssumed');
  });
});

describe('temperature alone: Lyon in July, Example 20', () => {
  const observations = oneDay(LYON, '2023-07-15', { air_temperature_max_c: 26.6, air_temperature_min_c: 14.8 });
  test('prints ea 1.68, Rs 22.29, and 2 m/s is assumed', () => {
    const completed = completeWeather(observations, OPTIONS);
    expect(Math.abs(completed.actualVapourPressure[0] - 1.68)).toBeLessThanOrEqual(0.005);
    expect(Math.abs(completed.solarRadiation[0] - 22.29)).toBeLessThanOrEqual(0.005);
    expect(completed.windSpeed2m[0]).toBe(2);
  });
});

describe('a day without usable temperature carries nothing', () => {
  const cases: [string, DayValues][] = [
    ['both extremes missing', {}],
    ['one extreme missing', { air_temperature_max_c: 20 }],
    ['mean alone', { air_temperature_mean_c: 17 }],
    ['maximum below minimum', { air_temperature_max_c: 5, air_temperature_min_c: 9 }],
  ];
  test.each(cases)('%s', (_name, day) => {
    const completed = completeWeather(oneDay({ ...UCCLE, elevation: NONE }, '2023-07-06', day), OPTIONS);
    expect(completed.airTemperatureMax[0]).toBeNaN();
    expect(completed.airTemperatureMin[0]).toBeNaN();
    expect(completed.actualVapourPressure[0]).toBeNaN();
    expect(completed.solarRadiation[0]).toBeNaN();
    expect(completed.windSpeed2m[0]).toBeNaN();
    expect(completed.precipitation[0]).toBeNaN();
    expect(completed.flags[0]).toBe(0);
  });
});

describe('several sites and days', () => {
  const observations: SiteObservations = {
    sites: [UCCLE, LYON],
    startDate: '2023-07-05',
    dayCount: 3,
    values: {
      air_temperature_max_c: Float64Array.of(21, NONE, 23, 26, 27, 28),
      air_temperature_min_c: Float64Array.of(11, 12, 13, 14, 15, 16),
      precipitation_mm: Float64Array.of(1, 2, 3, 4, 5, 6),
    },
  };
  test('keeps site-major order, and filled temperatures bring their flag', () => {
    const completed = completeWeather(fillGaps(observations), OPTIONS);
    expect([...completed.airTemperatureMax]).toEqual([21, 22, 23, 26, 27, 28]);
    expect([...completed.precipitation]).toEqual([1, 2, 3, 4, 5, 6]);
    expect([...completed.flags].map((bits) => (bits & FALLBACK.temperatureFilledInTime) !== 0)).toEqual([
      false,
      true,
      false,
      false,
      false,
      false,
    ]);
    expect(completed.solarRadiation[0]).not.toBe(completed.solarRadiation[3]);
  });
  test('the trace of each site-day ends on the same bits as the batch', () => {
    const filled = fillGaps(observations);
    const completed = completeWeather(filled, OPTIONS);
    for (let site = 0; site < 2; site++) {
      for (let day = 0; day < 3; day++) {
        const steps: WorkingStep[] = [];
        const one = traceCompletion(filled, site, day, OPTIONS, { step: (step) => steps.push(step) });
        const at = site * 3 + day;
        const told = (symbol: string) => steps.find((step) => step.symbol === symbol)?.result;
        expect(steps.map(({ symbol }) => symbol)).toEqual(['Tmax', 'Tmin', 'ea', 'Rs', 'u2', 'P']);
        expect(told('ea')).toBe(completed.actualVapourPressure[at]);
        expect(told('Rs')).toBe(completed.solarRadiation[at]);
        expect(told('u2')).toBe(completed.windSpeed2m[at]);
        expect(told('Tmax')).toBe(completed.airTemperatureMax[at]);
        expect(one.flags[0]).toBe(completed.flags[at]);
      }
    }
  });
  test('the trace says how a filled temperature and an estimate were got', () => {
    const steps: WorkingStep[] = [];
    traceCompletion(fillGaps(observations), 0, 1, OPTIONS, { step: (step) => steps.push(step) });
    const sources = Object.fromEntries(steps.map(({ symbol, source }) => [symbol, source]));
    expect(sources.Tmax).toContain('straight line');
    expect(sources.ea).toBe('FAO-56 Eq. 48');
    expect(sources.Rs).toBe('FAO-56 Eq. 50');
  });
});

describe('refusals name what, the value, the limit and the place', () => {
  test('an array of the wrong length', () => {
    const bad = { ...uccle({}), dayCount: 2 };
    expect(() => completeWeather(bad, OPTIONS)).toThrow('1 values, expected 1 sites × 2 days = 2');
  });
  test('an anemometer in the grass', () => {
    const low = oneDay({ ...UCCLE, windHeight: 0.05 }, '2023-07-06', { air_temperature_max_c: 20, air_temperature_min_c: 10 });
    expect(() => completeWeather(low, OPTIONS)).toThrow('wind height 0.05 m below limit 0.5 m (site U1)');
  });
  test('a day outside the observations', () => {
    expect(() => traceCompletion(uccle({}), 0, 1, OPTIONS, { step() {} })).toThrow('day 1 outside limits');
  });
  test('a radiation coefficient of the wrong order', () => {
    expect(() => completeWeather(uccle({}), { ...OPTIONS, radiationCoefficient: 16 })).toThrow('outside limits 0–0.3');
  });
});
