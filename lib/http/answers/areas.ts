/** Service areas, and the parcels in each. */
import type { Tx } from '../../../db/connect.ts';
import { listParcelPoints, listServiceAreas } from '../../../db/queries/land-maps.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { roundOrNull } from '../../base/missing.ts';
import { coverOf } from '../../geo/area-shares.ts';
import { insideShape, planeShape } from '../../geo/plane-shape.ts';
import type { AreaAnswer } from '../contract/land-places.ts';

export async function answerAreas(caller: Caller): Promise<AreaAnswer[]> {
  return database().inDistrict(caller.districtId, async (tx) => {
    const areas = await listServiceAreas(tx, caller.districtId);
    if (areas.length === 0) return [];
    const counts = new Map<string, number>();
    for (const area of (await areasOfParcels(tx, caller, areas)).values()) counts.set(area, (counts.get(area) ?? 0) + 1);
    return areas.map((area) => ({
      code: area.code,
      name: area.name,
      turnout: area.turnoutCode,
      reach: area.reachCode,
      area_ha: roundOrNull(area.area / 1e4, 6) ?? 0,
      parcel_count: counts.get(area.code) ?? 0,
    }));
  });
}

type Areas = Awaited<ReturnType<typeof listServiceAreas>>;

/** Parcel → the service area that its inner point lies in; where areas overlap, the smallest of them. Parcels in none are left out. */
export async function areasOfParcels(tx: Tx, caller: Caller, areas: Areas): Promise<Map<string, string>> {
  const shapes = areas.map(({ geometry }) => planeShape(geometry));
  const cover = coverOf(shapes);
  const found = new Map<string, string>();
  for (const { code, longitude, latitude } of await listParcelPoints(tx, caller.districtId, caller.parcels)) {
    const around = cover.near(longitude, latitude).filter((index) => insideShape(shapes[index], longitude, latitude));
    if (around.length === 0) continue;
    const home = around.reduce((a, b) => (areas[b].area < areas[a].area || (areas[b].area === areas[a].area && b < a) ? b : a));
    found.set(code, areas[home].code);
  }
  return found;
}
