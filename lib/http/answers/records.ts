/** Deliveries and measurements of the parcels a caller may see, and their changes. */
import { z } from 'zod';
import { listDeliveryPage, putDelivery, removeDelivery } from '../../../db/queries/deliveries.ts';
import { listMeasurementPage, type MeasurementKey, putMeasurement, removeMeasurement } from '../../../db/queries/field-measurements.ts';
import { findParcel, mapParcelAreas } from '../../../db/queries/land-read.ts';
import { listSeasonsOnRecords, markRunsStale } from '../../../db/queries/stale-runs.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { isIsoDate } from '../../base/civil-date.ts';
import { NotFound, Refused } from '../../base/errors.ts';
import { roundOrNull } from '../../base/missing.ts';
import { depthToVolume, volumeToDepth } from '../../base/units.ts';
import {
  type DeliveryAnswer,
  type DeliveryRequest,
  type MeasurementAnswer,
  type MeasurementRequest,
  MOST_DELIVERED,
  QUANTITY_LIMITS,
} from '../contract/records.ts';
import { readCursor, writeCursor } from '../paging.ts';
import { isStorable } from '../storable-text.ts';
import type { PageWanted } from './land.ts';

interface SpanWanted extends PageWanted {
  readonly from: string;
  readonly to: string;
  readonly parcel?: string;
}

interface Listed<T> {
  items: T[];
  next_cursor: string | null;
}

export async function answerDeliveries(caller: Caller, wanted: SpanWanted): Promise<Listed<DeliveryAnswer>> {
  const { districtId, parcels: codes } = caller;
  const after = readCursor(wanted.cursor, z.tuple([z.string(), z.string()]));
  const { from, to, parcel, limit } = wanted;
  return database().inDistrict(districtId, async (tx) => {
    const rows = await listDeliveryPage(tx, { districtId, from, to, parcel, codes }, after, limit + 1);
    const page = rows.slice(0, limit);
    const areas = await mapParcelAreas(tx, districtId, [...new Set(page.map(({ parcelCode }) => parcelCode))]);
    const last = page[page.length - 1];
    return {
      items: page.map((row) => deliveryMembers(row, areas.get(row.parcelCode) ?? Number.NaN)),
      next_cursor: rows.length > limit ? writeCursor(last.parcelCode, last.date) : null,
    };
  });
}

function deliveryMembers(row: { parcelCode: string; date: string; volume: number }, area: number): DeliveryAnswer {
  const volume = roundOrNull(row.volume, 3) ?? 0;
  return {
    parcel: row.parcelCode,
    date: row.date,
    volume_m3: volume,
    gross_depth_mm: roundOrNull(volumeToDepth(row.volume, area), 3) ?? 0,
  };
}

/** @throws NotFound for a parcel that is not there; Refused for more water than a day can hold */
export async function recordDelivery(caller: Caller, given: DeliveryRequest): Promise<DeliveryAnswer> {
  requireDate(given.date);
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const { code, area } = await parcelOf(caller, given.parcel);
    const volume = given.volume_m3 ?? depthToVolume(given.gross_depth_mm ?? 0, area);
    const depth = volumeToDepth(volume, area);
    if (depth > MOST_DELIVERED) {
      throw new Refused(
        `${given.volume_m3} m³ would put ${Math.round(depth)} mm on parcel ${code} in a day; at most ${MOST_DELIVERED} mm (${Math.round(depthToVolume(MOST_DELIVERED, area))} m³) are taken. Check the volume and its unit.`,
      );
    }
    const row = { districtId, parcelCode: code, date: given.date, volume };
    await putDelivery(tx, row);
    await staleOn(tx, districtId, 'deliveries', given.date, 'delivery recorded');
    return deliveryMembers(row, area);
  });
}

/** @throws NotFound when none is recorded */
export async function removeDeliveryOf(caller: Caller, key: { parcel: string; date: string }): Promise<{ removed: true }> {
  const { districtId } = caller;
  requireDate(key.date);
  return database().inDistrict(districtId, async (tx) => {
    if (!(await removeDelivery(tx, { districtId, parcelCode: key.parcel, date: key.date })))
      throw new NotFound(`no delivery to parcel "${key.parcel}" is recorded on ${key.date}`);
    await staleOn(tx, districtId, 'deliveries', key.date, 'delivery removed');
    return { removed: true };
  });
}

export async function answerMeasurements(caller: Caller, wanted: SpanWanted): Promise<Listed<MeasurementAnswer>> {
  const { districtId, parcels: codes } = caller;
  const after = readCursor(wanted.cursor, z.tuple([z.string(), z.string(), z.string(), z.number()])) as MeasurementKey | null;
  const { from, to, parcel, limit } = wanted;
  const rows = await database().inDistrict(districtId, (tx) =>
    listMeasurementPage(tx, { districtId, from, to, parcel, codes }, after, limit + 1),
  );
  const page = rows.slice(0, limit);
  const last = page[page.length - 1];
  return {
    items: page.map(measurementMembers),
    next_cursor: rows.length > limit ? writeCursor(last.parcelCode, last.date, last.quantity, last.depth) : null,
  };
}

type MeasuredRow = Awaited<ReturnType<typeof listMeasurementPage>>[number];

function measurementMembers({ parcelCode, date, quantity, depth, value }: MeasuredRow): MeasurementAnswer {
  return { parcel: parcelCode, date, quantity, soil_depth_m: depth, value };
}

/** @throws NotFound for a parcel that is not there; Refused for a value outside its limits, or without the depth it needs */
export async function recordMeasurement(caller: Caller, given: MeasurementRequest): Promise<MeasurementAnswer> {
  requireDate(given.date);
  const { districtId } = caller;
  const { low, high, depth: needs } = QUANTITY_LIMITS[given.quantity];
  if (!(given.value >= low && given.value <= high)) {
    throw new Refused(`${given.quantity} ${given.value} is outside ${low} to ${high}. Check the value and its unit.`);
  }
  if (needs === 'needed' && given.soil_depth_m === 0) {
    throw new Refused(`${given.quantity} needs soil_depth_m, the depth down to which it was measured: above 0, at most 10 m.`);
  }
  const depth = needs === 'none' ? 0 : given.soil_depth_m;
  return database().inDistrict(districtId, async (tx) => {
    const { code } = await parcelOf(caller, given.parcel);
    const row = { parcelCode: code, date: given.date, quantity: given.quantity, depth, value: given.value };
    await putMeasurement(tx, { districtId, ...row });
    await staleOn(tx, districtId, [given.quantity], given.date, 'measurement recorded');
    return measurementMembers(row);
  });
}

/** @throws NotFound when none is recorded */
export async function removeMeasurementOf(
  caller: Caller,
  key: { parcel: string; date: string; quantity: MeasurementRequest['quantity']; depth: number },
): Promise<{ removed: true }> {
  const { districtId } = caller;
  requireDate(key.date);
  return database().inDistrict(districtId, async (tx) => {
    const { parcel: parcelCode, ...rest } = key;
    if (!(await removeMeasurement(tx, { districtId, parcelCode, ...rest })))
      throw new NotFound(`no ${key.quantity} of parcel "${key.parcel}" is recorded on ${key.date} at ${key.depth} m`);
    await staleOn(tx, districtId, [key.quantity], key.date, 'measurement removed');
    return { removed: true };
  });
}

type Tx = Parameters<typeof markRunsStale>[0];
type What = Parameters<typeof listSeasonsOnRecords>[2]['what'];

async function staleOn(tx: Tx, districtId: string, what: What, date: string, reason: string): Promise<void> {
  await markRunsStale(tx, districtId, await listSeasonsOnRecords(tx, districtId, { what, from: date, to: date }), reason);
}

async function parcelOf({ districtId, parcels }: Caller, code: string): Promise<{ code: string; area: number }> {
  const visible = isStorable(code) && (!parcels || parcels.includes(code));
  const row = visible ? await database().inDistrict(districtId, (tx) => findParcel(tx, districtId, code)) : null;
  if (!row) throw new NotFound(`no parcel "${code}" in this district`);
  return row;
}

function requireDate(date: string): void {
  if (!isIsoDate(date)) throw new Refused(`"${date}" is not a day of the calendar`);
}
