/** The libraries every district starts with: soils, application methods, crops and calendars. */

import { nullFromNaN } from '../../lib/base/missing.ts';
import type { Tx } from '../connect.ts';
import { cropLibrary } from '../library/crops.ts';
import { LIBRARY_METHODS } from '../library/methods.ts';
import { LIBRARY_SOILS } from '../library/soils.ts';
import { applicationMethod, crop, cropCalendar, soil } from '../schema/land.ts';

/** Writes the libraries into a district. Rows that are there already stay as they are. */
export async function saveDistrictPresets(tx: Tx, districtId: string): Promise<void> {
  await tx
    .insert(soil)
    .values(
      LIBRARY_SOILS.map(({ layers, saturation, texture, percolationRate, capillary, ...row }) => ({
        ...row,
        profile: { layers, saturation, texture, percolationRate, capillary },
        districtId,
        curveNumber: nullFromNaN(row.curveNumber),
        rootLimit: nullFromNaN(row.rootLimit),
      })),
    )
    .onConflictDoNothing();
  await tx
    .insert(applicationMethod)
    .values(LIBRARY_METHODS.map((row) => ({ ...row, districtId })))
    .onConflictDoNothing();
  const { crops, calendars, sources, notes } = cropLibrary();
  await tx
    .insert(crop)
    .values(
      crops.map((definition) => ({
        districtId,
        code: definition.code,
        name: definition.name,
        group: definition.group,
        definition,
        sources: sources[definition.code] ?? {},
        notes: notes[definition.code] ?? null,
      })),
    )
    .onConflictDoNothing();
  await tx
    .insert(cropCalendar)
    .values(
      calendars.map(({ cropCode, calendar, plantingDay, source }) => ({
        districtId,
        code: calendar.code,
        cropCode,
        name: calendar.name,
        plantingDay,
        definition: calendar,
        source,
      })),
    )
    .onConflictDoNothing();
}
