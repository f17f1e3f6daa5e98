/**
 * The logic behind the reading screens: figures, periods, the list of parcels, the canal drawing, and equations with their numbers put in.
 * Expected values are exact conversions (NIST SP 811, Appendix B), printed examples of FAO-56, or counted by hand.
 */
import { describe, expect, test } from 'vitest';
import { documentedExports } from '../../app/_components/code-docs.ts';
import { stageEdges } from '../../app/_components/crop-curve.tsx';
import { dateRange, monthTicks } from '../../app/_components/date-words.ts';
import { figure, inUnits, plain, significant, sumOf } from '../../app/_components/figures.ts';
import { stepPath } from '../../app/_components/flow-profile.tsx';
import { floatsOf, type ParcelListInput, parcelPage, unmetShare } from '../../app/_components/parcel-list.ts';
import { busiestWeek, choosePeriod, weekStartOf } from '../../app/_components/period-choice.ts';
import { hrefWith } from '../../app/_components/query.ts';
import { drawnTree, inTreeOrder, mainCanal } from '../../app/_components/reach-order.ts';
import { substituted } from '../../app/_components/substituted.ts';
import { compareStored, groupSteps } from '../../app/_components/working-steps.tsx';
import { mulberry32 } from '../../lib/base/random.ts';

describe('figures', () => {
  test.each([
    // NIST SP 811, Appendix B.8: exact factors
    [25.4, 'depth', '1.00'],
    [1233.48183754752, 'volume', '1.00'],
    [0.028316846592, 'flow', '1.00'],
    [0.40468564224, 'area', '1.00'],
    [1.609344, 'distance', '1.00'],
    [0.44704, 'speed', '1.0'],
    [-40, 'temperature', '−40.0'],
  ] as const)('%d of %s is %s in United States units', (metric, quantity, shown) => {
    expect(figure(metric, quantity, 'us')).toBe(shown);
  });
  test('missing is a dash, never zero', () => {
    expect(figure(null, 'depth', 'metric')).toBe('–');
    expect(Number.isNaN(inUnits(undefined, 'area', 'us'))).toBe(true);
    expect(Number.isNaN(sumOf([{ a: null }, { a: null }], (row) => row.a))).toBe(true);
    expect(sumOf([{ a: 1 }, { a: null }, { a: 2 }], (row) => row.a)).toBe(3);
  });
  test.each([
    [4.903e-9, 5, '4.903 × 10⁻⁹'],
    [0.000665, 5, '0.000665'],
    [13.2832, 5, '13.283'],
    [101.3, 4, '101.3'],
    [-0.07534, 3, '−0.0753'],
    [0, 5, '0'],
    [187, 5, '187'],
  ])('%d to %i digits is %s', (value, digits, shown) => {
    expect(significant(value, digits)).toBe(shown);
  });
  test('a rounded zero carries no sign', () => {
    expect(plain(-0.04, 1)).toBe('0.0');
  });
});

describe('periods', () => {
  const span = { start_date: '2024-06-01', end_date: '2024-07-10' };
  test('1 June 2024 is a Saturday, so a week that begins on Monday is cut after two days', () => {
    const choice = choosePeriod({ period: 'week' }, span, 1);
    expect(choice.period).toMatchObject({ start: '2024-06-01', end: '2024-06-02' });
  });
  test('a date picks the period that holds it, a date outside falls back to the preferred one', () => {
    expect(choosePeriod({ period: 'month', date: '2024-07-04' }, span, 1).period.start).toBe('2024-07-01');
    expect(choosePeriod({ period: 'month', date: '2023-01-01' }, span, 1, { preferred: '2024-07-09' }).index).toBe(1);
    expect(choosePeriod({ period: 'fortnight', date: 'x' }, span, 1).kind).toBe('season');
  });
  test('the busiest week is the one with the greatest figure; none when all are missing', () => {
    const weeks = [
      { start: 'a', volume: null },
      { start: 'b', volume: 5 },
      { start: 'c', volume: 4 },
    ];
    expect(busiestWeek(weeks, (week) => week.volume)).toBe('b');
    expect(busiestWeek(weeks, () => null)).toBeUndefined();
  });
  test('weeks begin as they were frozen with the run', () => {
    expect(weekStartOf({ manifest: { week_start: 4 } }, { weekStart: 1 })).toBe(4);
    expect(weekStartOf({ manifest: {} }, { weekStart: 7 })).toBe(7);
  });
  test('a range over New Year names both years', () => {
    expect(dateRange('2024-12-30', '2025-01-05')).toBe('30 Dec 2024 – 5 Jan 2025');
    expect(monthTicks('2024-12-30', '2025-02-01')).toEqual([
      { offset: 2, name: 'Jan' },
      { offset: 33, name: 'Feb' },
    ]);
  });
  test('an address keeps what it is not told to change', () => {
    expect(hrefWith('/parcels', { sort: 'area', page: '3', date: undefined }, { page: null, order: 'down' })).toBe(
      '/parcels?sort=area&order=down',
    );
  });
});

describe('the list of parcels', () => {
  const zero = [0, 0, 0, 0];
  const base: ParcelListInput = {
    parcels: {
      code: ['P10', 'P9', 'P2', 'P1'],
      area_m2: [10_000, 30_000, 20_000, 40_000],
      crops: ['Maize', 'Wheat', 'Maize', ''],
      reach: ['A', 'B', 'B', null],
    },
    values: {
      crop_et: [5, 5, 5, 5],
      adjusted_crop_et: [4, 5, 5, 5],
      precipitation: zero,
      effective_precipitation: zero,
      net_requirement: zero,
      gross_requirement: [1, 2, Number.NaN, 4],
      estimated_share: [0, 0.5, 1, Number.NaN],
    },
    own: null,
    sort: 'parcel',
    descending: false,
    page: 1,
    pageSize: 100,
  };
  test('numbers inside codes sort as numbers', () => {
    expect(parcelPage(base).rows.map((row) => row.code)).toEqual(['P1', 'P2', 'P9', 'P10']);
  });
  test('1 mm on 1 ha is 10 m³, and the total is the sum of the volumes known', () => {
    const { rows, total } = parcelPage(base);
    expect(rows[3].volume_m3).toBe(10);
    expect(total.volume_m3).toBe(10 + 60 + 160);
    expect(total.area_ha).toBe(10);
  });
  test('missing sorts last both ways', () => {
    for (const descending of [false, true]) {
      expect(parcelPage({ ...base, sort: 'gross_requirement', descending }).rows.at(-1)?.code).toBe('P2');
    }
  });
  test('depths of the total are means by area over the parcels that have one', () => {
    // (1·1 + 2·3 + 4·4) / (1 + 3 + 4)
    expect(parcelPage(base).total.depths.gross_requirement).toBe(23 / 8);
  });
  test('search looks at code, crop and canal; a reach narrows exactly; a grower sees the own parcels', () => {
    expect(parcelPage({ ...base, search: 'maize' }).count).toBe(2);
    expect(parcelPage({ ...base, reach: 'B' }).count).toBe(2);
    expect(parcelPage({ ...base, own: ['P9'] }).rows.map((row) => row.code)).toEqual(['P9']);
  });
  test('pages hold every parcel once, and the total does not depend on the page', () => {
    const pages = [1, 2, 3].map((page) => parcelPage({ ...base, page, pageSize: 2 }));
    expect(pages.map((page) => page.page)).toEqual([1, 2, 2]);
    expect(new Set(pages.flatMap((page) => page.rows.map((row) => row.code))).size).toBe(4);
    expect(pages[0].total).toEqual(pages[1].total);
  });
  test('crop ET of 5 mm of which 4 are taken leaves a fifth unmet; no crop ET has no share', () => {
    expect(unmetShare(5, 4)).toBeCloseTo(0.2, 12);
    expect(unmetShare(0, 0)).toBeNaN();
  });
  test('map arrays are little-endian 32-bit floats (IEEE 754: 1.5 is 00 00 c0 3f)', () => {
    expect([...floatsOf(Uint8Array.from([0, 0, 0xc0, 0x3f]))]).toEqual([1.5]);
  });
});

const reach = (code: string, parent: string | null, kind: string, inflow: number) => ({
  reach: code,
  parent,
  kind,
  length_km: 1,
  head_inflow_m3: inflow,
  area_ha: 1,
});

describe('the canal drawing', () => {
  const rows = [
    reach('L1', 'M1', 'lateral', 9),
    reach('M2', 'M1', 'main', 5),
    reach('M1', null, 'main', 15),
    reach('L2', 'M2', 'lateral', 4),
    reach('L3', 'L1', 'lateral', 1),
  ];
  test('a table has each reach after the one that feeds it', () => {
    expect(inTreeOrder(rows).map((row) => row.reach)).toEqual(['M1', 'L1', 'L3', 'M2', 'L2']);
  });
  test('the same kind carries on before the greater flow; a tail goes on into what it feeds', () => {
    const drawn = drawnTree(rows);
    expect(mainCanal(drawn).map((each) => each.row.reach)).toEqual(['M1', 'M2', 'L2']);
    expect(drawn.find((each) => each.row.reach === 'L1')).toMatchObject({ from: 1, to: 2, line: 1, parentLine: 0 });
    expect(drawn.find((each) => each.row.reach === 'L3')).toMatchObject({ from: 2, to: 3, line: 1, parentLine: 1 });
  });
  test.each([1, 2, 3, 4, 5])('no connection crosses a canal, and every reach is drawn once (random tree %i)', (seed) => {
    const random = mulberry32(seed);
    const tree = Array.from({ length: 40 }, (_, at) =>
      reach(`R${at}`, at === 0 ? null : `R${Math.floor(random() * at)}`, random() < 0.5 ? 'main' : 'lateral', random()),
    );
    const drawn = drawnTree(tree);
    expect(new Set(drawn.map((each) => each.row.reach)).size).toBe(40);
    for (const branch of drawn.filter((each) => each.parentLine !== each.line)) {
      const between = drawn.filter((each) => each.line > branch.parentLine && each.line < branch.line);
      expect(between.filter((each) => each.from < branch.from && each.to > branch.from)).toEqual([]);
    }
  });
  test('a profile is level along a reach, steps between reaches and breaks where a flow is missing', () => {
    const steps = [
      { from: 0, to: 10, y: 5 },
      { from: 10, to: 20, y: 7 },
      { from: 20, to: 30, y: Number.NaN },
      { from: 30, to: 40, y: 8 },
    ];
    expect(stepPath(steps)).toBe('M0 5H10V7H20M30 8H40');
  });
});

/** What a reader with a calculator gets from an equation as shown: signs and products made machine-readable. */
function calculated(shown: string): number {
  const script = shown
    .replaceAll('·', '*')
    .replaceAll('−', '-')
    .replaceAll('[', '(')
    .replaceAll(']', ')')
    .replaceAll('exp(', 'Math.exp(')
    .replaceAll('√', '')
    .replaceAll('²', '**2');
  return Number(new Function(`return ${script}`)());
}

describe('equations with their numbers put in', () => {
  test('FAO-56 Example 18 (Uccle, 6 July): the shown line gives the printed 3.88 mm', () => {
    const shown = substituted('ETo = [0.408 Δ (Rn − G) + γ 900 / (T + 273) u2 (es − ea)] / [Δ + γ (1 + 0.34 u2)]', [
      { symbol: 'Δ', value: 0.122 },
      { symbol: 'Rn', value: 13.28 },
      { symbol: 'G', value: 0 },
      { symbol: 'γ', value: 0.0666 },
      { symbol: 'T', value: 16.9 },
      { symbol: 'u2', value: 2.078 },
      { symbol: 'es', value: 1.997 },
      { symbol: 'ea', value: 1.409 },
    ]);
    expect(shown).toBe(
      '[0.408 · 0.122 · (13.28 − 0) + 0.0666 · 900 / (16.9 + 273) · 2.078 · (1.997 − 1.409)] / [0.122 + 0.0666 · (1 + 0.34 · 2.078)]',
    );
    expect(calculated(String(shown))).toBeCloseTo(3.88, 2);
  });
  test('FAO-56 Eq. 11 at 24.5 °C: the shown line gives the 3.075 kPa of Annex 2 Table 2.3', () => {
    const shown = substituted('e° = 0.6108 exp[17.27 T / (T + 237.3)]', [{ symbol: 'T', value: 24.5 }]);
    expect(calculated(String(shown).replace('exp[', 'exp('))).toBeCloseTo(3.075, 2);
  });
  test('a symbol inside a longer name, or before a subscript, is left alone', () => {
    expect(
      substituted('TAW = 1000 (θFC − θWP) Zr', [
        { symbol: 'Zr', value: 0.8 },
        { symbol: 'θFC', value: 0.3 },
        { symbol: 'θWP', value: 0.1 },
      ]),
    ).toBe('1000 · (0.3 − 0.1) · 0.8');
    expect(
      substituted('Dr = Dr,yesterday + T', [
        { symbol: 'Dr, yesterday', value: 12 },
        { symbol: 'T', value: 3 },
      ]),
    ).toBe('12 + 3');
  });
  test('negative numbers are bracketed', () => {
    expect(
      substituted('a = b − c', [
        { symbol: 'b', value: 1 },
        { symbol: 'c', value: -2 },
      ]),
    ).toBe('1 − (−2)');
  });
  test('nothing is shown when a number does not stand in the equation', () => {
    expect(
      substituted('Kr = 1 while De ≤ REW', [
        { symbol: 'De', value: 3 },
        { symbol: 'TEW', value: 20 },
      ]),
    ).toBeNull();
  });
});

const step = (part: string, strip?: string) => ({
  part,
  symbol: 's',
  name: 'n',
  expression: 'e',
  inputs: [],
  result: 1,
  unit: '1',
  source: 'x',
  strip,
});

describe('the working', () => {
  test('steps stay in the order the code did them, cut where part or strip changes', () => {
    const groups = groupSteps([step('weather'), step('weather'), step('surface', 'A'), step('surface', 'B'), step('weather')]);
    expect(groups.map((group) => [group.part, group.strip, group.steps.length])).toEqual([
      ['weather', undefined, 2],
      ['surface', 'A', 1],
      ['surface', 'B', 1],
      ['weather', undefined, 1],
    ]);
  });
  test('a result agrees with its stored value up to half a step of the store, 0.005 mm', () => {
    const working = (stored: number) => ({
      run: 'r',
      parcel: 'p',
      date: '2024-06-01',
      inputs: [],
      steps: [],
      results: { crop_et_mm: 5.0449 },
      stored: { crop_et_mm: stored },
    });
    const agrees = (stored: number) => compareStored(working(stored)).find((row) => row.id === 'crop_et')?.agrees;
    expect(agrees(5.04)).toBe(true);
    expect(agrees(5.05)).toBe(false);
  });
  test('stages of FAO-56 Example 28 (dry bean, 25/25/30/20 days) end on days 25, 50, 80 and 100', () => {
    expect(stageEdges({ initial: 25, development: 25, mid: 30, late: 20 }).map((edge) => edge.to)).toEqual([25, 50, 80, 100]);
  });
});

describe('what the code says of itself', () => {
  const text = [
    '/** Von Kármán’s constant. Source: FAO-56 Eq. 4. */',
    'export const VON_KARMAN = 0.41;',
    '/** No source here. */',
    'export const OTHER = 1;',
    '/**',
    ' * Wind at 2 m from another height.',
    ' *',
    ' *   u2 = uz 4.87 / ln(67.8 z − 5.42)',
    ' *',
    ' * @returns [m s⁻¹]',
    ' * Source: FAO-56 Eq. 47; over',
    ' * a grass surface.',
    ' */',
    'export function windSpeed2m(speed: number): number {',
  ].join('\n');
  test('sourced exports with value or formula, in the order of the file', () => {
    expect(documentedExports(text)).toEqual([
      { name: 'VON_KARMAN', kind: 'constant', says: 'Von Kármán’s constant.', formula: [], value: '0.41', source: 'FAO-56 Eq. 4.' },
      {
        name: 'windSpeed2m',
        kind: 'equation',
        says: 'Wind at 2 m from another height.',
        formula: ['u2 = uz 4.87 / ln(67.8 z − 5.42)'],
        value: null,
        source: 'FAO-56 Eq. 47; over a grass surface.',
      },
    ]);
  });
});
