import { z } from 'zod';
import { isoDate } from '../contract/common.ts';
import { deliveryRequest, deliveryRow, measurementRequest, measurementRow, methodPatch, quantity } from '../contract/records.ts';
import { methodAnswer } from '../contract/rest.ts';
import { operation } from '../operation.ts';
import { pageQuery } from '../paging.ts';

const tag = 'Records';
const code = z.string().min(1).max(120);
const span = {
  from: isoDate.default('1900-01-01'),
  to: isoDate.default('2200-12-31'),
  parcel: code.optional(),
};
const removed = z.object({ removed: z.literal(true) });

export const listDeliveriesOperation = operation({
  method: 'GET',
  path: '/api/v1/deliveries',
  tag,
  summary: 'Water delivered to parcels, by parcel and day',
  description: 'Runs with the setting `water` recorded, or recorded-then-rule, take them in place of what the plantings ask for.',
  scope: 'read',
  query: { ...span, ...pageQuery(1000, 10_000) },
  units: true,
  answer: z.object({ items: z.array(deliveryRow), next_cursor: z.string().nullable() }).meta({ id: 'DeliveryPage' }),
  table: { row: deliveryRow },
});

export const putDeliveryOperation = operation({
  method: 'POST',
  path: '/api/v1/deliveries',
  tag,
  summary: 'Record a delivery',
  description: 'Takes the place of what was recorded for the parcel and day. Standing runs that take deliveries of that day become stale.',
  scope: 'write',
  body: deliveryRequest,
  answer: deliveryRow,
  refusals: [404, 422],
});

export const deleteDeliveryOperation = operation({
  method: 'DELETE',
  path: '/api/v1/deliveries/{parcel}/{date}',
  tag,
  summary: 'Remove a delivery',
  scope: 'write',
  params: { parcel: code, date: isoDate },
  answer: removed,
  refusals: [404],
});

export const listMeasurementsOperation = operation({
  method: 'GET',
  path: '/api/v1/measurements',
  tag,
  summary: 'What was measured at parcels, by parcel, day, quantity and depth',
  scope: 'read',
  query: { ...span, ...pageQuery(1000, 10_000) },
  units: true,
  answer: z.object({ items: z.array(measurementRow), next_cursor: z.string().nullable() }).meta({ id: 'MeasurementPage' }),
  table: { row: measurementRow },
});

export const putMeasurementOperation = operation({
  method: 'POST',
  path: '/api/v1/measurements',
  tag,
  summary: 'Record a measurement',
  description: 'Takes the place of a value of the same parcel, day, quantity and depth. Standing runs that take it become stale.',
  scope: 'write',
  body: measurementRequest,
  answer: measurementRow,
  refusals: [404, 422],
});

export const deleteMeasurementOperation = operation({
  method: 'DELETE',
  path: '/api/v1/measurements/{parcel}/{date}/{quantity}',
  tag,
  summary: 'Remove a measurement',
  scope: 'write',
  params: { parcel: code, date: isoDate, quantity },
  query: { soil_depth_m: z.coerce.number().min(0).max(10).default(0) },
  answer: removed,
  refusals: [404],
});

export const changeMethodOperation = operation({
  method: 'PATCH',
  path: '/api/v1/methods/{code}',
  tag: 'Land and crops',
  summary: 'Change the efficiency and the limits of an application method',
  description: 'Standing runs become stale; earlier runs keep the method as it was.',
  scope: 'administer',
  params: { code },
  body: methodPatch,
  answer: methodAnswer,
  refusals: [404, 422],
});
