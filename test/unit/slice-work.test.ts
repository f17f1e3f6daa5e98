/** What a slice of a run comes to, against sums made here from the season's own days in the plainest way. */
import { describe, expect, test } from 'vitest';
import { KEPT_NAMES, keptOf, layPeriods, MAP_VARIABLES, packPeriods, periodSets } from '../../lib/jobs/map-arrays.ts';
import { packSums, RunSums, sliceSums, unpackSums } from '../../lib/jobs/reach-demand.ts';
import { runSeason } from '../../lib/season/kernel.ts';
import { DAILY_VARIABLE_COUNT, DAILY_VARIABLES } from '../../lib/season/types.ts';
import { ESTIMATED_BITS } from '../../lib/weather/variable.ts';
import { randomSeason } from '../support/random-season.ts';

const DAYS = 120;
const PARCELS = 9;
const input = randomSeason({ seed: 11, parcels: PARCELS, days: DAYS });
const { daily, flags } = runSeason(input);
const end = new Date(Date.parse(input.startDate) + (DAYS - 1) * 86_400_000).toISOString().slice(0, 10);
const sets = periodSets({ startDate: input.startDate, endDate: end }, 3);

function stored(parcel: number, id: string, day: number): number {
  const index = DAILY_VARIABLES.findIndex((variable) => variable.id === id);
  return daily[(parcel * DAILY_VARIABLE_COUNT + index) * DAYS + day] / DAILY_VARIABLES[index].scale;
}

function expected(id: string, aggregate: string, parcel: number, from: number, to: number): number {
  if (id === 'depletion_share') return stored(parcel, 'root_zone_depletion', to) / stored(parcel, 'total_available_water', to);
  if (aggregate === 'end') return stored(parcel, id, to);
  let sum = 0;
  for (let day = from; day <= to; day++)
    sum += id === 'estimated_share' ? Number((flags[parcel * DAYS + day] & ESTIMATED_BITS) !== 0) : stored(parcel, id, day);
  return aggregate === 'mean' ? sum / (to - from + 1) : sum;
}

describe('period values', () => {
  test('of every map variable, week, month and season, laid from two slices', () => {
    const size = DAILY_VARIABLE_COUNT * DAYS;
    const cut = 4;
    const first = packPeriods(daily.subarray(0, cut * size), flags.subarray(0, cut * DAYS), DAYS, sets);
    const second = packPeriods(daily.subarray(cut * size), flags.subarray(cut * DAYS), DAYS, sets);
    for (const { id, aggregate } of MAP_VARIABLES) {
      const arrays = sets.map(({ periods }) => new Float32Array(periods.length * PARCELS).fill(-1));
      const kept = (packed: readonly Uint8Array[]) => keptOf(id).map((name) => packed[KEPT_NAMES.indexOf(name)]);
      layPeriods(id, kept(first), 0, sets, arrays);
      layPeriods(id, kept(second), cut, sets, arrays);
      sets.forEach(({ kind, periods }, k) => {
        periods.forEach(({ from, to }, p) => {
          for (let parcel = 0; parcel < PARCELS; parcel++) {
            const wanted = expected(id, aggregate, parcel, from, to);
            const got = arrays[k][p * PARCELS + parcel];
            if (!(Math.abs(got - wanted) <= 1e-6 * Math.max(1, Math.abs(wanted)))) expect(got, `${id} ${kind} ${p} ${parcel}`).toBe(wanted);
          }
        });
      });
    }
  });

  test('a sum beyond 65,535 hundredths is kept whole', () => {
    const days = 31;
    const full = new Uint16Array(DAILY_VARIABLE_COUNT * days);
    const gross = DAILY_VARIABLES.findIndex(({ id }) => id === 'gross_requirement');
    full.fill(60000, gross * days, (gross + 1) * days);
    const month = periodSets({ startDate: '2024-01-01', endDate: '2024-01-31' }, 1);
    const packed = packPeriods(full, new Uint32Array(days), days, month);
    const arrays = month.map(({ periods }) => new Float32Array(periods.length));
    layPeriods('gross_requirement', [packed[KEPT_NAMES.indexOf('gross_requirement')]], 0, month, arrays);
    expect(arrays[1][0]).toBe(18600);
  });
});

describe('sums of a slice', () => {
  test('demand by reach is depth times area, and comes through the store', () => {
    const reachOf = (parcel: number) => [null, 'A', 'B'][parcel % 3];
    const parcels = input.parcels.map(({ area }, parcel) => ({ area, reach: reachOf(parcel) }));
    const kept = unpackSums(packSums(sliceSums(parcels, daily, flags, DAYS)));
    const run = new RunSums(['B', 'C'], DAYS);
    run.add(kept);
    for (let day = 0; day < DAYS; day++) {
      let [demand, estimated] = [0, 0];
      for (let parcel = 2; parcel < PARCELS; parcel += 3) {
        demand += (stored(parcel, 'gross_requirement', day) / 1000) * parcels[parcel].area;
        if ((flags[parcel * DAYS + day] & ESTIMATED_BITS) !== 0) estimated += parcels[parcel].area;
      }
      expect(run.demand[day]).toBeCloseTo(demand, 6);
      expect(run.estimated[day]).toBeCloseTo(estimated, 6);
      expect(run.demand[DAYS + day]).toBe(0);
    }
    expect(run.withoutCanal).toBe(6);
    const estimatedDays = flags.reduce((count, bits) => count + Number((bits & ESTIMATED_BITS) !== 0), 0);
    expect(run.estimatedDays).toBe(estimatedDays);
  });
});
