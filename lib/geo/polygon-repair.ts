/**
 * Polygons as they come → polygons that bound an area: closed, oriented, without crossings; or the reason why not.
 */
import type { MultiPolygon, Polygon, Position } from 'geojson';
import { union } from 'polyclip-ts';
import { geodesicArea, geodesicRingArea } from './geodesic.ts';
import { cleanRing, crossingCount } from './ring.ts';

/** A repair that changes the area by more than this share is a guess, and refused. */
export const AREA_CHANGE_LIMIT = 0.05;
/** Smallest area that is land [m²]. */
export const AREA_MINIMUM = 1;
/** Vertices beyond which a crossing polygon is refused rather than repaired: overlay of so many takes too long. */
const REPAIR_VERTEX_LIMIT = 20_000;

/** Crossings from which an outline is refused outright: no drawing slip makes so many. */
const CROSSING_LIMIT = 100;

export type RepairFault = 'too-few-vertices' | 'zero-area' | 'self-intersection' | 'antimeridian';
export type RepairNote = 'closed' | 'oriented' | 'duplicates-removed' | 'height-dropped' | 'hole-dropped';

export interface RepairedPolygon {
  /** null when refused */
  readonly geometry: Polygon | MultiPolygon | null;
  readonly fault: RepairFault | null;
  readonly notes: readonly RepairNote[];
  /** set when crossings were repaired */
  readonly crossingRepaired: boolean;
  /** (area after − before) ÷ before, 0 when nothing was repaired */
  readonly areaChange: number;
  /** m² */
  readonly area: number;
}

/**
 * Repairs a polygon or multipolygon. Closing, orientation, repeated vertices and heights are always put right. Crossing rings are replaced
 * by their union (even–odd within a ring) when that changes the area by at most `AREA_CHANGE_LIMIT`.
 *
 * @param shape positions in degrees, WGS 84
 */
export function repairPolygon(shape: Polygon | MultiPolygon): RepairedPolygon {
  const notes = new Set<RepairNote>();
  const raw = shape.type === 'Polygon' ? [shape.coordinates] : shape.coordinates;
  const polygons = raw.map((rings) => cleanPolygon(rings, notes)).filter((rings) => rings !== null);
  if (polygons.length === 0) return refused('too-few-vertices', notes);
  if (spansAntimeridian(polygons)) return refused('antimeridian', notes);
  const area = geodesicArea({ type: 'MultiPolygon', coordinates: polygons });
  const crossings = crossingCount(polygons.flat(), CROSSING_LIMIT);
  if (crossings >= CROSSING_LIMIT) return refused('self-intersection', notes, Number.NaN);
  if (crossings > 0) return repairCrossing(polygons, area, notes);
  if (!(area >= AREA_MINIMUM)) return refused('zero-area', notes);
  return { geometry: shapeOf(polygons), fault: null, notes: [...notes], crossingRepaired: false, areaChange: 0, area };
}

function refused(fault: RepairFault, notes: ReadonlySet<RepairNote>, areaChange = 0): RepairedPolygon {
  return { geometry: null, fault, notes: [...notes], crossingRepaired: false, areaChange, area: 0 };
}

function cleanPolygon(rings: readonly (readonly Position[])[], notes: Set<RepairNote>): Position[][] | null {
  const cleaned: Position[][] = [];
  for (const [index, ring] of rings.entries()) {
    if (ring.some((position) => position.length > 2)) notes.add('height-dropped');
    const clean = cleanRing(ring, index > 0);
    if (!clean && index === 0) return null;
    if (!clean) notes.add('hole-dropped');
    if (!clean) continue;
    if (!clean.closed) notes.add('closed');
    if (clean.reversed) notes.add('oriented');
    if (clean.duplicates > 0) notes.add('duplicates-removed');
    cleaned.push(clean.ring);
  }
  return cleaned.length > 0 ? cleaned : null;
}

function spansAntimeridian(polygons: readonly Position[][][]): boolean {
  let west = Number.POSITIVE_INFINITY;
  let east = Number.NEGATIVE_INFINITY;
  for (const rings of polygons) {
    for (const ring of rings) {
      for (const [x] of ring) {
        if (x < west) west = x;
        if (x > east) east = x;
      }
    }
  }
  return east - west > 180;
}

function repairCrossing(polygons: Position[][][], before: number, notes: Set<RepairNote>): RepairedPolygon {
  const vertices = polygons.flat(2).length;
  if (vertices > REPAIR_VERTEX_LIMIT) return refused('self-intersection', notes, Number.NaN);
  const merged = unionOf(polygons);
  if (!merged || merged.length === 0) return refused('zero-area', notes);
  const oriented = merged.map((rings) => rings.map((ring, index) => cleanRing(ring, index > 0)?.ring).filter((ring) => ring !== undefined));
  const usable = oriented.filter((rings) => rings.length > 0 && Math.abs(geodesicRingArea(rings[0])) >= AREA_MINIMUM);
  const area = geodesicArea({ type: 'MultiPolygon', coordinates: usable });
  if (!(area >= AREA_MINIMUM)) return refused('zero-area', notes);
  const change = before > 0 ? (area - before) / before : Number.POSITIVE_INFINITY;
  if (Math.abs(change) > AREA_CHANGE_LIMIT) return refused('self-intersection', notes, change);
  return { geometry: shapeOf(usable), fault: null, notes: [...notes], crossingRepaired: true, areaChange: change, area };
}

/** Union through polyclip-ts; null when its arithmetic gives up on the rings. */
function unionOf(polygons: Position[][][]): Position[][][] | null {
  try {
    return union(polygons as Parameters<typeof union>[0]) as Position[][][];
  } catch {
    return null;
  }
}

function shapeOf(polygons: Position[][][]): Polygon | MultiPolygon {
  return polygons.length === 1 ? { type: 'Polygon', coordinates: polygons[0] } : { type: 'MultiPolygon', coordinates: polygons };
}
