/**
 * Parcels of the invented district: long lots along the river, quarter sections on the benches split, circled by pivots and cut by the canals.
 */
import { difference, type Geom, intersection } from 'polyclip-ts';
import type { Random } from '../../base/random.ts';
import { BOTTOM_EDGE, type CanalLine, LOWER_BRANCH, linePoint, NORTH_CANAL, RIVER_DITCH, SOUTH_CANAL } from './canal-lines.ts';
import { QUARTER_SIDE, quarterCorners, withinQuarter } from './lattice.ts';
import { type PlanePoint, planeFromValley, riverAcross, type Side, VALLEY_LENGTH, valleyFromPlane } from './terrain.ts';

export interface DemoShape {
  /** plane points, counter-clockwise, first not repeated */
  readonly ring: readonly PlanePoint[];
  readonly zone: 'bottom' | 'bench';
  readonly pivot: boolean;
}

/** Half width of lanes and laterals between parcels [m], and clear ground beside the larger canals [m]. */
const LANE = 7;
const CANAL_CLEARANCE = 24;
const SMALLEST = 20000;
/** Ground is drawn this far down the valley [m]; parcels end before it along a ragged edge. */
const BEYOND = VALLEY_LENGTH + 1400;
const ROUNDEST_SLIVER = 0.24;
/** An invented small town; no parcels within this distance of it [m]. */
const TOWN = { along: 13600, across: 1900, radius: 900 } as const;

export function demoParcelShapes(seed: number, random: Random): DemoShape[] {
  return [...bottomLots(1, random), ...bottomLots(-1, random), ...benchParcels(seed, random)].filter(({ ring }) => served(centre(ring)));
}

/** Long lots between the river bank and the edge of the bottom land, cut by slightly skew lines. */
function bottomLots(side: Side, random: Random): DemoShape[] {
  const shapes: DemoShape[] = [];
  let from = side === 1 ? 1500 : 2900;
  let skewFrom = 0;
  while (from < VALLEY_LENGTH) {
    const to = from + 190 + 330 * random();
    const skewTo = (random() - 0.5) * 120;
    const edge = Math.min(BOTTOM_EDGE - 30, outerEdge(side, from, to));
    const cuts = [95 + 70 * random(), ...splits(edge, random), edge];
    for (let at = 0; at + 1 < cuts.length; at++) {
      const lot = { from: from + LANE, to: to - LANE, near: cuts[at] + LANE, far: cuts[at + 1] - LANE, skewFrom, skewTo };
      if (random() < (at === 0 ? 0.34 : 0.07)) continue;
      const ring = lotRing(side, lot);
      if (isParcel(ring)) shapes.push({ ring, zone: 'bottom', pivot: false });
    }
    from = to;
    skewFrom = skewTo;
  }
  return shapes;
}

function splits(edge: number, random: Random): number[] {
  const share = () => 0.36 + 0.24 * random();
  if (edge < 420 || random() < 0.2) return [];
  return random() < 0.45 ? [edge * share()] : [edge * (0.28 + 0.1 * random()), edge * (0.6 + 0.1 * random())];
}

/** Where the canal still runs close to the river, lots end at the canal. */
function outerEdge(side: Side, from: number, to: number): number {
  const line = side === 1 ? NORTH_CANAL : SOUTH_CANAL;
  return Math.min(line.distance(from), line.distance((from + to) / 2), line.distance(to)) - CANAL_CLEARANCE - 30;
}

interface Lot {
  readonly from: number;
  readonly to: number;
  readonly near: number;
  readonly far: number;
  readonly skewFrom: number;
  readonly skewTo: number;
}

function lotRing(side: Side, lot: Lot): PlanePoint[] {
  const point = (share: number, offset: number): PlanePoint => {
    const lean = (offset / BOTTOM_EDGE) * (lot.skewFrom + (lot.skewTo - lot.skewFrom) * share);
    const along = lot.from + (lot.to - lot.from) * share + lean;
    return planeFromValley(along, riverAcross(along) + side * offset);
  };
  const shares = [0, 0.25, 0.5, 0.75, 1];
  const ring = [...shares.map((share) => point(share, lot.near)), ...shares.toReversed().map((share) => point(share, lot.far))];
  return side === 1 ? ring : ring.reverse();
}

function benchParcels(seed: number, random: Random): DemoShape[] {
  const shapes: DemoShape[] = [];
  for (let column = 0; column < 42; column++) {
    for (let row = -9; row < 30; row++) {
      const corners = quarterCorners(column, row, seed);
      if (random() < 0.035 || !nearBench(corners)) continue;
      for (const { ring, pivot } of splitQuarter(corners, random)) {
        for (const piece of clipToBench(ring))
          if (isParcel(piece)) shapes.push({ ring: piece, zone: 'bench', pivot: pivot && piece.length === ring.length });
      }
    }
  }
  return shapes;
}

function nearBench(corners: readonly PlanePoint[]): boolean {
  return corners.some((point) => ZONES.some((zone) => within(zone, point)));
}

interface Piece {
  readonly ring: PlanePoint[];
  readonly pivot: boolean;
}

/** One quarter section as its owners hold it. */
function splitQuarter(corners: readonly PlanePoint[], random: Random): Piece[] {
  const kind = random();
  const whole = corners.every((point) => ZONES.some((zone) => within(zone, point, 40))) && !densify(corners).some(nearRiverDitch);
  if (kind < 0.24) return whole ? [pivotCircle(corners)] : blocks(corners, [0, 0.5, 1], [0, 1]);
  if (kind < 0.28) return blocks(corners, [0, 1], [0, 1]);
  if (kind < 0.36)
    return random() < 0.5 ? blocks(corners, [0, 0.4 + 0.2 * random(), 1], [0, 1]) : blocks(corners, [0, 1], [0, 0.4 + 0.2 * random(), 1]);
  if (kind < 0.55) return threeBlocks(corners, random);
  if (kind < 0.82) return blocks(corners, [0, 0.42 + 0.16 * random(), 1], [0, 0.42 + 0.16 * random(), 1]);
  return blocks(corners, [0, 0.3 + 0.06 * random(), 0.64 + 0.06 * random(), 1], [0, 0.45 + 0.1 * random(), 1]);
}

function threeBlocks(corners: readonly PlanePoint[], random: Random): Piece[] {
  const [u, v] = [0.42 + 0.16 * random(), 0.35 + 0.3 * random()];
  if (random() < 0.3) return blocks(corners, [0, 0.3 + 0.06 * random(), 0.64 + 0.06 * random(), 1], [0, 1]);
  return random() < 0.5
    ? [...blocks(corners, [0, u], [0, 1]), ...blocks(corners, [u, 1], [0, v, 1])]
    : [...blocks(corners, [0, 1], [0, v]), ...blocks(corners, [0, u, 1], [v, 1])];
}

function blocks(corners: readonly PlanePoint[], us: readonly number[], vs: readonly number[]): Piece[] {
  const lane = LANE / QUARTER_SIDE;
  const pieces: Piece[] = [];
  for (let i = 0; i + 1 < us.length; i++) {
    for (let j = 0; j + 1 < vs.length; j++) {
      const [u0, u1, v0, v1] = [us[i] + lane, us[i + 1] - lane, vs[j] + lane, vs[j + 1] - lane];
      const at = (u: number, v: number) => withinQuarter(corners, u, v);
      pieces.push({ ring: [at(u0, v0), at(u1, v0), at(u1, v1), at(u0, v1)], pivot: false });
    }
  }
  return pieces;
}

function pivotCircle(corners: readonly PlanePoint[]): Piece {
  const [east, north] = withinQuarter(corners, 0.5, 0.5);
  const radius =
    Math.min(
      ...[0, 0.25, 0.5, 0.75, 1].flatMap((t) => [
        distance(withinQuarter(corners, t, 0), [east, north]),
        distance(withinQuarter(corners, t, 1), [east, north]),
        distance(withinQuarter(corners, 0, t), [east, north]),
        distance(withinQuarter(corners, 1, t), [east, north]),
      ]),
    ) -
    LANE -
    4;
  const ring = Array.from({ length: 48 }, (_, i): PlanePoint => {
    const angle = (2 * Math.PI * i) / 48;
    return [east + radius * Math.cos(angle), north + radius * Math.sin(angle)];
  });
  return { ring, pivot: true };
}

/** Irrigable ground between two lines on one side of the river. */
interface Zone {
  readonly side: Side;
  readonly from: number;
  readonly to: number;
  readonly near: (along: number) => number;
  readonly far: (along: number) => number;
}

const bottom = () => BOTTOM_EDGE + 16;
const below = (line: CanalLine) => (along: number) => line.distance(along) - CANAL_CLEARANCE;
/** The first canal up the slope from the river on the north bench. */
const northLower = (along: number) => (along < LOWER_BRANCH.from ? NORTH_CANAL : LOWER_BRANCH).distance(along) - CANAL_CLEARANCE;
const ZONES: readonly Zone[] = [
  { side: 1, from: 1700, to: BEYOND, near: bottom, far: northLower },
  { side: 1, from: 16000, to: BEYOND, near: (along) => LOWER_BRANCH.distance(along) + CANAL_CLEARANCE, far: below(NORTH_CANAL) },
  { side: -1, from: 2900, to: BEYOND, near: bottom, far: below(SOUTH_CANAL) },
];

function within(zone: Zone, point: PlanePoint, margin = 0): boolean {
  const { along, across } = valleyFromPlane(point);
  const offset = zone.side * (across - riverAcross(along));
  return along > zone.from && along < zone.to && offset > zone.near(along) + margin && offset < zone.far(along) - margin;
}

/** The parts of a ring that lie on irrigable ground, cut along the canals and the edge of the bottom land. */
function clipToBench(ring: PlanePoint[]): PlanePoint[][] {
  const dense = densify(ring);
  const touched = ZONES.filter((zone) => dense.some((point) => within(zone, point)));
  const inside = touched.find((zone) => dense.every((point) => within(zone, point)));
  const clear = !dense.some(nearRiverDitch);
  if (inside && clear) return [ring];
  const subject = [ring.map(pair)] as Geom;
  const pieces = touched.flatMap((zone) => intersection(subject, zoneWindow(zone, dense)));
  const cut = clear || pieces.length === 0 ? pieces : difference(pieces as Geom, ditchCorridor());
  return cut.map(([outer]) => outer.slice(0, -1).map(([east, north]): PlanePoint => [east, north]));
}

function pair([east, north]: PlanePoint): [number, number] {
  return [east, north];
}

/** The part of a zone around some points, as a polygon. */
function zoneWindow(zone: Zone, points: readonly PlanePoint[]): Geom {
  const alongs = points.map((point) => valleyFromPlane(point).along);
  const from = Math.max(zone.from, Math.min(...alongs) - 60);
  const to = Math.min(zone.to, Math.max(...alongs) + 60);
  const count = Math.max(2, Math.ceil((to - from) / 70));
  const line = (offset: (along: number) => number) =>
    Array.from({ length: count + 1 }, (_, i) => {
      const along = from + ((to - from) * i) / count;
      return pair(planeFromValley(along, riverAcross(along) + zone.side * offset(along)));
    });
  return [[...line(zone.near), ...line(zone.far).reverse()]];
}

function nearRiverDitch(point: PlanePoint): boolean {
  const { along, across } = valleyFromPlane(point);
  if (along < RIVER_DITCH.from - 200 || along > 6600) return false;
  return Math.abs(across - riverAcross(along) - RIVER_DITCH.distance(along)) < 60;
}

/** Clear ground along the upper part of the ditch, where it comes down from the main canal. */
function ditchCorridor(): Geom {
  const alongs = Array.from({ length: 30 }, (_, i) => RIVER_DITCH.from - 60 + i * 84);
  return [
    [
      ...alongs.map((along) => pair(linePoint(RIVER_DITCH, along, 14))),
      ...alongs.toReversed().map((along) => pair(linePoint(RIVER_DITCH, along, -14))),
    ],
  ];
}

function densify(ring: readonly PlanePoint[]): PlanePoint[] {
  return ring.flatMap((a, i) => {
    const b = ring[(i + 1) % ring.length];
    const count = Math.max(1, Math.ceil(distance(a, b) / 60));
    return Array.from({ length: count }, (_, k): PlanePoint => [a[0] + ((b[0] - a[0]) * k) / count, a[1] + ((b[1] - a[1]) * k) / count]);
  });
}

/** Large enough to be a parcel and not a sliver (4πA/P², isoperimetric quotient). */
function isParcel(ring: readonly PlanePoint[]): boolean {
  const area = planeArea(ring);
  const around = ring.reduce((sum, point, i) => sum + distance(point, ring[(i + 1) % ring.length]), 0);
  return area >= SMALLEST && (4 * Math.PI * area) / (around * around) > ROUNDEST_SLIVER;
}

/** Area of a ring on the plane, positive when counter-clockwise [m²]. */
function planeArea(ring: readonly PlanePoint[]): number {
  return ring.reduce((sum, [x, y], i) => sum + x * ring[(i + 1) % ring.length][1] - ring[(i + 1) % ring.length][0] * y, 0) / 2;
}

/** Centre of area of a ring. */
export function centre(ring: readonly PlanePoint[]): PlanePoint {
  const [x0, y0] = ring[0];
  let [sumX, sumY, twice] = [0, 0, 0];
  for (let i = 1; i + 1 < ring.length; i++) {
    const [ax, ay, bx, by] = [ring[i][0] - x0, ring[i][1] - y0, ring[i + 1][0] - x0, ring[i + 1][1] - y0];
    const cross = ax * by - bx * ay;
    sumX += (cross * (ax + bx)) / 3;
    sumY += (cross * (ay + by)) / 3;
    twice += cross;
  }
  return [x0 + sumX / twice, y0 + sumY / twice];
}

export function distance(a: PlanePoint, b: PlanePoint): number {
  return Math.hypot(a[0] - b[0], a[1] - b[1]);
}

/** Not in the town, and not past the ends of the canals. */
function served(point: PlanePoint): boolean {
  const { along, across } = valleyFromPlane(point);
  const town = planeFromValley(TOWN.along, riverAcross(TOWN.along) + TOWN.across);
  return distance(point, town) > TOWN.radius && along < VALLEY_LENGTH - 900 + 420 * Math.sin(across / 780);
}
