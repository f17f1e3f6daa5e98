/**
 * The demo district, invented from end to end: land, canals, parcels, crops. The same seed always gives the same district.
 */
import { mulberry32 } from '../../base/random.ts';
import type { LossRule } from '../../canal/loss-rule.ts';
import type { StagedPlanting } from '../../files/reading.ts';
import { geodesicArea, geodesicLength } from '../../geo/geodesic.ts';
import { linePoint, NORTH_CANAL, SOUTH_CANAL } from './canal-lines.ts';
import { type DemoReachShape, demoReachShapes } from './canal-tree.ts';
import { demoCapacities } from './capacity.ts';
import { firstCrop, methodFor, nextCrop, plantingsOf, soilAt } from './crop-plan.ts';
import { centre, type DemoShape, demoParcelShapes } from './parcel-shapes.ts';
import { demoService, type Service } from './service.ts';
import { elevationAt, HEADWORKS, lonLat, type PlanePoint, riverAcross, valleyFromPlane } from './terrain.ts';

const DEMO_NAME = 'Arrowmere Valley Irrigation District';
/** Water years of the demo, by the calendar year in which they end. */
const DEMO_YEARS = [2024, 2025] as const;

interface DemoReach {
  readonly code: string;
  readonly name: string;
  readonly parentCode: string | null;
  readonly kind: string;
  /** m³ s⁻¹ */
  readonly capacity: number;
  readonly lossRule: LossRule;
  /** m, on the ellipsoid */
  readonly length: number;
  readonly geometry: { readonly type: 'LineString'; readonly coordinates: [number, number][] };
}

interface DemoParcel {
  readonly code: string;
  readonly ordinal: number;
  readonly name: string | null;
  readonly turnoutCode: string;
  readonly reachCode: string;
  readonly soilCode: string;
  readonly methodCode: string;
  /** m², on the ellipsoid */
  readonly area: number;
  /** m */
  readonly elevation: number;
  readonly longitude: number;
  readonly latitude: number;
  readonly geometry: { readonly type: 'Polygon'; readonly coordinates: [number, number][][] };
}

export interface DemoDistrict {
  readonly district: {
    readonly code: string;
    readonly name: string;
    readonly timeZone: string;
    readonly units: 'metric' | 'us';
    readonly weekStart: number;
    readonly waterYearStartMonth: number;
    readonly invented: true;
    readonly defaultElevation: number;
    readonly radiationCoefficient: number;
    readonly boundary: { readonly type: 'Polygon'; readonly coordinates: [number, number][][] };
  };
  readonly seasons: readonly { readonly code: string; readonly name: string; readonly startDate: string; readonly endDate: string }[];
  readonly reaches: readonly DemoReach[];
  readonly turnouts: readonly { readonly code: string; readonly reachCode: string; readonly capacity: number }[];
  readonly parcels: readonly DemoParcel[];
  readonly plantings: readonly StagedPlanting[];
}

/**
 * The whole district but its weather. Soils, methods, crops and calendars are named by their library codes.
 *
 * @param seed any 32-bit integer
 */
export function demoDistrict(seed: number): DemoDistrict {
  const reachShapes = demoReachShapes(seed);
  const shapes = inReadingOrder(demoParcelShapes(seed, mulberry32(seed ^ 0x1a11d)));
  const centres = shapes.map(({ ring }) => centre(ring));
  const services = demoService(centres, reachShapes, mulberry32(seed ^ 0x70e7));
  const land = growOnParcels(shapes, centres, services, seed);
  return {
    district: {
      code: 'arrowmere',
      name: DEMO_NAME,
      timeZone: 'America/Los_Angeles',
      units: 'metric',
      weekStart: 1,
      waterYearStartMonth: 10,
      invented: true,
      defaultElevation: HEADWORKS.elevation - 30,
      radiationCoefficient: 0.16,
      boundary: { type: 'Polygon', coordinates: [closed(boundary())] },
    },
    seasons: DEMO_YEARS.map((year) => ({
      code: String(year),
      name: `Water year ${year}`,
      startDate: `${year - 1}-10-01`,
      endDate: `${year}-09-30`,
    })),
    reaches: sizedReaches(reachShapes, land.parcels, seed),
    turnouts: turnoutsOf(land.parcels),
    ...land,
  };
}

/** From west to east in bands down the map, so that neighbours have neighbouring numbers. */
function inReadingOrder(shapes: readonly DemoShape[]): DemoShape[] {
  const key = ({ ring }: DemoShape) => valleyFromPlane(centre(ring)).along;
  return shapes
    .map((shape) => ({ shape, along: key(shape) }))
    .sort((a, b) => a.along - b.along)
    .map(({ shape }) => shape);
}

function growOnParcels(shapes: readonly DemoShape[], centres: readonly PlanePoint[], services: readonly Service[], seed: number) {
  const random = mulberry32(seed ^ 0xc20b);
  const parcels: DemoParcel[] = [];
  const plantings: StagedPlanting[] = [];
  shapes.forEach((shape, ordinal) => {
    const code = `AV${String(ordinal + 1).padStart(4, '0')}`;
    const { along, across } = valleyFromPlane(centres[ordinal]);
    const geometry = { type: 'Polygon' as const, coordinates: [closed(shape.ring)] };
    const area = geodesicArea(geometry);
    const soilCode = soilAt({ along, distance: Math.abs(across - riverAcross(along)) }, random);
    const ground = { zone: shape.zone, pivot: shape.pivot, hectares: area / 1e4, soilCode };
    let crop = firstCrop(ground, random);
    const methodCode = methodFor(crop, ground, random);
    for (const year of DEMO_YEARS) {
      if (year !== DEMO_YEARS[0]) crop = nextCrop(crop, random);
      plantings.push(...plantingsOf(code, year, crop, random));
    }
    const [longitude, latitude] = lonLat(centres[ordinal]);
    const elevation = Math.round(elevationAt(centres[ordinal]) * 10) / 10;
    parcels.push({ code, ordinal, name: null, ...services[ordinal], soilCode, methodCode, area, elevation, longitude, latitude, geometry });
  });
  return { parcels, plantings };
}

function closed(ring: readonly PlanePoint[]): [number, number][] {
  return [...ring, ring[0]].map(lonLat);
}

function sizedReaches(shapes: readonly DemoReachShape[], parcels: readonly DemoParcel[], seed: number): DemoReach[] {
  const random = mulberry32(seed ^ 0xca9a);
  const plain = shapes.map((shape) => {
    const geometry = { type: 'LineString' as const, coordinates: shape.points.map(lonLat) };
    return {
      code: shape.code,
      name: shape.name,
      parentCode: shape.parentCode,
      kind: shape.kind,
      geometry,
      length: geodesicLength(geometry),
      lossRule: lossRuleOf(shape),
    };
  });
  const areas = plain.map((reach) => parcels.filter((parcel) => parcel.reachCode === reach.code).map((parcel) => parcel.area));
  const capacities = demoCapacities(plain, areas, random);
  return plain.map((reach, i) => ({ ...reach, capacity: capacities[i] }));
}

/** Lined intake, earth canals that seep through their bed, laterals known only by their efficiency, one pipe. Values invented. */
function lossRuleOf(shape: DemoReachShape): LossRule {
  if (shape.code === 'S1') return { kind: 'none' };
  if (shape.code === 'M1' || shape.code === 'M2') return { kind: 'efficiency', efficiency: 0.98 };
  if (shape.kind === 'main') return { kind: 'seepage', rate: 190, wettedPerimeter: 16 };
  if (shape.code.startsWith('S') || shape.code.startsWith('H')) return { kind: 'seepage', rate: 220, wettedPerimeter: 9 };
  if (shape.kind === 'branch') return { kind: 'fraction-per-km', fraction: 0.015 };
  if (shape.kind === 'sub-lateral') return { kind: 'efficiency', efficiency: 0.9 };
  return shape.code.endsWith('B') ? { kind: 'fraction-per-km', fraction: 0.035 } : { kind: 'efficiency', efficiency: 0.92 };
}

function turnoutsOf(parcels: readonly DemoParcel[]): DemoDistrict['turnouts'] {
  const largest = new Map<string, { reachCode: string; area: number }>();
  for (const { turnoutCode, reachCode, area } of parcels) {
    largest.set(turnoutCode, { reachCode, area: Math.max(area, largest.get(turnoutCode)?.area ?? 0) });
  }
  return [...largest].map(([code, { reachCode, area }]) => ({ code, reachCode, capacity: turnoutCapacity(area) }));
}

/** A gate lets through 100 mm a day on the largest parcel behind it, in steps of 10 L/s [m³ s⁻¹]. Invented rule. */
function turnoutCapacity(area: number): number {
  return Math.ceil((area * 0.1) / 86400 / 0.01) / 100;
}

/** Around everything the canals command: a little above the outer canals, across both ends. */
function boundary(): PlanePoint[] {
  const alongs = Array.from({ length: 61 }, (_, i) => -200 + (NORTH_CANAL.to + 500) * (i / 60));
  return [
    ...alongs.map((along) => linePoint(SOUTH_CANAL, along, 140)),
    ...alongs.toReversed().map((along) => linePoint(NORTH_CANAL, along, 140)),
  ];
}
