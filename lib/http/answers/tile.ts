/** Vector tiles of parcels, canals and service areas, encoded once for a version of the land. */
import { fromGeojsonVt } from '@maplibre/vt-pbf';
import type { Feature, Geometry } from 'geojson';
import GeoJSONVT from 'geojson-vt';
import type { Tx } from '../../../db/connect.ts';
import { findWholeDistrict } from '../../../db/queries/district-read.ts';
import { listServiceAreas } from '../../../db/queries/land-maps.ts';
import { listParcelShapesAt } from '../../../db/queries/parcel-history.ts';
import { type Box, findTile, listParcelShapes, listReachShapes, saveTile } from '../../../db/queries/tiles.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { NotFound } from '../../base/errors.ts';

interface TileWanted {
  readonly layer: 'parcels' | 'canals' | 'areas';
  readonly version: number;
  readonly z: number;
  readonly x: number;
  readonly y: number;
}

const EXTENT = 4096;
/** Units of the tile by which a shape reaches past its edge, so that outlines meet. */
const BUFFER = 64;
/** A parcel smaller than this many units of a tile, both ways, is drawn as its box: its shape could not be told from it. */
const DRAWN_AS_BOX = 24;

/**
 * The bytes of a tile; empty where there is nothing.
 *
 * Parcels of an earlier version are drawn as they stood then; canals and service areas have no history and are drawn as they stand.
 *
 * @throws {NotFound} for a version that is not there yet, or a tile outside the world.
 */
export function answerTile(caller: Caller, wanted: TileWanted): Promise<Uint8Array> {
  const side = 2 ** wanted.z;
  if (wanted.x >= side || wanted.y >= side) throw new NotFound(`zoom ${wanted.z} has tiles 0 to ${side - 1}`);
  const { districtId } = caller;
  const own = wanted.layer === 'parcels' ? caller.parcels : null;
  return database().inDistrict(districtId, async (tx) => {
    const kept = own ? null : await findTile(tx, { districtId, ...wanted });
    if (kept) return kept;
    const district = await findWholeDistrict(tx, districtId);
    if (!district || district.geometryVersion < wanted.version) {
      throw new NotFound(`version ${wanted.version} of the map is not in use; now it is ${district?.geometryVersion}`);
    }
    const now = district.geometryVersion === wanted.version;
    const features = await featuresOf(tx, districtId, wanted, { own, now });
    const bytes = encodeTile(wanted, features);
    if (!own) await saveTile(tx, { districtId, ...wanted }, bytes);
    return bytes;
  });
}

/** Encodes one tile. Simplified below the deepest zoom; empty when no feature touches it. */
function encodeTile(wanted: Pick<TileWanted, 'layer' | 'z' | 'x' | 'y'>, features: Feature[]): Uint8Array {
  if (features.length === 0) return new Uint8Array();
  const { layer, z, x, y } = wanted;
  const maxZoom = z < 14 ? z + 1 : z;
  const index = new GeoJSONVT(
    { type: 'FeatureCollection', features },
    { maxZoom, indexMaxZoom: z, indexMaxPoints: 0, buffer: BUFFER, extent: EXTENT, tolerance: 3, promoteId: 'o' },
  );
  const tile = index.getTile(z, x, y);
  if (!tile || tile.features.length === 0) return new Uint8Array();
  type Encodable = Parameters<typeof fromGeojsonVt>[0][string];
  return fromGeojsonVt({ [layer]: tile as unknown as Encodable }, { version: 2, extent: EXTENT });
}

interface View {
  /** codes of the parcels that the caller may see; null for all */
  readonly own: readonly string[] | null;
  /** true for the version of the map in use */
  readonly now: boolean;
}

function featuresOf(tx: Tx, districtId: string, wanted: TileWanted, view: View): Promise<Feature[]> {
  if (wanted.layer === 'parcels') return parcelFeatures(tx, districtId, wanted, view);
  return wanted.layer === 'canals' ? canalFeatures(tx, districtId) : areaFeatures(tx, districtId);
}

async function parcelFeatures(tx: Tx, districtId: string, wanted: TileWanted, { own, now }: View): Promise<Feature[]> {
  const box = tileBox(wanted);
  const smallest = ((box.east - box.west) / EXTENT) * DRAWN_AS_BOX;
  const asked = { box: grown(box), smallest, codes: own };
  const rows = now
    ? await listParcelShapes(tx, districtId, asked)
    : await listParcelShapesAt(tx, districtId, { ...asked, version: wanted.version });
  return rows.map((row) => ({
    type: 'Feature',
    properties: { o: row.ordinal, code: row.code },
    geometry: (row.geometry as Geometry | null) ?? boxGeometry(row),
  }));
}

async function canalFeatures(tx: Tx, districtId: string): Promise<Feature[]> {
  const rows = await listReachShapes(tx, districtId);
  return rows.map((row, ordinal) => ({
    type: 'Feature',
    properties: { o: ordinal, code: row.code, kind: row.kind },
    geometry: row.geometry as Geometry,
  }));
}

async function areaFeatures(tx: Tx, districtId: string): Promise<Feature[]> {
  const rows = await listServiceAreas(tx, districtId);
  return rows.map((row, ordinal) => ({
    type: 'Feature',
    properties: { o: ordinal, code: row.code, name: row.name },
    geometry: row.geometry,
  }));
}

function boxGeometry({ west, south, east, north }: Box): Geometry {
  return {
    type: 'Polygon',
    coordinates: [
      [
        [west, south],
        [east, south],
        [east, north],
        [west, north],
        [west, south],
      ],
    ],
  };
}

/** Corners of a tile of the Web Mercator scheme [degrees]. Source: OGC 17-083r4, WebMercatorQuad. */
export function tileBox({ z, x, y }: Pick<TileWanted, 'z' | 'x' | 'y'>): Box {
  const side = 2 ** z;
  const latitude = (row: number) => (Math.atan(Math.sinh(Math.PI * (1 - (2 * row) / side))) * 180) / Math.PI;
  return { west: (x / side) * 360 - 180, east: ((x + 1) / side) * 360 - 180, north: latitude(y), south: latitude(y + 1) };
}

function grown(box: Box): Box {
  const [dx, dy] = [((box.east - box.west) * BUFFER) / EXTENT, ((box.north - box.south) * BUFFER) / EXTENT];
  return { west: box.west - dx, east: box.east + dx, south: box.south - dy, north: box.north + dy };
}
