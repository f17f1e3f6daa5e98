import { describe, expect, test } from 'vitest';
import { periodsOf } from '../../lib/base/civil-date.ts';
import { RangeViolation, ShapeError, TreeError } from '../../lib/base/errors.ts';
import { CONVEYANCE_PRESETS, conveyanceEfficiency } from '../../lib/canal/conveyance.ts';
import { checkLossRule, type LossRule } from '../../lib/canal/loss-rule.ts';
import { capacityStatus, reachPeriods } from '../../lib/canal/reach-period.ts';
import { rollUp, rollUpImbalance } from '../../lib/canal/roll-up.ts';
import { buildTree, reachesBelow, type TreeNode } from '../../lib/canal/tree.ts';
import { headInflow } from '../support/head-inflow.ts';

/** M feeds A and B; A feeds C. */
const NODES: TreeNode[] = [
  { code: 'C', parentCode: 'A' },
  { code: 'A', parentCode: 'M' },
  { code: 'M', parentCode: null },
  { code: 'B', parentCode: 'M' },
];

describe('conveyance tree', () => {
  test('puts every reach after the one that feeds it', () => {
    const tree = buildTree(NODES);
    expect(tree.codes[tree.head]).toBe('M');
    const place = new Map([...tree.order].map((reach, at) => [tree.codes[reach], at]));
    for (const { code, parentCode } of NODES) if (parentCode) expect(place.get(code)).toBeGreaterThan(place.get(parentCode) as number);
    expect([...tree.depth]).toEqual([2, 1, 0, 1]);
    expect(reachesBelow(tree, 1).map((reach) => tree.codes[reach])).toEqual(['A', 'C']);
  });

  const refused: [string, TreeNode[], string[]][] = [
    ['no reach', [], []],
    ['a code twice', [...NODES, { code: 'B', parentCode: 'A' }], ['B']],
    ['a parent that is not there', [...NODES, { code: 'D', parentCode: 'Q' }], ['D']],
    ['two heads', [...NODES, { code: 'N', parentCode: null }], ['M', 'N']],
    ['a cycle beside the tree', [...NODES, { code: 'X', parentCode: 'Y' }, { code: 'Y', parentCode: 'X' }], ['X', 'Y']],
    [
      'a tree that is one cycle',
      [
        { code: 'X', parentCode: 'Y' },
        { code: 'Y', parentCode: 'X' },
      ],
      ['X', 'Y'],
    ],
    [
      'a reach that feeds itself',
      [
        { code: 'M', parentCode: null },
        { code: 'X', parentCode: 'X' },
      ],
      ['X'],
    ],
    [
      'a branch hanging on a cycle',
      [
        { code: 'M', parentCode: null },
        { code: 'W', parentCode: 'X' },
        { code: 'X', parentCode: 'Y' },
        { code: 'Y', parentCode: 'X' },
      ],
      ['X', 'Y'],
    ],
  ];
  test.each(refused)('refuses %s by code', (_, nodes, codes) => {
    let error: unknown;
    try {
      buildTree(nodes);
    } catch (caught) {
      error = caught;
    }
    expect(error).toBeInstanceOf(TreeError);
    expect([...(error as TreeError).nodes].sort()).toEqual(codes);
    for (const code of codes) expect((error as TreeError).message).toContain(code);
  });
});

describe('loss rules', () => {
  // FAO Irrigation Manual module 1 (excerpt): 0.9 canal × 0.8 field canal × 0.55 application = 0.40 (0.396 unrounded).
  test('scheme of three efficiencies in a row', () => {
    const tree = buildTree([
      { code: 'canal', parentCode: null },
      { code: 'ditch', parentCode: 'canal' },
      { code: 'field', parentCode: 'ditch' },
    ]);
    const reaches = [0.9, 0.8, 0.55].map((efficiency) => ({ length: 1000, lossRule: { kind: 'efficiency' as const, efficiency } }));
    const { headInflow: inflow } = rollUp({ tree, reaches, turnoutDemand: Float64Array.of(0, 0, 396) });
    expect(inflow[0]).toBeCloseTo(1000, 9);
  });

  // 0.5 ft³ ft⁻² d⁻¹ (152.4 mm/d) over 20 ft of wetted perimeter and one mile: 52 800 ft³ = 1495.13 m³ (1 ft³ = 0.028316846592 m³, NIST SP 811).
  test('seepage in feet and in metres is the same water', () => {
    const rule: LossRule = { kind: 'seepage', rate: 152.4, wettedPerimeter: 6.096 };
    expect(headInflow(rule, 1609.344, { outflow: 1, turnoutDemand: 0 }) - 1).toBeCloseTo(52800 * 0.028316846592, 6);
  });

  test('one tenth lost per km leaves 0.9³ after three', () => {
    expect(headInflow({ kind: 'fraction-per-km', fraction: 0.1 }, 3000, { outflow: 729, turnoutDemand: 0 })).toBeCloseTo(1000, 9);
  });

  const bad: [string, LossRule][] = [
    ['efficiency 0', { kind: 'efficiency', efficiency: 0 }],
    ['efficiency above 1', { kind: 'efficiency', efficiency: 1.01 }],
    ['all lost in a km', { kind: 'fraction-per-km', fraction: 1 }],
    ['negative seepage', { kind: 'seepage', rate: -1, wettedPerimeter: 3 }],
    ['NaN perimeter', { kind: 'seepage', rate: 1, wettedPerimeter: Number.NaN }],
  ];
  test.each(bad)('refuses %s and names the reach', (_, rule) => {
    expect(() => checkLossRule(rule, 'reach L4')).toThrow(RangeViolation);
    expect(() => checkLossRule(rule, 'reach L4')).toThrow('reach L4');
  });

  // FAO Irrigation Water Management Training Manual 4 (recalled): sand 60/70/80, loam 70/75/85, clay 80/85/90, lined 95 % by length.
  test.each([
    ['sand', 2500, 0.6],
    ['loam', 2000, 0.75],
    ['loam', 200, 0.75],
    ['clay', 199, 0.9],
    ['lined', 9000, 0.95],
  ] as const)('efficiency of an earth canal in %s of %d m', (bed, length, expected) => {
    expect(conveyanceEfficiency(bed, length)).toBe(expected);
  });

  test('every preset makes a rule that loses nothing below zero', () => {
    for (const preset of CONVEYANCE_PRESETS) {
      const rule = preset.rule({ length: 1200, wettedPerimeter: 4 });
      expect(headInflow(rule, 1200, { outflow: 1000, turnoutDemand: 50 })).toBeGreaterThanOrEqual(1050);
    }
    // Etcheverry & Harding (1933) (recalled): sandy loam 1.00–1.50 ft/d, middle 1.25 ft/d = 381 mm/d.
    expect(CONVEYANCE_PRESETS.find(({ code }) => code === 'seepage-sandy-loam')?.rule({ length: 1, wettedPerimeter: 4 })).toEqual({
      kind: 'seepage',
      rate: 381,
      wettedPerimeter: 4,
    });
  });
});

describe('reach periods', () => {
  const tree = buildTree(NODES);
  const reaches = NODES.map(() => ({ length: 1000, lossRule: { kind: 'efficiency' as const, efficiency: 0.5 } }));
  // two weeks; C draws 86 400 m³ (1 m³/s) on the last day of the first week
  const turnoutDemand = new Float64Array(NODES.length * 14);
  turnoutDemand[6] = 86400;
  const flows = rollUp({ tree, reaches, turnoutDemand });
  const periods = periodsOf('week', '2024-04-01', '2024-04-14', 1);
  const rows = reachPeriods({ tree, turnoutDemand, flows, capacity: [0.3, 0.6, Number.NaN, 0], periods });
  const row = (code: string, period: number) => rows.find((each) => tree.codes[each.reach] === code && each.period === period);

  test('volumes, flows and share of a reach that runs one day of seven', () => {
    expect(row('C', 0)).toMatchObject({
      turnoutDemand: 86400,
      demandBelow: 86400,
      loss: 86400,
      headInflow: 172800,
      peakFlow: 2,
      capacity: 0.3,
    });
    expect(row('C', 0)?.meanFlow).toBeCloseTo(2 / 7, 12);
    expect(row('C', 0)?.busiestFlow).toBeCloseTo(2 / 7, 12);
    expect(row('C', 0)?.capacityShare).toBeCloseTo(2 / 7 / 0.3, 12);
    expect(row('C', 0)?.status).toBe('tight');
    expect(row('A', 0)).toMatchObject({ turnoutDemand: 0, demandBelow: 86400, headInflow: 345600, peakFlow: 4, status: 'tight' });
    expect(row('C', 1)).toMatchObject({ headInflow: 0, peakFlow: 0, status: 'within' });
  });

  test('a capacity not known, or zero, gives no share and no status', () => {
    expect(row('M', 0)).toMatchObject({
      peakFlow: 8,
      capacity: Number.NaN,
      capacityShare: Number.NaN,
      meanShare: Number.NaN,
      status: null,
    });
    expect(row('B', 0)).toMatchObject({ capacityShare: Number.NaN, status: null });
  });

  test.each([
    [0, 'within'],
    [0.8999, 'within'],
    [0.9, 'tight'],
    [1, 'tight'],
    [1.0001, 'over'],
    [Number.NaN, null],
  ] as const)('share %d is %s', (share, status) => {
    expect(capacityStatus(share)).toBe(status);
  });

  test('arrays that do not fit are refused', () => {
    expect(() => reachPeriods({ tree, turnoutDemand, flows, capacity: [1], periods })).toThrow(ShapeError);
    expect(() => rollUp({ tree, reaches: [], turnoutDemand })).toThrow(ShapeError);
    expect(() => rollUp({ tree, reaches, turnoutDemand: new Float64Array(5) })).toThrow(ShapeError);
    const late = periodsOf('week', '2024-04-01', '2024-04-21', 1);
    expect(() => reachPeriods({ tree, turnoutDemand, flows, capacity: [1, 1, 1, 1], periods: late })).toThrow('20');
  });

  test('the imbalance measure sees water that was lost on the way', () => {
    expect(rollUpImbalance(tree, turnoutDemand, flows)).toBeLessThan(1e-12);
    const broken = { ...flows, reachLoss: flows.reachLoss.map((loss) => loss * 0.9) };
    expect(rollUpImbalance(tree, turnoutDemand, broken)).toBeCloseTo(0.0875, 9);
  });
});
