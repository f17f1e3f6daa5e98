/** Weather at parcels: means of the sites by hand, and the loop over days against the equation solved day by day. */
import { describe, expect, test } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import { referenceEtDay } from '../../lib/energy/reference-day.ts';
import { packSeason } from '../../lib/season/pack.ts';
import { placeWeather } from '../../lib/season/parcel-weather.ts';
import type { ParcelInput, SeasonInput } from '../../lib/season/types.ts';
import { makeWeather, makeWeights, randomSeason } from '../support/random-season.ts';

const DAYS = 120;
const SERIES = ['airTemperatureMax', 'airTemperatureMin', 'solarRadiation', 'windSpeed2m', 'precipitation'] as const;

/** A season whose parcels listen to `sites` sites; with gaps, a tenth of the site-days is missing (never all of a day). */
function seasonOf(seed: number, sites: number, gaps: boolean): SeasonInput {
  const random = mulberry32(seed);
  const season = randomSeason({ seed, parcels: 6, days: DAYS, sites });
  const weather = makeWeather(random, sites, DAYS);
  if (gaps) {
    for (let site = 1; site < sites; site++) {
      for (let d = 0; d < DAYS; d++) if (random() < 0.1) weather.airTemperatureMax[site * DAYS + d] = Number.NaN;
    }
  }
  const first = (parcel: ParcelInput) =>
    parcel.weights[0].weight > 0 ? parcel.weights : [{ site: 0, weight: 0.3 }, ...parcel.weights.slice(1)];
  const parcels = season.parcels.map((parcel) => ({ ...parcel, weights: makeWeights(random, sites) }));
  return { ...season, weather, parcels: parcels.map((parcel) => ({ ...parcel, weights: first(parcel) })) };
}

/** Mean of a series at a parcel on a day over the sites that have the whole day, reckoned plainly. */
function plainMean(input: SeasonInput, parcel: ParcelInput, name: (typeof SERIES)[number] | 'actualVapourPressure', day: number): number {
  let sum = 0;
  let weights = 0;
  for (const { site, weight } of parcel.weights) {
    const at = site * DAYS + day;
    if (Number.isNaN(input.weather.airTemperatureMax[at])) continue;
    const lapse = name.startsWith('airTemperature') ? input.settings.lapseRate * (input.sites[site].elevation - parcel.elevation) : 0;
    sum += weight * (input.weather[name][at] + lapse);
    weights += weight;
  }
  return sum / weights;
}

describe.each([
  ['one site', 1, false],
  ['four sites', 4, false],
  ['four sites with gaps', 4, true],
  ['seven sites', 7, false],
  ['eight sites with gaps', 8, true],
] as const)('%s', (_name, sites, gaps) => {
  test.each([1, 2, 3])('seed %d: every series is the weighted mean of the sites present', (seed) => {
    const input = seasonOf(seed, sites, gaps);
    const season = packSeason(input);
    for (const parcel of input.parcels) {
      placeWeather(season, parcel);
      for (const name of SERIES) {
        for (let d = 0; d < DAYS; d++) {
          const expected = plainMean(input, parcel, name, d);
          expect(Math.abs(season.weather[name][d] - expected), `${name} on day ${d}`).toBeLessThan(1e-11 * Math.max(1, Math.abs(expected)));
        }
      }
    }
  });

  test.each([4, 5])('seed %d: reference ET is that of the equation solved day by day, to the last bit', (seed) => {
    const input = seasonOf(seed, sites, gaps);
    const season = packSeason(input);
    for (const parcel of input.parcels) {
      placeWeather(season, parcel);
      const { weather } = season;
      for (let d = 0; d < DAYS; d++) {
        const solved = referenceEtDay(
          {
            method: input.settings.method,
            surface: 'short',
            dayOfYear: season.dayOfYear[d],
            latitude: parcel.latitude,
            elevation: parcel.elevation,
            airTemperatureMax: weather.airTemperatureMax[d],
            airTemperatureMin: weather.airTemperatureMin[d],
            actualVapourPressure: weather.actualVapourPressure[d],
            solarRadiation: weather.solarRadiation[d],
            windSpeed2m: weather.windSpeed2m[d],
          },
          null,
        );
        expect(weather.referenceEt[d]).toBe(solved);
      }
    }
  });
});

test.each([false, true])('flags of a parcel are those of its sites with a weight that have the day; gaps %s', (gaps) => {
  const input = seasonOf(6, 7, gaps);
  const season = packSeason(input);
  for (const parcel of input.parcels) {
    placeWeather(season, parcel);
    for (let d = 0; d < DAYS; d++) {
      let joined = 0;
      for (const { site, weight } of parcel.weights) {
        const at = site * DAYS + d;
        if (weight > 0 && !Number.isNaN(input.weather.airTemperatureMax[at])) joined |= input.weather.flags[at];
      }
      expect(season.flags[d]).toBe(joined >>> 0);
    }
  }
});

test('vapour pressure is the mean of the sites, held at the saturation of the parcel’s own temperatures', () => {
  const input = seasonOf(7, 4, false);
  const season = packSeason(input);
  let held = 0;
  for (const parcel of input.parcels) {
    placeWeather(season, parcel);
    for (let d = 0; d < DAYS; d++) {
      const { airTemperatureMax, airTemperatureMin, actualVapourPressure } = season.weather;
      const saturation = (saturationAt(airTemperatureMax[d]) + saturationAt(airTemperatureMin[d])) / 2;
      const brought = plainMean(input, parcel, 'actualVapourPressure', d);
      expect(Math.abs(actualVapourPressure[d] - Math.min(brought, saturation))).toBeLessThan(1e-12);
      if (brought > saturation) held++;
    }
  }
  expect(held).toBeGreaterThan(20);
});

/** FAO-56 Eq. 11, written out again. */
function saturationAt(airTemperature: number): number {
  return 0.6108 * Math.exp((17.27 * airTemperature) / (airTemperature + 237.3));
}
