import { z } from 'zod';
import { isoDate } from './common.ts';

export type { RecordsTold } from '../../jobs/run-records-told.ts';

/** Most water of a day over a parcel, gross [mm]; as in files. */
export const MOST_DELIVERED = 600;

/** Days that a record can be of: a slip in the year is refused. */
const recordDay = isoDate.refine((date) => date >= '1950-01-01' && date <= '2100-12-31', { message: 'a day from 1950 to 2100' });

/** Water put on a parcel on a day, as the district recorded it. */
export const deliveryRow = z
  .object({
    parcel: z.string(),
    date: isoDate,
    volume_m3: z.number().meta({ description: 'at the turnout or the edge of the field, before losses on the field' }),
    gross_depth_mm: z.number().meta({ description: 'the volume over the area of the parcel' }),
  })
  .meta({ id: 'Delivery' });
export type DeliveryAnswer = z.infer<typeof deliveryRow>;

export const deliveryRequest = z
  .strictObject({
    parcel: z.string().min(1).max(120),
    date: recordDay,
    volume_m3: z.number().min(0).max(6e7).optional(),
    gross_depth_mm: z.number().min(0).max(MOST_DELIVERED).optional(),
  })
  .refine((given) => (given.volume_m3 === undefined) !== (given.gross_depth_mm === undefined), {
    message: 'give either volume_m3 or gross_depth_mm',
  })
  .meta({ id: 'DeliveryRequest', description: 'either a volume, or a gross depth over the parcel; 0 says that nothing was delivered' });
export type DeliveryRequest = z.infer<typeof deliveryRequest>;

/** Quantities with their limits, in the unit of the name, and whether they need the depth of the soil they are of. */
export const QUANTITY_LIMITS = {
  water_content_m3_m3: { low: 0.005, high: 0.9, depth: 'needed' },
  root_zone_depletion_mm: { low: 0, high: 1000, depth: 'optional' },
  water_table_depth_m: { low: 0, high: 200, depth: 'none' },
  soil_salinity_ds_m: { low: 0, high: 100, depth: 'none' },
  water_salinity_ds_m: { low: 0, high: 20, depth: 'none' },
  efficiency: { low: 0.05, high: 1, depth: 'none' },
} as const;

export const quantity = z
  .enum(Object.keys(QUANTITY_LIMITS) as [keyof typeof QUANTITY_LIMITS, ...(keyof typeof QUANTITY_LIMITS)[]])
  .meta({ description: 'what was measured; its unit is in its name, efficiency is a fraction' });

const depth = z.number().min(0).max(10);

/** Something measured, or given, at a parcel on a day. */
export const measurementRow = z
  .object({
    parcel: z.string(),
    date: isoDate,
    quantity,
    soil_depth_m: z.number().meta({ description: 'lower edge of the soil it holds for; 0 where depth means nothing, or was not told' }),
    value: z.number().meta({ description: 'in the unit of the quantity, whatever `units` says' }),
  })
  .meta({ id: 'Measurement' });
export type MeasurementAnswer = z.infer<typeof measurementRow>;

export const measurementRequest = z
  .strictObject({
    parcel: z.string().min(1).max(120),
    date: recordDay,
    quantity,
    soil_depth_m: depth.default(0),
    value: z.number(),
  })
  .meta({ id: 'MeasurementRequest' });
export type MeasurementRequest = z.infer<typeof measurementRequest>;

const points = z
  .array(z.strictObject({ depth_mm: z.number().min(0).max(500), efficiency: z.number().min(0.05).max(1) }))
  .max(20)
  .meta({
    description:
      'application efficiency by net depth applied, by depth; linear between, the end values beyond; none: one efficiency at every depth',
  });

/** What of an application method can be changed. */
export const methodPatch = z
  .strictObject({
    efficiency: z.number().min(0.05).max(1),
    maximum_daily_depth_mm: z.number().min(1).max(500),
    trigger_fraction: z.number().min(0.05).max(1),
    minimum_depth_mm: z.number().min(0).max(300).nullable(),
    flow_l_s_ha: z.number().min(0.05).max(200).nullable(),
    efficiency_by_depth: points,
    source: z.string().min(3).max(400).meta({ description: 'where the values come from' }),
  })
  .partial()
  .meta({ id: 'ApplicationMethodPatch' });
export type MethodPatch = z.infer<typeof methodPatch>;
