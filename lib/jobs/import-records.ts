/** Applying soils, deliveries and measurements. */
import type { Tx } from '../../db/connect.ts';
import { type ImportKey, type RowChanges, replaceRows } from '../../db/queries/import-before.ts';
import { TEXTURE_CLASSES, textureProperties } from '../crop/capillary-rise.ts';
import type { StagedDelivery, StagedMeasurement, StagedSoil } from '../files/reading.ts';
import type { Soil } from '../season/types.ts';

/** Deliveries of parcels and days, over what was there for the same parcel and day. */
export function applyDeliveries(tx: Tx, own: ImportKey, deliveries: readonly StagedDelivery[]): Promise<RowChanges> {
  const rows = deliveries.map(({ parcelCode, date, volume }) => ({ parcel_code: parcelCode, date, volume_m3: volume }));
  return replaceRows(tx, own, 'delivery', rows);
}

/** Measurements, over all depths that were there for the same parcel, day and quantity. */
export function applyMeasurements(tx: Tx, own: ImportKey, measurements: readonly StagedMeasurement[]): Promise<RowChanges> {
  const rows = measurements.map(({ parcelCode, date, quantity, depth, value }) => ({
    parcel_code: parcelCode,
    date,
    quantity,
    depth_m: depth,
    value,
  }));
  return replaceRows(tx, own, 'field_measurement', rows);
}

/** The members of a soil that only some have. */
function profileOf({ layers, saturation, texture, percolationRate, capillaryClass }: StagedSoil): Partial<Soil> {
  return { layers, saturation, texture, percolationRate, capillary: capillaryOf(capillaryClass) };
}

function capillaryOf(texture: string | undefined): Soil['capillary'] {
  const known = TEXTURE_CLASSES.find((one) => one === texture);
  if (!known) return undefined;
  const { conductivity, bubblingHead, exponent } = textureProperties(known);
  return { conductivity, bubblingHead, exponent };
}

export function applySoils(tx: Tx, own: ImportKey, soils: readonly StagedSoil[]): Promise<RowChanges> {
  const rows = soils.map((soil) => ({
    code: soil.code,
    name: soil.name,
    field_capacity_m3_m3: soil.fieldCapacity,
    wilting_point_m3_m3: soil.wiltingPoint,
    evaporation_depth_m: soil.evaporationDepth,
    readily_evaporable_water_mm: soil.readilyEvaporableWater,
    total_evaporable_water_mm: soil.totalEvaporableWater,
    curve_number: soil.curveNumber,
    root_limit_m: soil.rootLimit,
    profile: profileOf(soil),
    source: soil.source,
  }));
  return replaceRows(tx, own, 'soil', rows);
}
