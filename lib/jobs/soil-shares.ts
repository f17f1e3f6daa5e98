/** Soil classes under the parcels by area, kept on each parcel whenever parcels or soil polygons change. */
import type { MultiPolygon, Polygon } from 'geojson';
import type { Tx } from '../../db/connect.ts';
import { type ImportKey, replaceRows } from '../../db/queries/import-before.ts';
import { listParcelGround, listParcelRows, listSoilAreas } from '../../db/queries/land-maps.ts';
import { type Cover, coverOf } from '../geo/area-shares.ts';
import { planeShape } from '../geo/plane-shape.ts';

/** A soil class under a parcel, with its share of the parcel's area, 0–1. */
export interface SoilShare {
  readonly soil: string;
  readonly share: number;
}

const PAGE = 1000;
/** Digits kept of a share. */
const DIGITS = 1e6;

/** The district's soil polygons, indexed. */
export class SoilMap {
  private constructor(
    private readonly cover: Cover,
    private readonly soils: readonly string[],
  ) {}

  static async open(tx: Tx, districtId: string): Promise<SoilMap> {
    const areas = await listSoilAreas(tx, districtId);
    return new SoilMap(
      coverOf(areas.map(({ geometry }) => planeShape(geometry))),
      areas.map(({ soilCode }) => soilCode),
    );
  }

  /** Classes under a parcel, largest first; null where no soil polygon lies under it. @param area [m²] */
  sharesOf(geometry: Polygon | MultiPolygon, area: number): SoilShare[] | null {
    if (this.soils.length === 0) return null;
    const sums = new Map<string, number>();
    for (const { index, share } of this.cover.sharesOf(planeShape(geometry), area)) {
      sums.set(this.soils[index], (sums.get(this.soils[index]) ?? 0) + share);
    }
    if (sums.size === 0) return null;
    const shares = [...sums].map(([soil, share]) => ({ soil, share: Math.floor(share * DIGITS + 1e-6) / DIGITS }));
    return shares.sort((a, b) => b.share - a.share || (a.soil < b.soil ? -1 : 1));
  }
}

/** Brings the soil shares of every parcel in line with the soil polygons as they now stand. Answers how many parcels changed. */
export async function updateSoilShares(tx: Tx, own: ImportKey): Promise<number> {
  const map = await SoilMap.open(tx, own.districtId);
  let changed = 0;
  for (let after: string | null = null; ; ) {
    const page: Awaited<ReturnType<typeof listParcelGround>> = await listParcelGround(tx, own.districtId, after, PAGE);
    if (page.length === 0) return changed;
    after = page[page.length - 1].code;
    const fresh = new Map(page.map(({ code, geometry, area }) => [code, map.sharesOf(geometry, area)]));
    const moved = page.filter(({ code, soilShares }) => !sameShares(soilShares, fresh.get(code) ?? null)).map(({ code }) => code);
    if (moved.length === 0) continue;
    const rows = await listParcelRows(tx, own.districtId, moved);
    const { changed: count } = await replaceRows(
      tx,
      own,
      'parcel',
      [...rows].map(([code, row]) => ({ ...row, soil_shares: fresh.get(code) ?? null })),
    );
    changed += count;
  }
}

function sameShares(a: readonly SoilShare[] | null, b: readonly SoilShare[] | null): boolean {
  if (a === null || b === null) return a === b;
  return a.length === b.length && a.every(({ soil, share }, i) => soil === b[i].soil && share === b[i].share);
}
