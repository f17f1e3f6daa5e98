/**
 * Well-known binary → GeoJSON geometry, in two dimensions. ISO WKB (Z, M, ZM), and the flags of its 2.5-D and extended forms.
 *
 * Source: OGC 06-103r4, Simple feature access part 1, section 8 (ISO/IEC 13249-3).
 */
import type { Geometry, Position } from 'geojson';

const Z_FLAG = 0x80000000;
const M_FLAG = 0x40000000;
const SRID_FLAG = 0x20000000;
const COLLECTION = 7;
/** Deepest collection in a collection. */
const NESTING_LIMIT = 8;

interface Head {
  readonly type: number;
  readonly little: boolean;
  readonly dimensions: number;
}

class WkbReader {
  private at = 0;
  private readonly view: DataView;

  constructor(bytes: Uint8Array) {
    this.view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  }

  geometry(nesting = 0): Geometry {
    const head = this.head();
    switch (head.type) {
      case 1:
        return { type: 'Point', coordinates: this.position(head) };
      case 2:
        return { type: 'LineString', coordinates: this.line(head) };
      case 3:
        return { type: 'Polygon', coordinates: this.rings(head) };
      case 4:
        return { type: 'MultiPoint', coordinates: this.list(head, 5, () => this.position(this.member(1))) };
      case 5:
        return { type: 'MultiLineString', coordinates: this.list(head, 9, () => this.line(this.member(2))) };
      case 6:
        return { type: 'MultiPolygon', coordinates: this.list(head, 9, () => this.rings(this.member(3))) };
      case COLLECTION:
        if (nesting >= NESTING_LIMIT) throw new Error('collections are nested too deeply');
        return { type: 'GeometryCollection', geometries: this.list(head, 5, () => this.geometry(nesting + 1)) };
      default:
        throw new Error(`geometry type ${head.type} is not read (curves and surfaces must be straight-lined)`);
    }
  }

  private head(): Head {
    const order = this.view.getUint8(this.at);
    if (order > 1) throw new Error('the byte order is neither big- nor little-endian');
    const little = order === 1;
    const raw = this.view.getUint32(this.at + 1, little);
    this.at += raw & SRID_FLAG ? 9 : 5;
    const code = raw & 0x0fffffff;
    const kind = Math.floor(code / 1000);
    const extra = (raw & Z_FLAG ? 1 : 0) + (raw & M_FLAG ? 1 : 0) + (kind === 3 ? 2 : kind > 0 ? 1 : 0);
    return { type: code % 1000, little, dimensions: 2 + Math.min(2, extra) };
  }

  private member(type: number): Head {
    const head = this.head();
    if (head.type !== type) throw new Error(`a member is of type ${head.type} where ${type} belongs`);
    return head;
  }

  private list<Item>(head: Head, least: number, item: () => Item): Item[] {
    const count = this.count(head, least);
    const items: Item[] = [];
    for (let k = 0; k < count; k++) items.push(item());
    return items;
  }

  /** A count that the bytes left can hold; `least` bytes an item. */
  private count({ little }: Head, least: number): number {
    const count = this.view.getUint32(this.at, little);
    this.at += 4;
    if (count * least > this.view.byteLength - this.at) throw new Error('it is cut short');
    return count;
  }

  private rings(head: Head): Position[][] {
    return this.list(head, 4, () => this.line(head));
  }

  private line(head: Head): Position[] {
    return this.list(head, head.dimensions * 8, () => this.position(head));
  }

  private position({ little, dimensions }: Head): Position {
    const position = [this.view.getFloat64(this.at, little), this.view.getFloat64(this.at + 8, little)];
    this.at += dimensions * 8;
    return position;
  }
}

/**
 * The geometry of a WKB value; heights and measures are left out. An empty point has NaN coordinates, an empty line or polygon no positions.
 * @throws {Error} when it is cut short or of a kind that is not read
 */
export function geometryOfWkb(bytes: Uint8Array): Geometry {
  try {
    return new WkbReader(bytes).geometry();
  } catch (error) {
    if (error instanceof RangeError) throw new Error('it is cut short', { cause: error });
    throw error;
  }
}

/** True for a geometry without a position. */
export function isEmptyGeometry(geometry: Geometry): boolean {
  if (geometry.type === 'GeometryCollection') return geometry.geometries.length === 0;
  if (geometry.type === 'Point') return Number.isNaN(geometry.coordinates[0]);
  return geometry.coordinates.length === 0;
}

/** Dimensions of a WKB value as GeoParquet writes them behind the type (" Z", " M", " ZM"), and whether it carries a system number. */
export function wkbForm(bytes: Uint8Array): { suffix: string; extended: boolean } {
  const raw = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength).getUint32(1, bytes[0] === 1);
  const kind = Math.floor((raw & 0x0fffffff) / 1000);
  const z = (raw & Z_FLAG) !== 0 || kind === 1 || kind === 3;
  const m = (raw & M_FLAG) !== 0 || kind === 2 || kind === 3;
  return { suffix: z || m ? ` ${z ? 'Z' : ''}${m ? 'M' : ''}` : '', extended: (raw & SRID_FLAG) !== 0 };
}
