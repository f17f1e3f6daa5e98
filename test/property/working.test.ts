/** The working of a day is the run of that day: same results to the last stored digit, every number finite, every step with its source. */
import { describe, expect, test } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import { runSeason } from '../../lib/season/kernel.ts';
import { keptDays } from '../../lib/season/pack.ts';
import { DAILY_VARIABLE_COUNT, DAILY_VARIABLES, type SeasonInput, type Working } from '../../lib/season/types.ts';
import { explainDay } from '../../lib/season/working.ts';
import { workOut } from '../support/pocket-calculator.ts';
import { randomSeason } from '../support/random-season.ts';
import { RULE_KINDS, richSeason } from '../support/rich-season.ts';

/** Stored as the contract says: round(value × scale), 0 … 65534. */
function stored(value: number, scale: number): number {
  return Math.min(65534, Math.max(0, Math.round(value * scale)));
}

function finiteNumbers(working: Working): boolean {
  let all = true;
  JSON.stringify(working, (_, value) => {
    if (typeof value === 'number' && !Number.isFinite(value)) all = false;
    return value;
  });
  return all;
}

describe('explainDay', () => {
  test.each([2, 3, 5, 8, 13])('100 parcel-days each of two seasons, seed %i: results equal the stored values exactly', (seed) => {
    const random = mulberry32(seed);
    for (const input of [randomSeason({ seed, parcels: 20, days: 120 }), randomSeason({ seed: seed + 1000, parcels: 20, days: 120 })]) {
      const { daily } = runSeason(input);
      for (let k = 0; k < 100; k++) {
        const parcel = Math.floor(random() * 20);
        const day = Math.floor(random() * 120);
        const working = explainDay(input, parcel, day);
        for (const [v, { id, scale }] of DAILY_VARIABLES.entries()) {
          const at = (parcel * DAILY_VARIABLE_COUNT + v) * 120 + day;
          if (stored(working.results[id], scale) !== daily[at])
            expect.fail(`${id} of parcel ${parcel}, day ${day}: ${working.results[id]} against ${daily[at]}`);
        }
        if (!finiteNumbers(working)) expect.fail(`a number of the working of parcel ${parcel}, day ${day} is not finite`);
      }
    }
  });

  const input: SeasonInput = randomSeason({ seed: 4, parcels: 40, days: 200 });

  test('the reference ET step gives the result of the day to the last bit', () => {
    for (let p = 0; p < 40; p++) {
      const working = explainDay(input, p, 100);
      const step = working.steps.find(({ symbol }) => symbol === 'ETo');
      expect(step?.result).toBe(working.results.reference_et);
    }
  });

  test('the strips of the working add up to the parcel', () => {
    const p = input.parcels.findIndex(({ plantings }) => plantings.length === 2 && plantings[0].areaShare === 0.4);
    expect(p).toBeGreaterThanOrEqual(0);
    const working = explainDay(input, p, 60);
    const evaporated = working.steps.filter(({ symbol }) => symbol === 'E');
    expect(evaporated.length).toBeGreaterThan(1);
    let sum = 0;
    for (const { strip, result } of evaporated) sum += (result * Number(/([\d.]+) % of the parcel/.exec(strip ?? '')?.[1])) / 100;
    expect(sum).toBeCloseTo(working.results.evaporation, 6);
  });

  test('weights of the sites shown sum to 1, and each step names its source', () => {
    const working = explainDay(input, 3, 150);
    expect(working.inputs.reduce((sum, { weight }) => sum + weight, 0)).toBeCloseTo(1, 12);
    for (const step of working.steps) expect(step.source.length, step.symbol).toBeGreaterThan(5);
  });

  test('the balance step of every strip is 0', () => {
    for (const step of explainDay(input, 7, 199).steps)
      if (step.part === 'balance' && step.symbol === 'residual') expect(Math.abs(step.result)).toBeLessThan(1e-9);
  });

  test('a parcel or day outside the season is refused with its limits', () => {
    expect(() => explainDay(input, 40, 0)).toThrow(/parcel index 40 is not within 0 … 39/);
    expect(() => explainDay(input, 0, 200)).toThrow(/day 200 is not within 0 … 199/);
  });
});

/** Parts told by the season itself; the others are tested where they are made. */
const OWN_PARTS = ['root-zone', 'irrigation', 'surface', 'balance', 'coefficient'];

describe('explainDay on every kind of season', () => {
  const kinds = RULE_KINDS.flatMap((rule) => (['dual', 'single'] as const).map((coefficient) => [rule, coefficient] as const));

  test.each(kinds)(
    'rule %s, %s coefficients: results equal the stored values, every equation can be worked out from the page',
    (rule, coefficient) => {
      const symbols = new Set<string>();
      for (const [seed, warmer] of [
        [3, 0],
        [4, -12],
      ]) {
        const input = richSeason({
          seed,
          parcels: 12,
          days: 150,
          rule,
          warmer,
          leadDays: seed === 3 ? 25 : undefined,
          settings: { coefficient },
        });
        const days = keptDays(input);
        const { daily } = runSeason(input);
        for (let k = 0; k < 60; k++) {
          const [parcel, day] = [k % 12, (k * 37 + 11) % days];
          const working = explainDay(input, parcel, day);
          for (const [v, { id, scale }] of DAILY_VARIABLES.entries()) {
            const at = (parcel * DAILY_VARIABLE_COUNT + v) * days + day;
            if (stored(working.results[id], scale) !== daily[at]) expect.fail(`${id} of parcel ${parcel}, day ${day}`);
          }
          if (!finiteNumbers(working)) expect.fail(`a number of the working of parcel ${parcel}, day ${day} is not finite`);
          for (const step of working.steps) {
            const value = OWN_PARTS.includes(step.part) ? workOut(step) : null;
            if (value === null) continue;
            symbols.add(step.symbol);
            const near = Math.abs(value - step.result) <= 1e-9 * Math.max(1, Math.abs(step.result));
            if (!near) expect.fail(`${step.expression} gives ${value}, the working ${step.result} (parcel ${parcel}, day ${day})`);
          }
        }
      }
      for (const symbol of ['TAW', 'Dr,0', 'Pi', 'Dr,rain', 'Dr,1', 'ETc', 'RAW', 'W', 'T', 'Dr', 'residual'])
        expect(symbols).toContain(symbol);
    },
  );
});
