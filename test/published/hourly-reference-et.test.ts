/**
 * Reference ET of hours summed to the day.
 *
 * Oak Park, Ireland, 17 to 19 June 2017: Met Éireann, CC BY 4.0 (test/data/ATTRIBUTION.md). The expected values were worked out apart from this
 * code, from FAO-56 Eq. 21–35, 47, 50, 53, 54 and the hourly constants of ASCE 2005 Table 1, in a script of its own (Python 3.11). The night before
 * the first day goes by that day's own sky, every later one by the evening before.
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { dayNumber } from '../../lib/base/civil-date.ts';
import { completeWeather } from '../../lib/energy/complete-weather.ts';
import {
  distributedRadiation,
  hourlyBudget,
  hourlyExtraterrestrialRadiation,
  hourlySumReferenceEt,
  siteHours,
} from '../../lib/energy/hourly-day.ts';
import { referenceEtDay } from '../../lib/energy/reference-day.ts';
import { solarNoon } from '../../lib/energy/sun-clock.ts';
import { readWeather } from '../../lib/files/weather-csv.ts';
import { importContext } from '../support/import-context.ts';
import { validation } from '../support/validation.ts';

const check = validation(import.meta.url, {
  title: 'Hourly reference ET of measured hours',
  source: 'Met Éireann, CC BY 4.0; FAO-56 Eq. 28 and 53',
  provenance: 'measured',
});

const OAK_PARK = { code: 'OAK PARK', name: 'Oak Park', longitude: -6.915, latitude: 52.861, elevation: 62, windHeight: 10 };
const PLACE = { ...OAK_PARK, zoneHours: 0 };
const FIRST = '2017-06-17';

async function readOakPark() {
  const bytes = new Uint8Array(readFileSync(new URL('../data/met-eireann-oak-park-hourly-2017-06.csv', import.meta.url)));
  const context = importContext({ knownSites: [{ ...OAK_PARK, zone: 'Europe/Dublin' }] });
  const reading = await readWeather([{ name: 'oak-park.csv', bytes }], { stamp: 'start', stampZone: 'UTC' }, context, () => undefined);
  if (reading.staged.kind !== 'weather') throw new Error('no weather');
  const { blocks } = reading.staged;
  const part = (variable: string, steps: number) => {
    const values = blocks.find((block) => block.variable === variable)?.values ?? new Float32Array(0);
    return Float64Array.from(values.subarray(16 * steps, 19 * steps));
  };
  const named = (steps: number) => {
    const own = blocks.filter((block) => block.steps === steps);
    return Object.fromEntries(own.map(({ variable }) => [variable, part(variable, steps)]));
  };
  return { hours: named(24), days: named(1) };
}

const { hours, days } = await readOakPark();

describe('three days of a station without radiation', () => {
  const observations = { sites: [OAK_PARK], startDate: FIRST, dayCount: 3, values: days };
  const completed = completeWeather(observations, { defaultElevation: 62, radiationCoefficient: 0.16 });
  const solved = siteHours(PLACE, { firstDay: dayNumber(FIRST), dayCount: 3 }, hours, completed);

  it('hours make the day: extremes, means, sums', () => {
    expect([...days.air_temperature_max_c].map((value) => value.toFixed(1))).toEqual(['25.3', '25.8', '25.7']);
    expect([...days.air_temperature_min_c].map((value) => value.toFixed(1))).toEqual(['13.2', '11.7', '13.0']);
    [19.2917, 18.4208, 19.8667].forEach((mean, day) => {
      expect(days.air_temperature_mean_c[day]).toBeCloseTo(mean, 3);
    });
    // mean of e°(T) RH / 100 over the hours (FAO-56 Eq. 54), kPa; knots to m/s, at 10 m
    [1.60475, 1.61793, 1.74217].forEach((pressure, day) => {
      expect(days.vapour_pressure_kpa[day]).toBeCloseTo(pressure, 4);
    });
    [2.78657, 1.71481, 1.67194].forEach((wind, day) => {
      expect(days.wind_speed_m_s[day]).toBeCloseTo(wind, 4);
    });
    expect([...days.precipitation_mm]).toEqual([0, 0, 0]);
  });

  it.each([
    ['fao56', 'short', [4.3157, 4.1761, 4.2049]],
    ['asce2005', 'short', [4.5346, 4.3128, 4.3561]],
    ['asce2005', 'tall', [5.5858, 4.9529, 5.0573]],
  ] as const)('%s, %s surface', (method, surface, expected) => {
    const sums = hourlySumReferenceEt(PLACE, solved, { method, surface });
    expected.forEach((value, day) => {
      expect(sums[day]).toBeCloseTo(value, 3);
    });
  });

  it('agrees with the equation of the day within a tenth', () => {
    const sums = hourlySumReferenceEt(PLACE, solved, { method: 'fao56', surface: 'short' });
    [4.4423, 4.4246, 4.2419].forEach((daily, day) => {
      const input = {
        airTemperatureMax: completed.airTemperatureMax[day],
        airTemperatureMin: completed.airTemperatureMin[day],
        actualVapourPressure: completed.actualVapourPressure[day],
        solarRadiation: completed.solarRadiation[day],
        windSpeed2m: completed.windSpeed2m[day],
      };
      const place = { latitude: PLACE.latitude, elevation: PLACE.elevation, dayOfYear: 168 + day };
      expect(referenceEtDay({ ...input, ...place, method: 'fao56', surface: 'short' }, null)).toBeCloseTo(daily, 2);
      check.held(sums[day] / daily, 1, 0.1);
    });
  });

  it('every hour closes: Rn = G + λE + H; a gap of two hours is bridged, one of three is not', () => {
    for (const hour of hourlyBudget(PLACE, solved, 1, { method: 'asce2005', surface: 'tall' })) {
      expect(hour.soilHeatFlux + hour.latentHeatFlux + hour.sensibleHeatFlux).toBeCloseTo(hour.netRadiation, 12);
    }
    const without = (from: number, to: number) => {
      const temperature = Float64Array.from(hours.hour_air_temperature_c);
      temperature.fill(Number.NaN, 24 + from, 24 + to);
      const gap = siteHours(
        PLACE,
        { firstDay: dayNumber(FIRST), dayCount: 3 },
        { ...hours, hour_air_temperature_c: temperature },
        completed,
      );
      return hourlySumReferenceEt(PLACE, gap, { method: 'fao56', surface: 'short' });
    };
    check.held(without(13, 15)[1], 4.1761, 0.1);
    expect(without(13, 16)[1]).toBeNaN();
    expect(without(13, 16)[0]).toBeCloseTo(4.3157, 3);
  });
});

describe('the sun over 24 hours', () => {
  // printed or recomputed daily values: FAO-56 Example 18 (50.8° N, day 187) and 40° N, day 15
  it.each([
    [50.8, 187, 41.0884],
    [40, 15, 15.0114],
    [-20, 246, 32.19],
  ])('hourly Ra at %s°, day %i, sums to the daily %f MJ m⁻²', (latitude, day, daily) => {
    for (const [longitude, zoneHours] of [
      [0, 0],
      [-105.9, -7],
      [151.2, 10],
    ]) {
      const hours = hourlyExtraterrestrialRadiation({ latitude, longitude, elevation: 0, windHeight: 2, zoneHours }, day);
      expect(hours.reduce((sum, value) => sum + value, 0)).toBeCloseTo(daily, daily === 32.19 ? 1 : 3);
    }
  });

  it('a day’s radiation is shared without loss, and none of it at night', () => {
    const hours = distributedRadiation(PLACE, dayNumber(FIRST), 20);
    expect(hours.reduce((sum, value) => sum + value, 0)).toBeCloseTo(20, 10);
    expect(hours[0]).toBe(0);
  });

  it('solar noon by the clock: 15° west of the zone is an hour late, apart from the season', () => {
    // FAO-56 Eq. 31: 0.06667 h per degree; the seasonal correction of day 274 is 0.1889 h (Example 19)
    expect(solarNoon(274, -16.25, -1)).toBeCloseTo(12 - (0.06667 * (-16.25 + 15) + 0.1889), 3);
  });
});
