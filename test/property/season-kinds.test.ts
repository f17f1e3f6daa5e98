/** Every kind of season: irrigation rules, ponded rice, snow, layers, salt, water tables, lead days. What holds for all of them. */
import { describe, expect, test } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import { type MemberRows, placeMembers, walkWithFactors } from '../../lib/season/ensemble-entry.ts';
import { runSeason } from '../../lib/season/kernel.ts';
import { keptDays, packSeason } from '../../lib/season/pack.ts';
import { DAILY_VARIABLE_COUNT, DAILY_VARIABLES, type DailyVariable, type ParcelInput, type SeasonInput } from '../../lib/season/types.ts';
import { RULE_KINDS, richSeason } from '../support/rich-season.ts';

type Reader = (parcel: number, variable: DailyVariable) => Float64Array;

function readerOf(input: SeasonInput): Reader {
  const exact = runSeason(input, { keep: 'double' }).dailyExact as Float64Array;
  const days = keptDays(input);
  return (parcel, variable) => {
    const v = DAILY_VARIABLES.findIndex(({ id }) => id === variable);
    return exact.subarray((parcel * DAILY_VARIABLE_COUNT + v) * days, (parcel * DAILY_VARIABLE_COUNT + v + 1) * days);
  };
}

const sum = (row: ArrayLike<number>) => Array.from(row).reduce((a, b) => a + b, 0);

/** Change of the soil's depletion that the flows of a day ask for; see the note on the daily variables. */
function asked(get: (variable: DailyVariable) => Float64Array, d: number): number {
  const pond = d === 0 ? 0 : get('ponded_water')[d] - get('ponded_water')[d - 1];
  const used = get('adjusted_crop_et')[d] - get('effective_precipitation')[d] - get('net_requirement')[d];
  return used + get('irrigation_percolation')[d] - get('capillary_rise')[d] + pond;
}

const KINDS = RULE_KINDS.flatMap((rule) => [1, 2, 3].map((seed) => [rule, seed] as const));

describe('water balance of every kind', () => {
  test.each(KINDS)('%s, seed %i: closes within 1e-6 mm strip by strip, warm and cold, nothing negative or missing', (rule, seed) => {
    for (const warmer of [0, -14]) {
      const input = richSeason({ seed, parcels: 30, days: 380, rule, warmer, leadDays: seed === 2 ? 40 : undefined });
      const output = runSeason(input, { keep: 'double' });
      expect(output.maxBalanceResidual).toBeLessThan(1e-6);
      expect(output.maxBalanceResidual).toBeGreaterThan(0);
      const wrong = (output.dailyExact as Float64Array).findIndex((value) => !(value >= -1e-9 && value < 1e5));
      expect(wrong, `seed ${seed}`).toBe(-1);
    }
  });

  test.each([4, 5, 6, 7])('the days of a parcel close from the rows that are stored, seed %i', (seed) => {
    const input = richSeason({ seed, parcels: 40, days: 380, warmer: seed % 2 === 0 ? -12 : 0 });
    const read = readerOf(input);
    for (let p = 0; p < 40; p++) {
      const get = (variable: DailyVariable) => read(p, variable);
      for (let d = 1; d < 380; d++) {
        const change = get('soil_water_depletion')[d] - get('soil_water_depletion')[d - 1];
        if (!(Math.abs(change - asked(get, d)) < 1e-6)) expect.fail(`soil water of parcel ${p} on day ${d}`);
        const snow = get('snow_water')[d] - get('snow_water')[d - 1];
        const kept = get('precipitation')[d] - snow - get('surface_runoff')[d] - get('deep_percolation')[d];
        if (!(Math.abs(kept - get('effective_precipitation')[d]) < 1e-6)) expect.fail(`effective rain of parcel ${p} on day ${d}`);
      }
    }
  });

  test('the seasons drawn do hold ponds, snow, leaching and capillary rise', () => {
    const most = { ponded_water: 0, snow_water: 0, irrigation_percolation: 0, capillary_rise: 0 };
    for (const seed of [1, 2, 3, 4]) {
      const settings = { salinity: 'stress-and-leaching', capillaryRise: true, snow: true, water: 'rule' } as const;
      const input = richSeason({ seed, parcels: 30, days: 380, warmer: -10, settings });
      const read = readerOf(input);
      for (const name of Object.keys(most) as (keyof typeof most)[]) {
        for (let p = 0; p < 30; p++) most[name] = Math.max(most[name], ...read(p, name));
      }
    }
    expect(most.ponded_water).toBeGreaterThan(20);
    expect(most.snow_water).toBeGreaterThan(20);
    expect(most.irrigation_percolation).toBeGreaterThan(1);
    expect(most.capillary_rise).toBeGreaterThan(0.1);
  });
});

/** The same district with rain added on random days. */
function withMoreRain(input: SeasonInput, seed: number): SeasonInput {
  const random = mulberry32(seed);
  const precipitation = input.weather.precipitation.map((rain) => (random() < 0.1 ? rain + 25 * random() : rain));
  return { ...input, weather: { ...input.weather, precipitation } };
}

describe('more rain', () => {
  const plain = {
    coefficient: 'dual',
    initialDepletion: 0,
    capillaryRise: false,
    snow: false,
    frozenGround: false,
    water: 'rule',
    salinity: 'off',
    fallow: 'bare',
  } as const;

  /** Parcels without anything but their rule: no ponds, no water given whatever the soil says, whole refills, a system that keeps up. */
  function bare(input: SeasonInput): SeasonInput {
    const parcels = input.parcels.map((parcel) => ({
      ...parcel,
      method: { ...parcel.method, minimumDepth: undefined, flow: undefined, maximumDailyDepth: 1000 },
      plantings: parcel.plantings.map(({ crop, irrigation, ...planting }) => ({
        ...planting,
        irrigation: irrigation?.kind === 'depletion' ? { ...irrigation, refill: 1 } : irrigation,
        // under a closed plastic mulch nothing evaporates: what the crop asks for does not hang on rain
        mulch: { kind: 'plastic' as const, cover: 1 },
        preIrrigation: undefined,
        germination: undefined,
        crop: { ...crop, paddy: undefined, lastIrrigation: 1 },
      })),
    }));
    return { ...input, parcels };
  }

  test.each([11, 12, 13])('with daily replacement it never raises what has been called for, to any day, seed %i', (seed) => {
    // Standing crops that stand from the first day: their roots do not move, so replacement leaves the soil full every day, whatever the rain
    // before was; and no bare ground comes before them, which a rain that the full soil cannot keep leaves wetter at the surface, to dry out more.
    const drawn = bare(richSeason({ seed, parcels: 400, days: 200, rule: 'daily', settings: { ...plain, runoff: false } }));
    const parcels = drawn.parcels.filter(
      ({ plantings: [first, second] }) =>
        first?.areaShare === 1 && !second && first.crop.type !== 'annual' && first.plantingDate <= drawn.startDate,
    );
    expect(parcels.length).toBeGreaterThan(3);
    const input = { ...drawn, parcels };
    const [dry, wet] = [readerOf(input), readerOf(withMoreRain(input, seed))];
    for (let p = 0; p < parcels.length; p++) {
      let [less, more] = [0, 0];
      for (let d = 0; d < 200; d++) {
        less += wet(p, 'net_requirement')[d];
        more += dry(p, 'net_requirement')[d];
        if (less > more + 1e-9) expect.fail(`parcel ${p}, day ${d}: ${less} mm with more rain, ${more} without`);
      }
    }
  });

  // A rule with a threshold waters in whole applications: rain can put one off to the eve of another rain, which then is lost. So a season may
  // call for more by as much as an application, never by more; and over a district it calls for less.
  test.each([21, 22, 23, 24, 25, 26])(
    'with a threshold it raises a season by less than an application at most, and lowers the district, seed %i',
    (seed) => {
      const drawn = bare(richSeason({ seed, parcels: 100, days: 300, rule: 'depletion', settings: plain }));
      const parcels = drawn.parcels.filter(({ plantings }) => plantings.length === 1 && plantings[0].areaShare === 1);
      const input = { ...drawn, parcels };
      const [dry, wet] = [readerOf(input), readerOf(withMoreRain(input, seed))];
      let [district, wetter] = [0, 0];
      for (let p = 0; p < parcels.length; p++) {
        const [without, more] = [dry(p, 'net_requirement'), wet(p, 'net_requirement')];
        const largest = Math.max(0, ...without, ...more);
        if (sum(more) > sum(without) + largest) expect.fail(`parcel ${p}: ${sum(more)} mm with more rain, ${sum(without)} without`);
        district += sum(without);
        wetter += sum(more);
      }
      expect(wetter).toBeLessThan(district);
    },
  );
});

describe('efficiency', () => {
  test.each(RULE_KINDS)('a better one never raises the gross and leaves the net alone, rule %s', (rule) => {
    const drawn = richSeason({ seed: 31, parcels: 40, days: 300, rule, settings: { water: 'rule' } });
    const at = (efficiency: number): SeasonInput => ({
      ...drawn,
      parcels: drawn.parcels.map((parcel) => ({ ...parcel, efficiency, method: { ...parcel.method, flow: undefined } })),
    });
    const [poor, good] = [readerOf(at(0.5)), readerOf(at(0.8))];
    let watered = 0;
    for (let p = 0; p < 40; p++) {
      expect(good(p, 'net_requirement')).toEqual(poor(p, 'net_requirement'));
      const [gross, less] = [poor(p, 'gross_requirement'), good(p, 'gross_requirement')];
      for (let d = 0; d < 300; d++) {
        if (less[d] > gross[d]) expect.fail(`parcel ${p}, day ${d}: ${less[d]} mm at 0.8, ${gross[d]} at 0.5`);
        watered += gross[d] - less[d];
      }
    }
    if (rule !== 'none') expect(watered).toBeGreaterThan(0);
  });
});

describe('stress', () => {
  test.each([41, 42, 43])('is exactly 1 while the depletion is within the readily available water, seed %i', (seed) => {
    const drawn = richSeason({ seed, parcels: 60, days: 300, settings: { salinity: 'off' } });
    const input = { ...drawn, parcels: drawn.parcels.filter(({ plantings }) => plantings.length === 1 && plantings[0].areaShare === 1) };
    const read = readerOf(input);
    let short = 0;
    for (let p = 0; p < input.parcels.length; p++) {
      for (let d = 0; d < 300; d++) {
        const stress = read(p, 'stress_coefficient')[d];
        // the depletion of the evening is at least that of the day's water use
        if (read(p, 'root_zone_depletion')[d] <= read(p, 'readily_available_water')[d]) expect(stress).toBe(1);
        if (stress < 1) short++;
      }
    }
    expect(short).toBeGreaterThan(0);
  });
});

describe('an ensemble member without error', () => {
  test.each([51, 52, 53, 54])('is the plain run, bit for bit, seed %i', (seed) => {
    const input = richSeason({ seed, parcels: 25, days: 250, leadDays: seed % 2 === 0 ? 20 : 0 });
    const read = readerOf(input);
    const season = packSeason(input);
    const days = keptDays(input);
    const row = () => new Float64Array(days).fill(Number.NaN);
    const rows = { netRequirement: row(), grossRequirement: row(), adjustedCropEt: row() } satisfies MemberRows;
    const ones = new Float64Array(2 * input.dayCount).fill(1);
    for (const [p, parcel] of input.parcels.entries()) {
      const placed = placeMembers(season, parcel);
      const basal = new Float64Array(parcel.plantings.length);
      walkWithFactors(
        season,
        placed,
        { referenceEt: ones, referenceEtFrom: 7, basal: basal.fill(1.2), available: 0.8, efficiency: 1.1 },
        rows,
      );
      walkWithFactors(season, placed, { referenceEt: ones, referenceEtFrom: 7, basal: basal.fill(1), available: 1, efficiency: 1 }, rows);
      expect(rows.netRequirement).toEqual(read(p, 'net_requirement'));
      expect(rows.grossRequirement).toEqual(read(p, 'gross_requirement'));
      expect(rows.adjustedCropEt).toEqual(read(p, 'adjusted_crop_et'));
    }
  });

  test('factors do what they say: a fifth more reference ET calls for more water, a better efficiency for less gross', () => {
    const input = richSeason({ seed: 55, parcels: 40, days: 250, rule: 'daily', settings: { water: 'rule' } });
    const season = packSeason(input);
    const gross = new Float64Array(250);
    const rows = { netRequirement: null, grossRequirement: gross, adjustedCropEt: null };
    const total = (et: number, efficiency: number) => {
      let all = 0;
      for (const parcel of input.parcels) {
        const basal = new Float64Array(parcel.plantings.length).fill(1);
        const placed = placeMembers(season, parcel);
        const factors = { referenceEt: new Float64Array(250).fill(et), referenceEtFrom: 0, basal, available: 1, efficiency };
        expect(walkWithFactors(season, placed, factors, rows)).toBeLessThan(1e-6);
        all += sum(gross);
      }
      return all;
    };
    const plain = total(1, 1);
    expect(total(1.2, 1)).toBeGreaterThan(1.1 * plain);
    expect(total(1, 1.05)).toBeLessThan(0.99 * plain);
  });
});

describe('parts and wholes', () => {
  test('a parcel split into two equal halves calls for the same volume', () => {
    const input = richSeason({ seed: 61, parcels: 40, days: 250 });
    const halves: ParcelInput[] = input.parcels.flatMap((parcel) => [
      { ...parcel, code: `${parcel.code}a`, area: parcel.area / 2 },
      { ...parcel, code: `${parcel.code}b`, area: parcel.area / 2 },
    ]);
    const [whole, split] = [readerOf(input), readerOf({ ...input, parcels: halves })];
    for (const [p, { area }] of input.parcels.entries()) {
      const volume = (area * sum(whole(p, 'gross_requirement'))) / 1000;
      const parts = [2 * p, 2 * p + 1].map((h) => (halves[h].area * sum(split(h, 'gross_requirement'))) / 1000);
      expect(Math.abs(parts[0] + parts[1] - volume)).toBeLessThan(1e-9 * Math.max(1, volume));
    }
  });

  test.each([71, 72])('lead days are the days before: what follows them is the same to the last bit, seed %i', (seed) => {
    const whole = richSeason({ seed, parcels: 25, days: 260 });
    const [all, kept] = [runSeason(whole, { keep: 'double' }), runSeason({ ...whole, leadDays: 60 }, { keep: 'double' })];
    const rows = 25 * DAILY_VARIABLE_COUNT;
    for (let r = 0; r < rows; r++) {
      const [a, b] = [all.dailyExact, kept.dailyExact] as [Float64Array, Float64Array];
      expect(b.subarray(r * 200, (r + 1) * 200)).toEqual(a.subarray(r * 260 + 60, (r + 1) * 260));
    }
    expect(kept.closing).toEqual(all.closing);
    expect(kept.stageDays).toEqual(all.stageDays.map((day) => day - 60));
  });

  test('stage sums are the ET of the days the crop stands', () => {
    const drawn = richSeason({ seed: 81, parcels: 60, days: 300 });
    const parcels = drawn.parcels.filter(({ plantings }) => plantings.length === 1 && plantings[0].areaShare === 1);
    const input = { ...drawn, parcels };
    const { stageEt, stageDays } = runSeason(input);
    const read = readerOf(input);
    for (let p = 0; p < parcels.length; p++) {
      const [from, to] = [Math.max(0, stageDays[5 * p]), Math.min(300, Math.max(0, stageDays[5 * p + 4]))];
      const stages = Array.from(stageEt.subarray(8 * p, 8 * p + 8));
      const potential = stages.filter((_, k) => k % 2 === 0);
      expect(sum(potential)).toBeCloseTo(sum(read(p, 'crop_et').subarray(from, to)), 8);
      expect(sum(stages) - sum(potential)).toBeCloseTo(sum(read(p, 'adjusted_crop_et').subarray(from, to)), 8);
    }
  });

  test('soil water and snow carry over: the next season opens with what this one closed with', () => {
    const settings = { snow: true, fallow: 'bare', water: 'rule' } as const;
    const drawn = richSeason({ seed: 91, parcels: 120, days: 200, warmer: -8, settings });
    const parcels = drawn.parcels.filter(({ plantings: [first], plantings }) => plantings.length <= 1 && first?.crop.type !== 'annual');
    expect(parcels.length).toBeGreaterThan(20);
    const input = { ...drawn, parcels };
    const { closing } = runSeason(input);
    const first = readerOf(input);
    const next = readerOf({ ...input, parcels: parcels.map((parcel, p) => ({ ...parcel, initialWater: closing[p] })) });
    for (let p = 0; p < parcels.length; p++) {
      const left = first(p, 'soil_water_depletion')[199];
      const get = (variable: DailyVariable) => next(p, variable);
      expect(Math.abs(sum(closing[p].profile.map(({ depletion }) => depletion)) - left)).toBeLessThan(1e-9);
      expect(Math.abs(get('soil_water_depletion')[0] - asked(get, 0) - get('ponded_water')[0] - left)).toBeLessThan(1e-9);
      const fallen = get('precipitation')[0] - get('effective_precipitation')[0] - get('surface_runoff')[0] - get('deep_percolation')[0];
      expect(Math.abs(get('snow_water')[0] - fallen - first(p, 'snow_water')[199])).toBeLessThan(1e-9);
    }
  });
});
