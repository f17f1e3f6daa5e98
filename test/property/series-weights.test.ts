/** Series with weights of their own, and reference ET carried from the sites: what must hold in any season. */
import { describe, expect, test } from 'vitest';
import { mulberry32, type Random } from '../../lib/base/random.ts';
import { runSeason, walkParcel } from '../../lib/season/kernel.ts';
import { packSeason } from '../../lib/season/pack.ts';
import { DAILY_VARIABLE_COUNT, DAILY_VARIABLES, type ParcelInput, type SeasonInput } from '../../lib/season/types.ts';
import { explainDay } from '../../lib/season/working.ts';
import { type CarriedSeries, COMPLETED_SERIES, FALLBACK, type SeriesWeights } from '../../lib/weather/variable.ts';
import { randomSeason } from '../support/random-season.ts';

const DAYS = 150;
const SEEDS = [3, 17, 29];

function exactOf(input: SeasonInput): Float64Array {
  return runSeason(input, { keep: 'double' }).dailyExact as Float64Array;
}

function stored(value: number, scale: number): number {
  return Math.min(65534, Math.max(0, Math.round(value * scale)));
}

/** Weights that sum to 1 with some below 0, as kriging gives them. */
function signedWeights(random: Random, siteCount: number): SeriesWeights {
  const raw = Array.from({ length: siteCount }, () => random() - 0.2);
  const sum = raw.reduce((a, b) => a + b, 0);
  const usable = Math.abs(sum) > 0.3 ? raw.map((weight) => weight / sum) : raw.map(() => 1 / siteCount);
  return {
    weights: usable.map((weight, site) => ({ site, weight })),
    gradient: (random() - 0.5) * 0.004,
    variance: Number.NaN,
  };
}

function withSeries(input: SeasonInput, seed: number, names: readonly CarriedSeries[]): SeasonInput {
  const random = mulberry32(seed);
  const parcels = input.parcels.map((parcel) => ({
    ...parcel,
    series: Object.fromEntries(names.map((name) => [name, signedWeights(random, input.sites.length)])) as ParcelInput['series'],
  }));
  return { ...input, parcels };
}

/** Reference ET of its own at every site, with holes; some site-days have it and rain but no temperature. */
function withSiteEt(input: SeasonInput, seed: number): SeasonInput {
  const random = mulberry32(seed);
  const { weather } = input;
  const size = weather.siteCount * weather.dayCount;
  const referenceEt = Float64Array.from({ length: size }, () => 1 + 6 * random());
  const airTemperatureMax = weather.airTemperatureMax.slice();
  for (let i = 0; i < size; i++) if (random() < 0.5) airTemperatureMax[i] = Number.NaN;
  for (let site = 0; site < weather.siteCount; site++) airTemperatureMax[site * weather.dayCount + 40] = Number.NaN;
  return { ...input, settings: { ...input.settings, referenceEt: 'given' }, weather: { ...weather, referenceEt, airTemperatureMax } };
}

describe.each(SEEDS)('seed %i', (seed) => {
  const plain = randomSeason({ seed, parcels: 25, days: DAYS });

  test('weights of their own that are the shared ones, with the lapse rate as gradient, change nothing', () => {
    const lapse = -plain.settings.lapseRate;
    const parcels = plain.parcels.map((parcel) => ({
      ...parcel,
      series: Object.fromEntries(
        COMPLETED_SERIES.map((name) => [
          name,
          { weights: parcel.weights, gradient: name.startsWith('airTemperature') ? lapse : 0, variance: Number.NaN },
        ]),
      ),
    }));
    const [a, b] = [exactOf(plain), exactOf({ ...plain, parcels })];
    let worst = 0;
    for (let i = 0; i < a.length; i++) worst = Math.max(worst, Math.abs(a[i] - b[i]));
    expect(worst).toBeLessThan(1e-6);
    expect(runSeason({ ...plain, parcels }).flags).toEqual(runSeason(plain).flags);
  });

  test('a mix worked by hand: Σ w (x + β Δz), and nothing below 0', () => {
    const input = withSeries(plain, seed + 1, ['windSpeed2m', 'airTemperatureMax', 'precipitation']);
    const season = packSeason(input);
    let clamped = 0;
    for (const parcel of input.parcels) {
      walkParcel(season, parcel, null);
      for (const name of ['windSpeed2m', 'precipitation', 'airTemperatureMax'] as const) {
        const { weights, gradient } = (parcel.series as Record<string, SeriesWeights>)[name];
        for (const day of [0, 77, DAYS - 1]) {
          let sum = 0;
          for (const { site, weight } of weights)
            sum += weight * (input.weather[name][site * DAYS + day] + gradient * (parcel.elevation - input.sites[site].elevation));
          if (name !== 'airTemperatureMax' && sum < 0) clamped++;
          const expected = name === 'airTemperatureMax' ? sum : Math.max(0, sum);
          if (name === 'airTemperatureMax' && season.weather.airTemperatureMax[day] === season.weather.airTemperatureMin[day]) continue;
          expect(Math.abs(season.weather[name][day] - expected)).toBeLessThan(1e-9);
        }
      }
    }
    expect(clamped).toBeGreaterThan(0);
  });

  test.each([
    ['kriged series', (input: SeasonInput) => withSeries(input, seed + 2, ['airTemperatureMax', 'airTemperatureMin', 'solarRadiation'])],
    ['reference ET from the sites', (input: SeasonInput) => withSiteEt(input, seed + 3)],
    ['both', (input: SeasonInput) => withSiteEt(withSeries(input, seed + 4, [...COMPLETED_SERIES, 'referenceEt']), seed + 5)],
  ])('%s: the balance closes, and the working is the run', (_, change) => {
    const input = change(plain);
    const output = runSeason(input);
    expect(output.maxBalanceResidual).toBeLessThan(1e-6);
    const random = mulberry32(seed);
    for (let k = 0; k < 40; k++) {
      const [parcel, day] = [Math.floor(random() * 25), k === 0 ? 40 : Math.floor(random() * DAYS)];
      const working = explainDay(input, parcel, day);
      for (const [v, { id, scale }] of DAILY_VARIABLES.entries()) {
        const at = (parcel * DAILY_VARIABLE_COUNT + v) * DAYS + day;
        if (stored(working.results[id], scale) !== output.daily[at]) expect.fail(`${id} of parcel ${parcel}, day ${day}`);
      }
      JSON.stringify(working, (key, value) => {
        if (typeof value === 'number' && !Number.isFinite(value)) expect.fail(`${key} of parcel ${parcel}, day ${day} is not finite`);
        return value;
      });
      expect(working.inputs.reduce((sum, { weight }) => sum + weight, 0)).toBeCloseTo(1, 9);
      const step = working.steps.find(({ symbol }) => symbol === 'ETo');
      expect(step?.result).toBe(working.results.reference_et);
    }
  });
});

describe('reference ET carried from the sites', () => {
  const plain = randomSeason({ seed: 8, parcels: 10, days: DAYS });

  test('the same at every site is the same at every parcel, whatever the weather there', () => {
    const referenceEt = new Float64Array(plain.weather.siteCount * DAYS).fill(4.25);
    const input: SeasonInput = {
      ...plain,
      settings: { ...plain.settings, referenceEt: 'given' },
      weather: { ...plain.weather, referenceEt },
    };
    const { daily } = runSeason(input);
    for (let p = 0; p < 10; p++)
      expect(new Set(daily.subarray(p * DAILY_VARIABLE_COUNT * DAYS, p * DAILY_VARIABLE_COUNT * DAYS + DAYS))).toEqual(new Set([425]));
    const step = explainDay(input, 0, 3).steps.find(({ symbol }) => symbol === 'ETo');
    expect(step?.source).toMatch(/^reference ET given by the source/);
  });

  test('a day without temperature has the standard climate: climate term 0, RHmin 45 %, and says so', () => {
    const input = withSiteEt(plain, 1);
    const season = packSeason(input);
    walkParcel(season, input.parcels[0], null);
    expect(season.weather.climate[40]).toBe(0);
    expect(season.weather.humidityMinimum[40]).toBe(45);
    expect(season.flags[40] & FALLBACK.climateAssumedStandard).not.toBe(0);
    expect(explainDay(input, 0, 40).steps.some(({ symbol }) => symbol === 'Tmax')).toBe(false);
  });

  test('a day on which no site has it is refused, naming parcel and day', () => {
    const input = withSiteEt(plain, 1);
    const referenceEt = (input.weather.referenceEt as Float64Array).slice();
    for (let site = 0; site < input.weather.siteCount; site++) referenceEt[site * DAYS + 7] = Number.NaN;
    expect(() => runSeason({ ...input, weather: { ...input.weather, referenceEt } })).toThrow(/no weather for parcel P1 on/);
  });
});

describe('weights of a series that cannot be used', () => {
  const plain = randomSeason({ seed: 8, parcels: 1, days: 30 });
  const withWeights = (series: ParcelInput['series']) => () => runSeason({ ...plain, parcels: [{ ...plain.parcels[0], series }] });
  const weights = [{ site: 0, weight: 1 }];

  test('are refused with the series and the parcel', () => {
    expect(withWeights({ windSpeed2m: { weights: [{ site: 0, weight: 0.9 }], gradient: 0, variance: Number.NaN } })).toThrow(
      /weights sum to 0.9, not to 1 \(windSpeed2m of parcel P1\)/,
    );
    expect(withWeights({ windSpeed2m: { weights: [{ site: 4, weight: 1 }], gradient: 0, variance: Number.NaN } })).toThrow(/site index 4/);
    expect(withWeights({ windSpeed2m: { weights, gradient: Number.NaN, variance: 0 } })).toThrow(/gradient NaN/);
  });

  test('where less than half of them reports, the shared weights stand in', () => {
    const solarRadiation = plain.weather.solarRadiation.slice();
    solarRadiation[5] = Number.NaN;
    const parcel: ParcelInput = {
      ...plain.parcels[0],
      weights: [{ site: 1, weight: 1 }],
      series: { solarRadiation: { weights, gradient: 0, variance: Number.NaN } },
    };
    const input = { ...plain, weather: { ...plain.weather, solarRadiation }, parcels: [parcel] };
    const season = packSeason(input);
    walkParcel(season, parcel, null);
    expect(season.weather.solarRadiation[5]).toBe(solarRadiation[30 + 5]);
    expect(season.weather.solarRadiation[6]).toBe(solarRadiation[6]);
  });
});
