/**
 * Where the cells of a GeoTIFF lie: centres of cells, whatever the file's own registration.
 *
 * Source: OGC GeoTIFF standard 19-008r4, section 7.4 and annex B: with PixelIsArea raster place (0, 0) is the outer corner of the first cell,
 * with PixelIsPoint it is its centre.
 */
import type { ArrayVariable, AttributeValue } from './array-file.ts';

/** x = originX + columnX · column + rowX · row, likewise y; (0, 0) is the centre of the first cell. */
interface Transform {
  readonly originX: number;
  readonly originY: number;
  readonly columnX: number;
  readonly rowX: number;
  readonly columnY: number;
  readonly rowY: number;
}

export interface CellPlaces {
  /** null when the file does not say */
  readonly transform: Transform | null;
  /** "EPSG:…", null when the file names none */
  readonly crs: string | null;
  /** name of the coordinate system as the file writes it */
  readonly citation: string | null;
  readonly isGeographic: boolean;
}

interface Tags {
  getValue(tag: never): unknown;
}

type GeoKeys = Readonly<Record<string, unknown>> | null;

/** Code of GeoKeys for "defined in place, not by a code". */
const USER_DEFINED = 32767;
const PIXEL_IS_POINT = 2;

/** Reads place and coordinate system from the tags of an image. */
export function cellPlaces(tags: Tags, keys: GeoKeys): CellPlaces {
  const projected = codeOf(keys?.ProjectedCSTypeGeoKey);
  const geographic = codeOf(keys?.GeographicTypeGeoKey);
  const code = projected ?? geographic;
  const citation = keys?.PCSCitationGeoKey ?? keys?.GTCitationGeoKey ?? keys?.GeogCitationGeoKey;
  const hasProjection = projected !== null || keys?.GTModelTypeGeoKey === 1;
  return {
    transform: transformOf(tags, keys?.GTRasterTypeGeoKey === PIXEL_IS_POINT ? 0 : 0.5),
    crs: code === null || (hasProjection && projected === null) ? null : `EPSG:${code}`,
    citation: typeof citation === 'string' ? citation.replace(/\0/g, '').replace(/\|$/, '').trim() : null,
    isGeographic: !hasProjection && (geographic !== null || keys?.GTModelTypeGeoKey === 2),
  };
}

function codeOf(key: unknown): number | null {
  return typeof key === 'number' && key > 0 && key !== USER_DEFINED ? key : null;
}

/** @param half half a cell from raster place (0, 0) to the centre of the first cell: 0.5 for areas, 0 for points */
function transformOf(tags: Tags, half: number): Transform | null {
  const matrix = numbersOf(tags.getValue('ModelTransformation' as never));
  if (matrix.length >= 8) {
    const [columnX, rowX, , x, columnY, rowY, , y] = matrix;
    return { columnX, rowX, columnY, rowY, originX: x + half * (columnX + rowX), originY: y + half * (columnY + rowY) };
  }
  const scale = numbersOf(tags.getValue('ModelPixelScale' as never));
  const tie = numbersOf(tags.getValue('ModelTiepoint' as never));
  if (scale.length < 2 || tie.length < 6) return null;
  const [column, row, , x, y] = tie;
  return {
    columnX: scale[0],
    rowX: 0,
    columnY: 0,
    rowY: -scale[1],
    originX: x + (half - column) * scale[0],
    originY: y - (half - row) * scale[1],
  };
}

function numbersOf(value: unknown): number[] {
  return Array.isArray(value) || ArrayBuffer.isView(value) ? Array.from(value as ArrayLike<number>, Number) : [];
}

/** The variables "y" and "x" of an image; of two dimensions where rows and columns do not run along the axes, none without a place. */
export function placeVariables(places: CellPlaces, shape: readonly [number, number]): ArrayVariable[] {
  if (places.transform === null) return [];
  const { rowX, columnY } = places.transform;
  const isTurned = rowX !== 0 || columnY !== 0;
  return (['y', 'x'] as const).map((name, k) => ({
    name,
    dimensions: isTurned ? ['y', 'x'] : [name],
    shape: isTurned ? [...shape] : [shape[k]],
    type: 'float64',
    chunk: null,
    attributes: { ...axisAttributes(name, places), ...(places.crs === null ? {} : { crs: places.crs }) },
  }));
}

function axisAttributes(name: 'x' | 'y', { isGeographic }: CellPlaces): Record<string, AttributeValue> {
  const axis = name.toUpperCase();
  if (!isGeographic) return { axis, standard_name: `projection_${name}_coordinate` };
  return name === 'x'
    ? { axis, standard_name: 'longitude', units: 'degrees_east' }
    : { axis, standard_name: 'latitude', units: 'degrees_north' };
}

/** Places of the centres of cells along an axis, or of a window of cells of a turned image. */
export function placesOf({ transform }: CellPlaces, name: 'x' | 'y', start: readonly number[], count: readonly number[]): Float64Array {
  const places = new Float64Array(count.reduce((product, length) => product * length, 1));
  if (transform === null) return places.fill(Number.NaN);
  const { originX, originY, columnX, rowX, columnY, rowY } = transform;
  const [origin, column, row] = name === 'x' ? [originX, columnX, rowX] : [originY, columnY, rowY];
  if (start.length === 1) {
    const step = name === 'x' ? column : row;
    for (let k = 0; k < places.length; k++) places[k] = origin + step * (start[0] + k);
    return places;
  }
  for (let k = 0; k < places.length; k++) {
    places[k] = origin + column * (start[1] + (k % count[1])) + row * (start[0] + Math.floor(k / count[1]));
  }
  return places;
}
