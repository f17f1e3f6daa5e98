/** Measurements of a parcel as a run takes them: salinity, water table, efficiency. */
import type { MeasurementRow } from '../../db/queries/field-measurements.ts';
import type { FieldQuantity } from '../../db/schema/land.ts';
import { addDays, dayNumber } from '../base/civil-date.ts';
import { steadySoilSalinity } from '../crop/salinity.ts';
import type { DatedValues } from '../season/types.ts';
import type { RunSettings } from './run-settings.ts';

/**
 * Leaching fraction behind the salinity of a soil in which none was measured. FAO-29 rev. 1 takes 15 to 20 % for its guidelines (recalled, not re-read); the
 * lower end is the saltier soil, 1.53 times the water.
 */
const USUAL_LEACHING = 0.15;
/** How long before the first day a water table still tells of the run [d]. The product's own limit. */
const WATER_TABLE_REACH = 366;
const FIRST_OF_ALL = '1900-01-01';

/** What of the measurements a run with these settings asks for, and from which day. */
export function measurementsWanted(
  settings: RunSettings,
  startDate: string,
  measuredSince: string,
): { quantities: FieldQuantity[]; from: string } {
  const quantities: FieldQuantity[] = ['efficiency'];
  if (settings.initial_state === 'measured') quantities.push('water_content_m3_m3', 'root_zone_depletion_mm');
  if (settings.capillary_rise) quantities.push('water_table_depth_m');
  if (settings.salinity !== 'off') quantities.push('soil_salinity_ds_m', 'water_salinity_ds_m');
  const from = quantities.every((quantity) => quantity !== 'efficiency' && !quantity.endsWith('ds_m'))
    ? [measuredSince, addDays(startDate, -WATER_TABLE_REACH)].sort()[0]
    : FIRST_OF_ALL;
  return { quantities, from };
}

/**
 * Salinity of soil and water at the start of a season: the latest measured on its first day or before. Water that was not measured has the conductivity of the
 * settings; soil that was not measured has the one it would come to in the long run with that water and a leaching fraction of 0.15 (FAO-56 Eq. 93).
 *
 * @param rows of one parcel, by day
 * @returns `measured` says whether the soil's was
 */
export function salinityAt(
  rows: readonly MeasurementRow[],
  startDate: string,
  settings: Pick<RunSettings, 'water_salinity_ds_m'>,
): { salinity: { soil: number; water: number }; measured: boolean } {
  const water = latest(rows, 'water_salinity_ds_m', startDate) ?? settings.water_salinity_ds_m;
  const soil = latest(rows, 'soil_salinity_ds_m', startDate);
  return { salinity: { soil: soil ?? steadySoilSalinity(water, USUAL_LEACHING), water }, measured: soil !== null };
}

function latest(rows: readonly MeasurementRow[], quantity: FieldQuantity, until: string): number | null {
  return rows.findLast((row) => row.quantity === quantity && row.date <= until)?.value ?? null;
}

/** Efficiency given for a parcel: the latest on the season's last day or before; null where none was. */
export function efficiencyAt(rows: readonly MeasurementRow[], endDate: string): number | null {
  return latest(rows, 'efficiency', endDate);
}

/** Depths of the water table from a year before the first day stepped to the season's last; null where none was measured. */
export function waterTableOf(rows: readonly MeasurementRow[], startDate: string, endDate: string): DatedValues | null {
  const from = addDays(startDate, -WATER_TABLE_REACH);
  const own = rows.filter(({ quantity, date }) => quantity === 'water_table_depth_m' && date >= from && date <= endDate);
  if (own.length === 0) return null;
  const first = dayNumber(startDate);
  return { days: own.map(({ date }) => dayNumber(date) - first), values: own.map(({ value }) => value) };
}
