/**
 * What a GeoParquet file states of its geometries, held against what they are: a file that is wrong about itself is read, and told.
 */
import type { Geometry, Position } from 'geojson';
import { counted } from '../base/counted.ts';
import type { FindingList } from './finding-list.ts';
import type { GeometryColumn } from './geoparquet-metadata.ts';
import { wkbForm } from './wkb.ts';

/** Share of the box's size by which a position may lie outside: boxes are often rounded to single precision. */
const BOX_TOLERANCE = 1e-6;

export class StatedGeometry {
  private readonly unstated = new Map<string, number>();
  private outside = 0;
  private extended = 0;

  constructor(private readonly column: GeometryColumn) {}

  /** @param bytes the WKB, where that is the encoding */
  take(geometry: Geometry, bytes: Uint8Array | null): void {
    const { types, box } = this.column;
    const form = bytes ? wkbForm(bytes) : { suffix: '', extended: false };
    if (form.extended) this.extended++;
    const type = geometry.type + form.suffix;
    if (types.length > 0 && !types.includes(type)) this.unstated.set(type, (this.unstated.get(type) ?? 0) + 1);
    if (box && geometry.type !== 'GeometryCollection' && reachesOut(geometry.coordinates, box)) this.outside++;
  }

  report(file: string, findings: FindingList): void {
    const { types } = this.column;
    const warn = (code: string, message: string) => findings.warn({ code, message, file, advice: 'Look at the map.' });
    if (this.unstated.size > 0)
      warn(
        'geo-types-differ',
        `The file states geometries of type ${types.join(', ')} but holds ${[...this.unstated].map(([type, count]) => `${type} (${count})`).join(', ')}.`,
      );
    if (this.outside > 0)
      warn('geo-box-differs', `${counted(this.outside, 'geometry lies', 'geometries lie')} outside the box that the file states.`);
    if (this.extended > 0)
      warn(
        'geo-wkb-extended',
        `${counted(this.extended, 'geometry carries', 'geometries carry')} a system number of its own, which GeoParquet does not allow; it is ignored.`,
      );
  }
}

function reachesOut(coordinates: unknown, box: readonly [number, number, number, number]): boolean {
  const list = coordinates as unknown[];
  if (typeof list[0] !== 'number') return list.some((part) => reachesOut(part, box));
  const [x, y] = list as Position;
  const slack = BOX_TOLERANCE * Math.max(1, ...box.map(Math.abs));
  return x < box[0] - slack || y < box[1] - slack || x > box[2] + slack || y > box[3] + slack;
}
