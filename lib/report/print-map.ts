/**
 * Shapes of the district as they are drawn on paper: a plane true to scale over the district, north up.
 */
import { ShapeError } from '../base/errors.ts';
import type { UnitSystem } from '../base/units.ts';
import { type Classes, classOf } from './classes.ts';
import { CAPACITY_COLOURS, PRINT_PATTERNS } from './colour-scale.ts';
import type { Legend } from './legend.ts';
import { formatFlow } from './quantity-text.ts';
import type { ReachPeriodRow } from './reach-period-row.ts';

type LonLat = readonly number[];

export interface PrintMap {
  /** in drawing units */
  readonly width: number;
  readonly height: number;
  /** metres on the ground in a drawing unit */
  readonly metresPerUnit: number;
  /** rings of each parcel and its class, −1 without value */
  readonly parcels: readonly { readonly rings: readonly (readonly [number, number][])[]; readonly classIndex: number }[];
  readonly canals: readonly { readonly points: readonly (readonly [number, number])[]; readonly width: number; readonly colour: string }[];
  readonly legend: Legend;
  readonly canalLegend: readonly { readonly label: string; readonly colour: string; readonly width: number }[];
  /** hatching of each pattern index of the legend */
  readonly hatches: typeof PRINT_PATTERNS;
  /** text alternative */
  readonly alt: string;
  /** for the scale bar */
  readonly units: UnitSystem;
}

export interface PrintMapRequest {
  /** MultiPolygon coordinates per parcel, degrees */
  readonly shapes: readonly (readonly (readonly (readonly LonLat[])[])[])[];
  /** classed values in the same order */
  readonly values: ArrayLike<number>;
  readonly classes: Classes;
  readonly legend: Legend;
  /** lines per reach, degrees, with the reach's flows */
  readonly canals: readonly { readonly lines: readonly (readonly LonLat[])[]; readonly row: ReachPeriodRow }[];
  readonly alt: string;
  readonly units: UnitSystem;
}

/** Drawing units across the map. */
const WIDTH = 1000;
/** m in a degree of a sphere of the mean Earth radius 6 371 008.8 m (IUGG); enough for a scale bar. */
const METRES_PER_DEGREE = 111195.08;

/**
 * Projects by the local equirectangular projection: true to scale along the middle parallel and all meridians.
 *
 * @throws {ShapeError} when there are not as many values as shapes.
 * Source: Snyder (1987), Map Projections: A Working Manual, USGS PP 1395, section 12.
 */
export function printMap({ shapes, values, classes, legend, canals, alt, units }: PrintMapRequest): PrintMap {
  if (values.length !== shapes.length) throw new ShapeError(`${values.length} values for ${shapes.length} parcel shapes`);
  const project = projection([...shapes.flat(2), ...canals.flatMap(({ lines }) => lines)]);
  const most = Math.max(1e-9, ...canals.map(({ row }) => row.busiestFlow).filter(Number.isFinite));
  const parcels = shapes.map((polygons, i) => ({
    rings: polygons.flatMap((rings) => rings.map((ring) => ring.map(project.point))),
    classIndex: classOf(classes.breaks, values[i]),
  }));
  const drawn = canals.flatMap(({ lines, row }) =>
    lines.map((line) => ({
      points: line.map(project.point),
      width: canalWidth(row.busiestFlow / most),
      colour: CAPACITY_COLOURS.light[row.status ?? 'unknown'],
    })),
  );
  return {
    ...project.size,
    parcels,
    canals: drawn,
    legend,
    canalLegend: canalLegend(canals.map(({ row }) => row)),
    hatches: PRINT_PATTERNS,
    alt,
    units,
  };
}

function canalWidth(share: number): number {
  return 0.5 + 2.6 * Math.sqrt(Number.isFinite(share) ? share : 0);
}

function projection(lines: readonly (readonly LonLat[])[]) {
  let [west, south, east, north] = [180, 90, -180, -90];
  for (const line of lines) {
    for (const [longitude, latitude] of line) {
      west = Math.min(west, longitude);
      east = Math.max(east, longitude);
      south = Math.min(south, latitude);
      north = Math.max(north, latitude);
    }
  }
  const shrink = Math.cos((((south + north) / 2) * Math.PI) / 180);
  const perDegree = WIDTH / Math.max(1e-9, (east - west) * shrink);
  const point = ([longitude, latitude]: LonLat): [number, number] => [
    (longitude - west) * shrink * perDegree,
    (north - latitude) * perDegree,
  ];
  return { point, size: { width: WIDTH, height: (north - south) * perDegree, metresPerUnit: METRES_PER_DEGREE / perDegree } };
}

const STATUS_TEXT = { within: 'within capacity', tight: 'tight, 90–100 %', over: 'over capacity', unknown: 'capacity not known' } as const;

function canalLegend(rows: readonly ReachPeriodRow[]): PrintMap['canalLegend'] {
  const present = new Set(rows.map((row) => row.status ?? 'unknown'));
  return (['within', 'tight', 'over', 'unknown'] as const)
    .filter((status) => present.has(status))
    .map((status) => ({ label: STATUS_TEXT[status], colour: CAPACITY_COLOURS.light[status], width: 1.8 }));
}

/** Words for the widest line of the map. @example widestCanalText(1.2, 'metric') // 'widest line 1.20 m³/s' */
export function widestCanalText(busiestFlow: number, units: UnitSystem): string {
  return `widest line ${formatFlow(busiestFlow, units)}`;
}
