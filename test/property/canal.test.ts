import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type LossRule, lossCoefficients } from '../../lib/canal/loss-rule.ts';
import { rollUp } from '../../lib/canal/roll-up.ts';
import { buildTree, type TreeNode } from '../../lib/canal/tree.ts';
import { headInflow } from '../support/head-inflow.ts';

const SEED = { seed: 20240611, numRuns: 200 };

const lossRule: fc.Arbitrary<LossRule> = fc.oneof(
  fc.constant<LossRule>({ kind: 'none' }),
  fc.record({ kind: fc.constant('fraction-per-km' as const), fraction: fc.double({ min: 0, max: 0.3, noNaN: true }) }),
  fc.record({ kind: fc.constant('efficiency' as const), efficiency: fc.double({ min: 0.2, max: 1, noNaN: true }) }),
  fc.record({
    kind: fc.constant('seepage' as const),
    rate: fc.double({ min: 0, max: 900, noNaN: true }),
    wettedPerimeter: fc.double({ min: 0.5, max: 40, noNaN: true }),
  }),
);
const volume = fc.double({ min: 0, max: 5e6, noNaN: true });

interface RandomCanals {
  nodes: TreeNode[];
  reaches: { length: number; lossRule: LossRule }[];
  demand: number[][];
}

/** Random trees: reach i hangs on some reach before it; demands of three days per reach. */
const canals: fc.Arbitrary<RandomCanals> = fc.integer({ min: 1, max: 40 }).chain((count) =>
  fc.record({
    nodes: fc
      .array(fc.nat(), { minLength: count, maxLength: count })
      .map((picks) => picks.map((pick, i) => ({ code: `R${i}`, parentCode: i === 0 ? null : `R${pick % i}` }))),
    reaches: fc.array(fc.record({ length: fc.double({ min: 0, max: 9000, noNaN: true }), lossRule }), {
      minLength: count,
      maxLength: count,
    }),
    demand: fc.array(fc.array(volume, { minLength: 3, maxLength: 3 }), { minLength: count, maxLength: count }),
  }),
);

function run({ nodes, reaches, demand }: RandomCanals) {
  const tree = buildTree(nodes);
  return { tree, ...rollUp({ tree, reaches, turnoutDemand: Float64Array.from(demand.flat()) }) };
}

function total(values: Iterable<number>): number {
  let sum = 0;
  for (const value of values) sum += value;
  return sum;
}

describe('roll-up of demand', () => {
  test('headworks inflow = turnout demand + losses on every day', () => {
    fc.assert(
      fc.property(canals, (given) => {
        const { tree, headInflow: inflow, reachLoss, dayCount } = run(given);
        for (let day = 0; day < 3; day++) {
          const losses = total(given.nodes.map((_, i) => reachLoss[i * dayCount + day]));
          const drawn = total(given.demand.map((row) => row[day]));
          const head = inflow[tree.head * dayCount + day];
          expect(Math.abs(head - drawn - losses)).toBeLessThanOrEqual(1e-9 * Math.max(1, head));
        }
      }),
      SEED,
    );
  });

  test('each reach takes in what it passes on, delivers and loses; losses are never negative', () => {
    fc.assert(
      fc.property(canals, (given) => {
        const { tree, headInflow: inflow, reachLoss } = run(given);
        given.nodes.forEach((_, i) => {
          const on = total(tree.children[i].map((child) => inflow[child * 3]));
          const gap = inflow[i * 3] - on - given.demand[i][0] - reachLoss[i * 3];
          expect(Math.abs(gap)).toBeLessThanOrEqual(1e-9 * Math.max(1, inflow[i * 3]));
          expect(reachLoss[i * 3]).toBeGreaterThanOrEqual(0);
        });
      }),
      SEED,
    );
  });

  test('the order in which reaches are given is irrelevant', () => {
    fc.assert(
      fc.property(canals, fc.infiniteStream(fc.nat()), (given, stream) => {
        const keys = given.nodes.map(() => stream.next().value as number);
        const order = given.nodes.map((_, i) => i).sort((a, b) => keys[a] - keys[b]);
        const shuffled = {
          nodes: order.map((i) => given.nodes[i]),
          reaches: order.map((i) => given.reaches[i]),
          demand: order.map((i) => given.demand[i]),
        };
        const [plain, mixed] = [run(given), run(shuffled)];
        order.forEach((from, to) => {
          expect(Math.abs(mixed.headInflow[to * 3] - plain.headInflow[from * 3])).toBeLessThanOrEqual(
            1e-9 * Math.max(1, plain.headInflow[from * 3]),
          );
        });
      }),
      SEED,
    );
  });

  test('without losses the headworks carry the sum of the leaves', () => {
    fc.assert(
      fc.property(canals, (given) => {
        const lossless = given.reaches.map((reach) => ({ ...reach, lossRule: { kind: 'efficiency' as const, efficiency: 1 } }));
        const { tree, headInflow: inflow } = run({ ...given, reaches: lossless });
        const drawn = total(given.demand.map((row) => row[0]));
        expect(Math.abs(inflow[tree.head * 3] - drawn)).toBeLessThanOrEqual(1e-9 * Math.max(1, drawn));
      }),
      SEED,
    );
  });

  test('a missing demand reaches the headworks and never a sibling', () => {
    fc.assert(
      fc.property(canals, fc.nat(), (given, pick) => {
        const at = pick % given.nodes.length;
        const demand = given.demand.map((row, i) => (i === at ? [Number.NaN, row[1], row[2]] : row));
        const { tree, headInflow: inflow } = run({ ...given, demand });
        const above = new Set<number>();
        for (let i = at; i >= 0; i = tree.parent[i]) above.add(i);
        given.nodes.forEach((_, i) => {
          expect(Number.isNaN(inflow[i * 3])).toBe(above.has(i));
          expect(Number.isNaN(inflow[i * 3 + 1])).toBe(false);
        });
      }),
      SEED,
    );
  });
});

describe('loss rules', () => {
  test('nothing carried, nothing lost', () => {
    fc.assert(
      fc.property(lossRule, (rule) => {
        expect(headInflow(rule, 5000, { outflow: 0, turnoutDemand: 0 })).toBe(0);
      }),
      SEED,
    );
  });

  test('fraction per km agrees with stepping dQ/dx = −kQ − T/L from tail to head', () => {
    const cases = fc.record({
      fraction: fc.double({ min: 0.001, max: 0.2, noNaN: true }),
      length: fc.integer({ min: 50, max: 15000 }),
      outflow: volume,
      demand: volume,
    });
    fc.assert(
      fc.property(cases, ({ fraction, length, outflow, demand }) => {
        const steps = 2000;
        const dx = length / 1000 / steps;
        const k = -Math.log(1 - fraction);
        let flow = outflow;
        for (let i = 0; i < steps; i++) {
          const half = flow + (dx / 2) * (k * flow + demand / (length / 1000));
          flow += dx * (k * half + demand / (length / 1000));
        }
        const closed = headInflow({ kind: 'fraction-per-km', fraction }, length, { outflow, turnoutDemand: demand });
        expect(Math.abs(flow - closed)).toBeLessThanOrEqual(1e-5 * Math.max(1, closed));
      }),
      { seed: 7, numRuns: 40 },
    );
  });

  test('two half reaches in a row lose what the whole reach loses', () => {
    fc.assert(
      fc.property(
        lossRule.filter((rule) => rule.kind !== 'efficiency'),
        fc.double({ min: 1, max: 9000, noNaN: true }),
        fc.double({ min: 1, max: 5e6, noNaN: true }),
        (rule, length, outflow) => {
          const half = (flow: number) => headInflow(rule, length / 2, { outflow: flow, turnoutDemand: 0 });
          const whole = headInflow(rule, length, { outflow, turnoutDemand: 0 });
          expect(Math.abs(half(half(outflow)) - whole)).toBeLessThanOrEqual(1e-9 * whole);
          expect(lossCoefficients(rule, length).perOutflow).toBeGreaterThanOrEqual(1);
        },
      ),
      SEED,
    );
  });
});
