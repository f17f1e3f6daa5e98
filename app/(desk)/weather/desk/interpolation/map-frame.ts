/** A small map in plain degrees, stretched so that east and north measure alike in its middle. */
export interface MapFrame {
  readonly height: number;
  readonly pixelsPerKm: number;
  readonly point: (longitude: number, latitude: number) => [number, number];
  /** rings of the district as path data */
  readonly outline: readonly string[];
}

interface Placed {
  readonly longitude: number;
  readonly latitude: number;
}

const KM_PER_DEGREE = 111.195;
/** Room around the places: labels stand to their right [px]. */
const [MARGIN, LABEL_ROOM] = [34, 110];
const [LEAST_HEIGHT, MOST_HEIGHT] = [240, 620];

/** Frame that holds the places and the boundary (a GeoJSON polygon or multipolygon, or none). */
export function mapFrame(places: readonly Placed[], boundary: unknown, width: number): MapFrame {
  const rings = ringsOf(boundary);
  const all = [...places.map(({ longitude, latitude }) => [longitude, latitude]), ...rings.flat()];
  const [west, east] = rangeOf(all.map(([longitude]) => longitude));
  const [south, north] = rangeOf(all.map(([, latitude]) => latitude));
  const squeeze = Math.cos((((south + north) / 2) * Math.PI) / 180);
  const across = Math.max((east - west) * squeeze, 0.01);
  const up = Math.max(north - south, 0.01);
  const perDegree = Math.min((width - 2 * MARGIN - LABEL_ROOM) / across, (MOST_HEIGHT - 2 * MARGIN) / up);
  const height = Math.max(LEAST_HEIGHT, Math.round(up * perDegree + 2 * MARGIN + 20));
  const round = (value: number) => Math.round(value * 10) / 10;
  const point = (longitude: number, latitude: number): [number, number] => [
    round(MARGIN + (longitude - west) * squeeze * perDegree),
    round(MARGIN + (north - latitude) * perDegree),
  ];
  const outline = rings.map((ring) => `M${ring.map(([longitude, latitude]) => point(longitude, latitude).join(' ')).join('L')}Z`);
  return { height, pixelsPerKm: perDegree / KM_PER_DEGREE, point, outline };
}

function ringsOf(boundary: unknown): number[][][] {
  const { type, coordinates } = (boundary ?? {}) as { type?: string; coordinates?: unknown };
  if (type === 'Polygon') return coordinates as number[][][];
  return type === 'MultiPolygon' ? (coordinates as number[][][][]).flat() : [];
}

function rangeOf(values: readonly number[]): [number, number] {
  return values.reduce<[number, number]>(
    ([low, high], value) => [Math.min(low, value), Math.max(high, value)],
    [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY],
  );
}
