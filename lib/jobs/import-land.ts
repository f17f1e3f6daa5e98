/** Applying parcels, plantings and canals. */
import type { Tx } from '../../db/connect.ts';
import { type ImportKey, type RowChanges, removeRows, replaceRows } from '../../db/queries/import-before.ts';
import {
  listPlantingKeys,
  listReachUsers,
  listRecordKeys,
  listTreeNodes,
  mapStoredParcels,
  mapTurnouts,
  nextParcelOrdinal,
} from '../../db/queries/import-land.ts';
import { listAreaCodes } from '../../db/queries/land-maps.ts';
import { counted } from '../base/counted.ts';
import { Refused } from '../base/errors.ts';
import { checkLossRule } from '../canal/loss-rule.ts';
import { buildTree } from '../canal/tree.ts';
import type {
  StagedArea,
  StagedImageMean,
  StagedParcel,
  StagedPlanting,
  StagedReach,
  StagedSoilArea,
  StagedTurnout,
} from '../files/reading.ts';
import { SoilMap } from './soil-shares.ts';

type StoredParcels = Awaited<ReturnType<typeof mapStoredParcels>>;
type StoredTurnouts = Awaited<ReturnType<typeof mapTurnouts>>;

/** Hands out places to new parcels and remembers which codes the file had. */
export class ParcelWriter {
  private readonly seen = new Set<string>();

  private constructor(
    private readonly stored: StoredParcels,
    private readonly turnouts: StoredTurnouts,
    private readonly soilMap: SoilMap,
    private next: number,
  ) {}

  static async open(tx: Tx, districtId: string): Promise<ParcelWriter> {
    return new ParcelWriter(
      await mapStoredParcels(tx, districtId),
      await mapTurnouts(tx, districtId),
      await SoilMap.open(tx, districtId),
      await nextParcelOrdinal(tx, districtId),
    );
  }

  /** Adds parcels, and changes known ones: what the file does not say (name, turnout, soil …) stays as it is. */
  async write(tx: Tx, own: ImportKey, parcels: readonly StagedParcel[]): Promise<RowChanges> {
    return replaceRows(
      tx,
      own,
      'parcel',
      parcels.map((parcel) => this.row(parcel)),
    );
  }

  private row(parcel: StagedParcel): Record<string, unknown> {
    this.seen.add(parcel.code);
    const stored = this.stored.get(parcel.code);
    return {
      code: parcel.code,
      ordinal: stored?.ordinal ?? this.next++,
      name: parcel.name ?? stored?.name ?? null,
      turnout_code: parcel.turnoutCode ?? this.keptTurnout(parcel),
      reach_code: parcel.reachCode ?? stored?.reachCode ?? null,
      soil_code: parcel.soilCode ?? stored?.soilCode ?? null,
      method_code: parcel.methodCode ?? stored?.methodCode ?? null,
      area_m2: parcel.area,
      elevation_m: parcel.elevation ?? stored?.elevation ?? null,
      longitude: parcel.longitude,
      latitude: parcel.latitude,
      west: parcel.west,
      south: parcel.south,
      east: parcel.east,
      north: parcel.north,
      geometry: parcel.geometry,
      attributes: parcel.attributes,
      soil_shares: this.soilMap.sharesOf(parcel.geometry, parcel.area),
    };
  }

  /** The stored turnout, unless the file moves the parcel to another reach. */
  private keptTurnout(parcel: StagedParcel): string | null {
    const kept = this.stored.get(parcel.code)?.turnoutCode ?? null;
    if (kept === null || parcel.reachCode === null) return kept;
    return this.turnouts.get(kept)?.reachCode === parcel.reachCode ? kept : null;
  }

  /** Removes the parcels that the file did not have, with their plantings, deliveries and measurements. */
  async removeAbsent(tx: Tx, own: ImportKey): Promise<number> {
    const absent = [...this.stored.keys()].filter((code) => !this.seen.has(code));
    for (let from = 0; from < absent.length; from += 1000) {
      const codes = absent.slice(from, from + 1000);
      await removeRows(tx, own, 'planting', await listPlantingKeys(tx, own.districtId, codes));
      const { deliveries, measurements } = await listRecordKeys(tx, own.districtId, codes);
      await removeRows(tx, own, 'delivery', deliveries);
      await removeRows(tx, own, 'field_measurement', measurements);
      await removeRows(
        tx,
        own,
        'parcel',
        codes.map((code) => ({ code })),
      );
    }
    return absent.length;
  }
}

/** Adds turnouts and moves known ones; a capacity or place the file does not say stays. */
export async function applyTurnouts(tx: Tx, own: ImportKey, turnouts: readonly StagedTurnout[]): Promise<RowChanges> {
  const stored = await mapTurnouts(tx, own.districtId);
  const rows = turnouts.map((turnout) => ({
    code: turnout.code,
    reach_code: turnout.reachCode,
    capacity_m3_s: turnout.capacity ?? stored.get(turnout.code)?.capacity ?? null,
    longitude: turnout.longitude ?? stored.get(turnout.code)?.longitude ?? null,
    latitude: turnout.latitude ?? stored.get(turnout.code)?.latitude ?? null,
  }));
  return replaceRows(tx, own, 'turnout', rows);
}

/** Adds service areas and replaces known ones. */
export function applyAreas(tx: Tx, own: ImportKey, areas: readonly StagedArea[]): Promise<RowChanges> {
  const rows = areas.map((area) => ({
    code: area.code,
    name: area.name,
    reach_code: area.reachCode,
    turnout_code: area.turnoutCode,
    area_m2: area.area,
    ...boxAndShape(area),
  }));
  return replaceRows(tx, own, 'service_area', rows);
}

/** Adds soil polygons and replaces known ones. The shares of the parcels follow by `updateSoilShares` once all are in. */
export function applySoilAreas(tx: Tx, own: ImportKey, areas: readonly StagedSoilArea[]): Promise<RowChanges> {
  const rows = areas.map((area) => ({ code: area.code, soil_code: area.soilCode, ...boxAndShape(area) }));
  return replaceRows(tx, own, 'soil_area', rows);
}

function boxAndShape({ west, south, east, north, geometry, attributes }: StagedArea | StagedSoilArea) {
  return { west, south, east, north, geometry, attributes };
}

/** Removes the areas that the file did not have. */
export async function removeAbsentAreas(
  tx: Tx,
  own: ImportKey,
  table: 'service_area' | 'soil_area',
  kept: ReadonlySet<string>,
): Promise<number> {
  const absent = (await listAreaCodes(tx, own.districtId, table)).filter((code) => !kept.has(code));
  for (let from = 0; from < absent.length; from += 1000) {
    await removeRows(
      tx,
      own,
      table,
      absent.slice(from, from + 1000).map((code) => ({ code })),
    );
  }
  return absent.length;
}

/** Replaces the plantings of each parcel and season named, as a whole. */
export function applyPlantings(tx: Tx, own: ImportKey, plantings: readonly StagedPlanting[]): Promise<RowChanges> {
  const rows = plantings.map((planting) => ({
    parcel_code: planting.parcelCode,
    season_code: planting.seasonCode,
    sequence: planting.sequence,
    crop_code: planting.cropCode,
    calendar_code: planting.calendarCode,
    planting_date: planting.plantingDate,
    harvest_date: planting.harvestDate,
    cut_dates: planting.cutDates,
    area_share: planting.areaShare,
    practice: planting.practice ?? {},
  }));
  return replaceRows(tx, own, 'planting', rows);
}

/** Image means of parcels and days, over what was there for the same parcel, day and quantity. */
export function applyImages(tx: Tx, own: ImportKey, images: readonly StagedImageMean[]): Promise<RowChanges> {
  const rows = images.map((image) => ({
    parcel_code: image.parcelCode,
    date: image.date,
    quantity: image.quantity,
    value: image.value,
    seen_share: image.seenShare,
  }));
  return replaceRows(tx, own, 'image_mean', rows);
}

export function applyReaches(tx: Tx, own: ImportKey, reaches: readonly StagedReach[]): Promise<RowChanges> {
  const rows = reaches.map((reach) => {
    checkLossRule(reach.lossRule, `loss rule of reach ${reach.code}`);
    return {
      code: reach.code,
      name: reach.name,
      parent_code: reach.parentCode,
      kind: reach.kind,
      capacity_m3_s: reach.capacity,
      loss_rule: reach.lossRule,
      length_m: reach.length,
      geometry: reach.geometry,
    };
  });
  return replaceRows(tx, own, 'reach', rows);
}

/** Most codes named in a refusal. */
const NAMED = 8;

/**
 * Removes the reaches that the file did not have.
 *
 * @throws Refused naming the turnouts and parcels that still name one of them
 */
export async function removeAbsentReaches(tx: Tx, own: ImportKey, kept: ReadonlySet<string>): Promise<number> {
  const absent = (await listTreeNodes(tx, own.districtId)).map(({ code }) => code).filter((code) => !kept.has(code));
  if (absent.length === 0) return 0;
  const { turnouts, parcels } = await listReachUsers(tx, own.districtId, absent);
  if (turnouts.length + parcels.length > 0) {
    const users = [
      ...(turnouts.length > 0 ? [`${counted(turnouts.length, 'turnout', 'turnouts')} (${named(turnouts)})`] : []),
      ...(parcels.length > 0 ? [`${counted(parcels.length, 'parcel', 'parcels')} (${named(parcels)})`] : []),
    ].join(' and ');
    throw new Refused(
      `Replacing the canals would remove reaches that ${users} still name. Move them to reaches of the file first, or add those reaches to the file.`,
    );
  }
  return removeRows(
    tx,
    own,
    'reach',
    absent.map((code) => ({ code })),
  );
}

function named(users: readonly { code: string; reachCode: string | null }[]): string {
  const list = users.slice(0, NAMED).map(({ code, reachCode }) => `${code} on ${reachCode}`);
  return `${list.join(', ')}${users.length > NAMED ? ' …' : ''}`;
}

/** Proves that the reaches as they now stand are one tree. @throws TreeError naming the codes at fault */
export async function checkTree(tx: Tx, districtId: string): Promise<void> {
  const nodes = await listTreeNodes(tx, districtId);
  if (nodes.length > 0) buildTree(nodes);
}

export function applyCropMappings(tx: Tx, own: ImportKey, mappings: Readonly<Record<string, string | null>>): Promise<RowChanges> {
  const rows = Object.entries(mappings).map(([foreign_code, crop_code]) => ({ foreign_code, crop_code }));
  return replaceRows(tx, own, 'crop_mapping', rows);
}
