import { z } from 'zod';
import { practiceRow } from '../answers/practice.ts';
import { pageOf } from '../contract/common.ts';
import { practiceColumns } from '../contract/practice.ts';
import { canalAnswer, cropAnswer, methodAnswer, parcelAnswer, plantingAnswer, soilAnswer } from '../contract/rest.ts';
import { operation } from '../operation.ts';
import { pageQuery } from '../paging.ts';

const tag = 'Land and crops';
const list = <T extends z.ZodType>(item: T) => z.object({ items: z.array(item) });
const code = z.string().min(1).max(120);
const search = z.string().max(100).optional().meta({ description: 'part of a code, name or turnout, in any case' });

export const listParcelsOperation = operation({
  method: 'GET',
  path: '/api/v1/parcels',
  tag,
  summary: 'Parcels, by code',
  scope: 'read',
  query: { search, ...pageQuery(100, 5000) },
  units: true,
  answer: pageOf(parcelAnswer).meta({ id: 'ParcelPage' }),
  table: { row: parcelAnswer, leaveOut: ['soil_shares'] },
});

export const readParcelOperation = operation({
  method: 'GET',
  path: '/api/v1/parcels/{code}',
  tag,
  summary: 'One parcel',
  scope: 'read',
  params: { code },
  units: true,
  answer: parcelAnswer,
  refusals: [404],
});

export const listPlantingsOperation = operation({
  method: 'GET',
  path: '/api/v1/plantings',
  tag,
  summary: 'Plantings, by season and parcel',
  scope: 'read',
  query: { season: z.string().max(40).optional(), parcel: z.string().max(120).optional(), ...pageQuery(200, 5000) },
  answer: pageOf(plantingAnswer).meta({ id: 'PlantingPage' }),
  // in the columns that an import takes, so that a table that went out comes in again whole
  table: {
    row: plantingAnswer.omit({ practice: true }).extend(practiceColumns.shape),
    rows: ({ items }: { items: z.infer<typeof plantingAnswer>[] }) =>
      items.map(({ practice, ...rest }) => ({ ...rest, ...practiceRow(practice) })),
  },
});

export const listCanalsOperation = operation({
  method: 'GET',
  path: '/api/v1/canals',
  tag,
  summary: 'Reaches of the conveyance tree, headworks first',
  scope: 'read',
  units: true,
  answer: list(canalAnswer),
  table: { row: canalAnswer, leaveOut: ['loss_rule'] },
});

export const listCropsOperation = operation({
  method: 'GET',
  path: '/api/v1/crops',
  tag,
  summary: 'The district’s crops with their calendars and the source of every value',
  scope: 'read',
  answer: list(cropAnswer),
  table: { row: cropAnswer, leaveOut: ['definition', 'sources', 'calendars'] },
});

export const readCropOperation = operation({
  method: 'GET',
  path: '/api/v1/crops/{code}',
  tag,
  summary: 'One crop',
  scope: 'read',
  params: { code },
  answer: cropAnswer,
  refusals: [404],
});

export const listSoilsOperation = operation({
  method: 'GET',
  path: '/api/v1/soils',
  tag,
  summary: 'Soil classes',
  scope: 'read',
  units: true,
  answer: list(soilAnswer),
  table: { row: soilAnswer, leaveOut: ['capillary', 'layers'] },
});

export const listMethodsOperation = operation({
  method: 'GET',
  path: '/api/v1/methods',
  tag,
  summary: 'Application methods',
  scope: 'read',
  units: true,
  answer: list(methodAnswer),
  table: { row: methodAnswer, leaveOut: ['efficiency_by_depth'] },
});
