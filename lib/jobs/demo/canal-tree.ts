/**
 * The conveyance tree of the invented district: main canal, three branches and a ditch on the contour lines, laterals down the survey lines.
 */
import { BOTTOM_EDGE, type CanalLine, LOWER_BRANCH, linePoint, lineStretch, NORTH_CANAL, RIVER_DITCH, SOUTH_CANAL } from './canal-lines.ts';
import { corner } from './lattice.ts';
import { elevationAt, type PlanePoint, riverAcross, valleyFromPlane } from './terrain.ts';

export interface DemoReachShape {
  readonly code: string;
  readonly name: string;
  readonly parentCode: string | null;
  readonly kind: 'main' | 'branch' | 'lateral' | 'sub-lateral';
  /** plane points head to tail */
  readonly points: readonly PlanePoint[];
}

interface CanalPlan {
  readonly code: string;
  readonly name: string;
  readonly line: CanalLine;
  readonly kind: 'main' | 'branch';
  readonly feeder: string;
  /** places along the valley where a reach ends and a lateral leaves */
  readonly tails: readonly number[];
}

const PLANS: readonly CanalPlan[] = [
  { code: 'M', name: 'Main Canal', line: NORTH_CANAL, kind: 'main', feeder: '', tails: [1600, 4200, 7100, 10100, 13100, 16000] },
  { code: 'H', name: 'Highline Branch', line: NORTH_CANAL, kind: 'branch', feeder: 'M6', tails: [19500, 23200, 26900, 30400] },
  { code: 'L', name: 'Lower Branch', line: LOWER_BRANCH, kind: 'branch', feeder: 'M6', tails: [19000, 22500, 26000, 29800] },
  { code: 'R', name: 'Willow Ditch', line: RIVER_DITCH, kind: 'branch', feeder: 'M2', tails: [7600, 11600, 15600] },
  { code: 'S', name: 'South Branch', line: SOUTH_CANAL, kind: 'branch', feeder: 'S1', tails: [6900, 11300, 15900, 20600, 25300, 30000] },
];

/** Reaches at whose tail a lateral leaves, and whether it is long enough to feed a sub-lateral. */
const LATERALS: readonly (readonly [reach: string, withSubLateral: boolean])[] = [
  ['M2', false],
  ['M3', false],
  ['M4', true],
  ['M5', true],
  ['M6', true],
  ['H1', false],
  ['H2', true],
  ['H3', true],
  ['L1', false],
  ['L2', true],
  ['L3', true],
  ['L4', false],
  ['S2', false],
  ['S3', true],
  ['S4', true],
  ['S5', true],
  ['S6', true],
  ['S7', false],
];

/** All reaches, each after the one that feeds it. */
export function demoReachShapes(seed: number): DemoReachShape[] {
  const trunks = trunkReaches(seed);
  const taken = new Set<string>();
  const laterals = LATERALS.flatMap(([reach, sub], at) => lateralReaches({ trunks, reach, number: at + 1, sub, taken, seed }));
  return [...trunks.map(({ shape }) => shape), ...laterals];
}

interface Trunk {
  readonly shape: DemoReachShape;
  readonly line: CanalLine;
  /** survey column whose line meets the tail */
  readonly column: number;
}

function trunkReaches(seed: number): Trunk[] {
  const trunks: Trunk[] = [];
  for (const plan of PLANS) {
    let from = plan.line.from;
    let parentCode: string | null = plan.feeder === '' ? null : plan.feeder;
    if (plan.code === 'H') from = 16000;
    if (plan.code === 'S') trunks.push(siphon(from));
    plan.tails.forEach((nominal, at) => {
      const number = plan.code === 'S' ? at + 2 : at + 1;
      const last = at === plan.tails.length - 1;
      const crossing = last || JUNCTIONS.has(`${plan.code}${number}`) ? null : surveyCrossing(plan.line, nominal, seed);
      const tail = crossing?.along ?? nominal;
      const code = `${plan.code}${number}`;
      const points = lineStretch(plan.line, from, tail);
      const column = crossing?.column ?? surveyCrossing(plan.line, nominal, seed).column;
      trunks.push({ shape: { code, name: `${plan.name} ${number}`, parentCode, kind: plan.kind, points }, line: plan.line, column });
      parentCode = code;
      from = tail;
    });
  }
  return trunks;
}

/** Reaches whose tail is fixed by a branch leaving there. */
const JUNCTIONS = new Set(['M1', 'M2', 'M6']);

/** The pipe under the river that carries the South Branch across. */
function siphon(to: number): Trunk {
  const points = [linePoint(NORTH_CANAL, 1600), linePoint({ ...SOUTH_CANAL, distance: () => 60 }, 2150), linePoint(SOUTH_CANAL, to)];
  return {
    shape: { code: 'S1', name: 'South Branch siphon', parentCode: 'M1', kind: 'branch', points },
    line: SOUTH_CANAL,
    column: Number.NaN,
  };
}

/** Where a north–south survey line meets a canal, nearest to a place along the valley. */
function surveyCrossing(line: CanalLine, nominal: number, seed: number): { along: number; column: number } {
  const [east, north] = linePoint(line, nominal);
  const [c, r] = [Math.round(east / 804.672), Math.round(north / 804.672)];
  let best = { along: nominal, column: c, miss: Number.POSITIVE_INFINITY };
  for (let column = c - 2; column <= c + 2; column++) {
    for (let row = r - 3; row <= r + 3; row++) {
      const along = edgeCrossing(line, corner(column, row, seed), corner(column, row + 1, seed));
      if (along !== null && Math.abs(along - nominal) < best.miss) best = { along, column, miss: Math.abs(along - nominal) };
    }
  }
  return best;
}

function edgeCrossing(line: CanalLine, a: PlanePoint, b: PlanePoint): number | null {
  const at = (t: number): PlanePoint => [a[0] + (b[0] - a[0]) * t, a[1] + (b[1] - a[1]) * t];
  if (outside(line, a) === outside(line, b)) return null;
  let [low, high] = [0, 1];
  for (let i = 0; i < 40; i++) {
    const middle = (low + high) / 2;
    if (outside(line, at(middle)) === outside(line, a)) low = middle;
    else high = middle;
  }
  return valleyFromPlane(at(low)).along;
}

/** True when the point lies farther from the river than the line, on the line's side. */
function outside(line: CanalLine, point: PlanePoint): boolean {
  return riverDistance(line, point) > line.distance(valleyFromPlane(point).along);
}

/** Distance from the river, positive on the side of the line [m]. */
function riverDistance(line: CanalLine, point: PlanePoint): number {
  const { along, across } = valleyFromPlane(point);
  return line.side * (across - riverAcross(along));
}

interface LateralPlan {
  readonly trunks: readonly Trunk[];
  readonly reach: string;
  readonly number: number;
  readonly sub: boolean;
  readonly taken: Set<string>;
  readonly seed: number;
}

function lateralReaches(plan: LateralPlan): DemoReachShape[] {
  const trunk = plan.trunks.find(({ shape }) => shape.code === plan.reach) as Trunk;
  const start = trunk.shape.points.at(-1) as PlanePoint;
  const nodes = walkDown(trunk, start, plan);
  const code = `T${String(plan.number).padStart(2, '0')}`;
  const name = `Lateral ${plan.number}`;
  const points = [start, ...nodes.map(([column, row]) => corner(column, row, plan.seed))];
  if (!plan.sub || nodes.length < 3) return [{ code, name, parentCode: plan.reach, kind: 'lateral', points }];
  const cut = Math.floor(nodes.length / 2);
  const sub = walkAcross(nodes[cut], trunk, plan).map(([column, row]) => corner(column, row, plan.seed));
  return [
    { code: `${code}A`, name: `${name} upper`, parentCode: plan.reach, kind: 'lateral', points: points.slice(0, cut + 2) },
    { code: `${code}B`, name: `${name} lower`, parentCode: `${code}A`, kind: 'lateral', points: points.slice(cut + 1) },
    ...(sub.length > 1
      ? [{ code: `${code}C`, name: `Sub-lateral ${plan.number}`, parentCode: `${code}A`, kind: 'sub-lateral' as const, points: sub }]
      : []),
  ];
}

type Node = readonly [column: number, row: number];

/** From the canal down the steepest survey lines until the next canal or the bottom land. */
function walkDown(trunk: Trunk, start: PlanePoint, { taken, seed }: LateralPlan): Node[] {
  const step = trunk.line.side === 1 ? -1 : 1;
  let row = Math.round(start[1] / 804.672) - 3 * step;
  while (outside(trunk.line, corner(trunk.column, row, seed)) || step * (corner(trunk.column, row, seed)[1] - start[1]) < 60) row += step;
  let at: Node | null = [trunk.column, row];
  const nodes: Node[] = [];
  while (at && inBench(trunk, corner(at[0], at[1], seed))) {
    nodes.push(at);
    taken.add(at.join());
    const [column, here]: Node = at;
    const ways: Node[] = [
      [column, here + step],
      [column + 1, here],
    ];
    at =
      ways
        .filter((way) => !taken.has(way.join()))
        .sort((a, b) => elevationAt(corner(a[0], a[1], seed)) - elevationAt(corner(b[0], b[1], seed)))[0] ?? null;
  }
  return nodes;
}

/** Between the trunk and whatever stops its laterals: the Lower Branch for the Highline, else the bottom land. */
function inBench(trunk: Trunk, point: PlanePoint): boolean {
  const { along } = valleyFromPlane(point);
  const stop = trunk.shape.code.startsWith('H') ? LOWER_BRANCH.distance(along) + 60 : BOTTOM_EDGE + 20;
  return riverDistance(trunk.line, point) > stop && !outside(trunk.line, point) && along < 30300;
}

/** From a lateral eastward down the valley, at most three quarter sections. */
function walkAcross(from: Node, trunk: Trunk, { taken, seed }: LateralPlan): Node[] {
  const nodes: Node[] = [from];
  for (let step = 1; step <= 3; step++) {
    const next: Node = [from[0] + step, from[1]];
    if (taken.has(next.join()) || !inBench(trunk, corner(next[0], next[1], seed))) break;
    taken.add(next.join());
    nodes.push(next);
  }
  return nodes;
}
