/** Snow, frozen ground and runoff at parcels, over random seasons; and the working of the same, recomputed here from the numbers it prints. */
import { describe, expect, test } from 'vitest';
import { runoffByStrip } from '../../lib/season/ground-water.ts';
import { groundWaterSteps, surfaceRunoffSteps } from '../../lib/season/ground-water-working.ts';
import { type PackedSeason, packSeason } from '../../lib/season/pack.ts';
import { placeAtmosphere, placeWeather } from '../../lib/season/parcel-weather.ts';
import type { ParcelInput, SeasonInput, SeasonSettings, WorkingStep } from '../../lib/season/types.ts';
import { randomSeason } from '../support/random-season.ts';

const DAYS = 366;

/** A random season in a colder place, so that snow falls and the ground freezes. */
function coldSeason(seed: number, more: Partial<SeasonSettings>): SeasonInput {
  const season = randomSeason({ seed, parcels: 12, days: DAYS });
  for (let i = 0; i < season.weather.airTemperatureMax.length; i++) {
    season.weather.airTemperatureMax[i] -= 17;
    season.weather.airTemperatureMin[i] -= 17;
  }
  return {
    ...season,
    settings: { ...season.settings, runoff: true, ...more },
    parcels: season.parcels.map((parcel, k) => (k % 2 === 0 ? parcel : { ...parcel, initialWater: { profile: [], snow: 10 * k } })),
  };
}

function eachParcel(input: SeasonInput, visit: (season: PackedSeason, parcel: ParcelInput) => void): void {
  const season = packSeason(input);
  for (const parcel of input.parcels) {
    placeWeather(season, parcel);
    visit(season, parcel);
  }
}

/** Left to right, as a reader adds. */
function total(row: Float64Array): number {
  return row.reduce((sum, value) => sum + value, 0);
}

describe('snow', () => {
  test.each([1, 2, 3])('seed %d: what falls is on the ground or has reached it; never negative', (seed) => {
    let lain = 0;
    eachParcel(coldSeason(seed, { snow: true }), ({ weather }, parcel) => {
      const opening = parcel.initialWater?.snow ?? 0;
      const { liquid, snowWater, precipitation } = weather;
      expect(Math.abs(opening + total(precipitation) - total(liquid) - snowWater[DAYS - 1])).toBeLessThan(1e-8);
      let before = opening;
      for (let d = 0; d < DAYS; d++) {
        expect(liquid[d]).toBeGreaterThanOrEqual(0);
        expect(snowWater[d]).toBeGreaterThanOrEqual(0);
        expect(Math.abs(before + precipitation[d] - liquid[d] - snowWater[d])).toBeLessThan(1e-10);
        before = snowWater[d];
      }
      lain = Math.max(lain, ...snowWater);
    });
    expect(lain).toBeGreaterThan(20);
  });

  test('off: every drop reaches the ground on its day, whatever snow the parcel is said to have', () => {
    eachParcel(coldSeason(4, {}), ({ weather }) => {
      expect(weather.liquid).toEqual(weather.precipitation);
      expect(weather.snowWater.every((snow) => snow === 0)).toBe(true);
      expect(weather.frozen.every((frozen) => frozen === 0)).toBe(true);
    });
  });

  test('a day without temperature has rain and no melt', () => {
    const input = coldSeason(5, { snow: true, frozenGround: true, referenceEt: 'given' });
    const { weather } = input;
    for (let site = 0; site < weather.siteCount; site++) weather.airTemperatureMax[site * DAYS + 20] = Number.NaN;
    const carried = { ...input, weather: { ...weather, referenceEt: new Float64Array(weather.siteCount * DAYS).fill(1) } };
    eachParcel(carried, (season, parcel) => {
      const { liquid, snowWater, precipitation } = season.weather;
      expect(liquid[20]).toBe(precipitation[20]);
      expect(snowWater[20]).toBe(snowWater[19]);
      for (const step of groundWaterSteps(season, parcel, 20)) expect(step.inputs.every(({ value }) => Number.isFinite(value))).toBe(true);
    });
  });
});

describe('runoff', () => {
  test.each(['average', 'five-day-rain', 'surface-layer'] as const)(
    '%s: between nothing and what reaches the ground; all of it where frozen',
    (mode) => {
      let frozenDays = 0;
      eachParcel(coldSeason(6, { snow: true, frozenGround: true, antecedentMoisture: mode }), ({ weather }) => {
        for (let d = 0; d < DAYS; d++) {
          expect(weather.surfaceRunoff[d]).toBeGreaterThanOrEqual(0);
          expect(weather.surfaceRunoff[d]).toBeLessThanOrEqual(weather.liquid[d]);
          if (weather.frozen[d] === 0) continue;
          frozenDays++;
          expect(weather.surfaceRunoff[d]).toBe(weather.liquid[d]);
        }
      });
      expect(frozenDays).toBeGreaterThan(50);
    },
  );

  test('frozen ground sheds water even where no runoff is reckoned otherwise', () => {
    eachParcel(coldSeason(7, { runoff: false, frozenGround: true }), ({ weather }) => {
      for (let d = 0; d < DAYS; d++) expect(weather.surfaceRunoff[d]).toBe(weather.frozen[d] === 1 ? weather.liquid[d] : 0);
    });
  });

  test('of the five days before: more rain before never lowers it', () => {
    const input = coldSeason(8, { antecedentMoisture: 'five-day-rain' });
    const rained = Float64Array.from(input.weather.precipitation, (value, i) => ((i % DAYS) % 10 < 5 ? value + 12 : value));
    const wetter = { ...input, weather: { ...input.weather, precipitation: rained } };
    const dry = packSeason(input);
    const wet = packSeason(wetter);
    for (const [k, parcel] of input.parcels.entries()) {
      placeWeather(dry, parcel);
      placeWeather(wet, wetter.parcels[k]);
      for (let d = 0; d < DAYS; d++) {
        const wetRunoff = wet.weather.surfaceRunoff[d];
        expect(wetRunoff).toBeGreaterThanOrEqual(dry.weather.surfaceRunoff[d] - 1e-12);
      }
    }
  });

  test('of the five days before, by hand on CN 80: the day itself does not count, nor the sixth', () => {
    const input = coldSeason(11, { antecedentMoisture: 'five-day-rain' });
    const { precipitation, airTemperatureMax, airTemperatureMin } = input.weather;
    airTemperatureMax.fill(25);
    airTemperatureMin.fill(15);
    precipitation.fill(0);
    const rain = { 2: 50, 20: 60, 25: 50, 26: 50, 40: 50, 60: 40, 64: 50 };
    for (const [day, depth] of Object.entries(rain)) {
      for (let site = 0; site < input.weather.siteCount; site++) precipitation[site * DAYS + Number(day)] = depth;
    }
    const [parcel] = input.parcels;
    const warm = { ...parcel, elevation: 100, soil: { ...parcel.soil, curveNumber: 80 } };
    const season = packSeason({ ...input, settings: { ...input.settings, lapseRate: 0 }, parcels: [warm] });
    placeWeather(season, warm);
    // S by CN: 63.684 → 144.8435 mm, 80 → 63.5 mm, 90.354 → 27.1145 mm; RO = (P − 0.2 S)² / (P + 0.8 S)
    const runoff = (depth: number, retention: number) => (depth - 0.2 * retention) ** 2 / (depth + 0.8 * retention);
    const expected = {
      2: runoff(50, 63.5), // fewer than five days before: average
      20: runoff(60, 144.8435), // dry before
      25: runoff(50, 27.1145), // 60 mm on the fifth day before: wet
      26: runoff(50, 63.5), // 50 mm the day before, 60 mm on the sixth: average
      40: runoff(50, 144.8435), // its own rain does not count
      60: runoff(40, 144.8435),
      64: runoff(50, 63.5), // 40 mm four days before
    };
    for (const [day, depth] of Object.entries(expected)) {
      expect(Math.abs(season.weather.surfaceRunoff[Number(day)] - depth), `day ${day}`).toBeLessThan(0.005);
    }
  });

  test('weather shared by parcels: the atmosphere placed once gives the same ground water', () => {
    const input = coldSeason(9, { snow: true, frozenGround: true, antecedentMoisture: 'five-day-rain' });
    const season = packSeason(input);
    const [parcel] = input.parcels;
    placeWeather(season, parcel);
    const first = structuredClone(season.weather);
    placeAtmosphere(season, parcel);
    placeWeather(season, input.parcels[1]);
    placeWeather(season, parcel);
    expect(season.weather).toEqual(first);
  });
});

/** The working's own numbers put into the printed equations, written out again here. */
const RECOMPUTED: Readonly<Record<string, (of: (symbol: string) => number, step: WorkingStep) => number>> = {
  T: (of) => (of('Tmax') + of('Tmin')) / 2,
  fs: (of) => Math.min(1, Math.max(0, (3.3 - of('T')) / 4.4)),
  M: (of) => Math.min(of('S, yesterday') + of('fs') * of('P'), of('Cm') * Math.max(0, of('T'))),
  S: (of) => of('S, yesterday') + of('fs') * of('P') - of('M'),
  Pl: (of) => (1 - of('fs')) * of('P') + of('M'),
  CFGI: (of) => {
    const k = of('T') < 0 ? 0.08 : 0.5;
    return Math.max(0, 0.97 * of('CFGI, yesterday') - of('T') * Math.exp(-0.4 * k * 0.4 * of('S, yesterday')));
  },
  F: (of) => (of('CFGI') >= 83 || (of('CFGI') >= 56 && of('F, yesterday') === 1) ? 1 : 0),
  CN: (of, { expression }) => {
    const average = of('CN of the soil');
    if (expression.startsWith('dry')) return average / (2.281 - 0.01281 * average);
    return expression.startsWith('wet') ? average / (0.427 + 0.00573 * average) : average;
  },
  RO: (of, { expression, inputs }) => {
    const water = inputs[0].value;
    if (expression.includes('takes up nothing')) return water;
    if (expression.startsWith('RO = 0')) return 0;
    const retention = 25400 / of('CN') - 254;
    return water > 0.2 * retention ? (water - 0.2 * retention) ** 2 / (water + 0.8 * retention) : 0;
  },
};

describe('working', () => {
  test.each([
    ['average', {}],
    ['snow and five days', { snow: true, antecedentMoisture: 'five-day-rain' }],
    ['frost and the surface layer', { snow: true, frozenGround: true, antecedentMoisture: 'surface-layer' }],
    ['frost without snow', { frozenGround: true, antecedentMoisture: 'five-day-rain' }],
  ] as const)('%s: each step follows from the numbers it prints, and ends in the rows of the run', (_name, more) => {
    const seen = new Set<string>();
    eachParcel(coldSeason(10, more), (season, parcel) => {
      for (let day = 0; day < DAYS; day += 3) {
        const steps = groundWaterSteps(season, parcel, day);
        for (const step of steps) {
          const of = (symbol: string) => step.inputs.find((input) => input.symbol === symbol)?.value ?? Number.NaN;
          expect(Math.abs(RECOMPUTED[step.symbol](of, step) - step.result), `${step.symbol} on day ${day}`).toBeLessThan(1e-9);
          seen.add(step.symbol);
        }
        const runoff = steps.find(({ symbol }) => symbol === 'RO');
        if (runoff) expect(runoff.result).toBe(season.weather.surfaceRunoff[day]);
        else expect(runoffByStrip(season, parcel) && season.weather.frozen[day] === 0).toBe(true);
      }
    });
    expect([...seen].length).toBeGreaterThanOrEqual('snow' in more ? 6 : 1);
  });

  test('of a strip by its surface layer, by hand: CN 80 with De 5 of REW 8 and TEW 20', () => {
    const [number, runoff] = surfaceRunoffSteps({ curveNumber: 80, depletion: 5, readily: 8, total: 20, liquid: 60, runoff: 28.9 });
    // CN I 63.694, CN III 90.354; bounds 4 and 11.6: a share of 1 / 7.6 from wet to dry
    expect(number.result).toBeCloseTo(90.354 - (90.354 - 63.694) / 7.6, 2);
    expect(runoff.result).toBe(28.9);
    expect(runoff.inputs[1].value).toBe(number.result);
  });
});
