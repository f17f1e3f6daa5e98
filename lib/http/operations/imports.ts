import { z } from 'zod';
import { finding, isoDate } from '../contract/common.ts';
import { importAnswer } from '../contract/rest.ts';
import { operation } from '../operation.ts';

const tag = 'Imports';
const id = z.guid();

/** Choices for one import. Members given in a PATCH replace those of the same name; null takes one away. An unknown member is refused. */
export const importOptions = z
  .strictObject({
    plan: z
      .looseObject({})
      .nullable()
      .optional()
      .meta({ description: 'column plan: roles, units, date order, delimiter, encoding, header row' }),
    season: z.string().max(40).nullable().optional().meta({ description: 'season of plantings that name none' }),
    source: z.string().max(120).nullable().optional().meta({ description: 'weather source for new stations' }),
    site: z.string().max(120).nullable().optional().meta({ description: 'weather: site of a file without a site column' }),
    missingCodes: z.array(z.string().max(40)).max(50).nullable().optional().meta({ description: 'further cell texts that mean missing' }),
    dateOrder: z.enum(['ymd', 'dmy', 'mdy']).nullable().optional().meta({ description: 'order of day, month and year in dates' }),
    cropColumn: z.string().max(200).nullable().optional().meta({ description: 'parcels: property that holds the crop' }),
    codeColumn: z.string().max(200).nullable().optional().meta({ description: 'parcels and canals: property that holds the code' }),
    windHeight: z
      .number()
      .min(0.5)
      .max(200)
      .nullable()
      .optional()
      .meta({ description: 'anemometer height in metres of stations that bring none' }),
    layer: z.string().max(200).nullable().optional().meta({ description: 'layer of a vector file or member of an archive to read' }),
    crs: z
      .string()
      .max(200)
      .nullable()
      .optional()
      .meta({ description: 'coordinate system of the file, e.g. EPSG:28992; goes before what it says' }),
    joinByPlace: z
      .enum(['none', 'nearest-turnout', 'nearest-reach', 'service-area'])
      .nullable()
      .optional()
      .meta({ description: 'parcels that name no turnout or reach: how they are joined to one by place' }),
    joinDistance: z
      .number()
      .min(0)
      .max(50_000)
      .nullable()
      .optional()
      .meta({ description: 'furthest a turnout or reach may lie from the edge of a parcel joined to it, in metres; 500 unless said' }),
    validFrom: isoDate.nullable().optional().meta({ description: 'parcels: first day on which the parcels of the file stand' }),
    stamp: z
      .enum(['start', 'centre', 'end'])
      .nullable()
      .optional()
      .meta({ description: 'hourly and shorter weather: what a time stamp names of its interval' }),
    stampZone: z
      .string()
      .max(60)
      .nullable()
      .optional()
      .meta({ description: 'hourly and shorter weather: zone of the stamps, an IANA name or an offset such as UTC-07:00' }),
    minimumHours: z
      .number()
      .min(1)
      .max(24)
      .nullable()
      .optional()
      .meta({ description: 'fewest hours of a day that make its sums and means; 22 unless said' }),
    margin: z
      .number()
      .min(0)
      .max(10)
      .nullable()
      .optional()
      .meta({ description: 'grids: cells within this many degrees around the district are kept; one cell unless said' }),
    wholeGrid: z.boolean().nullable().optional().meta({ description: 'grids: read every cell although the district has a place' }),
    role: z.enum(['observed', 'forecast']).nullable().optional().meta({
      description:
        'weather and stations: what the values are. A forecast goes into a source of its own (`source`, or "Forecast"), newest issue over older day by day; stations of the district are taken over by their code. A source of the other role refuses',
    }),
    replace: z
      .boolean()
      .nullable()
      .optional()
      .meta({ description: 'parcels, canals, service areas and soil polygons: remove those that the file does not have' }),
    recompute: z.boolean().nullable().optional().meta({ description: 'false: applying starts no run; true unless said' }),
    soilMappings: z
      .record(z.string(), z.string().nullable())
      .nullable()
      .optional()
      .meta({ description: 'soil polygons: class of the file → soil of the district, or null to leave its polygons out' }),
    cropMappings: z
      .record(z.string(), z.string().nullable())
      .nullable()
      .optional()
      .meta({ description: 'crop code of the file → crop of the library, or null' }),
  })
  .meta({ id: 'ImportOptions' });

export const createImportOperation = operation({
  method: 'POST',
  path: '/api/v1/imports',
  tag,
  summary: 'Upload files to be read',
  description:
    'multipart/form-data: `kind`, one or more `file`, and `options` (JSON). Nothing of the district changes until the import is applied. ' +
    'stations, plantings and soils are tables (CSV); weather is tables or grids (NetCDF, zipped Zarr, GeoTIFF); parcels, canals, areas and soil-areas are ' +
    'GeoJSON, zipped shapefile, GeoPackage, FlatGeobuf, GeoParquet or KML; turnouts are either.',
  scope: 'write',
  form: {
    kind: 'stations, weather, parcels, canals, turnouts, areas, soils, soil-areas, plantings, deliveries, measurements or images',
    file: 'one or more files',
    options: 'ImportOptions as JSON; may be left out',
  },
  status: 202,
  answer: importAnswer,
  refusals: [413, 415],
});

export const listImportsOperation = operation({
  method: 'GET',
  path: '/api/v1/imports',
  tag,
  summary: 'The newest 200 imports, without findings and previews',
  scope: 'read',
  answer: z.object({ items: z.array(importAnswer) }),
});

export const readImportOperation = operation({
  method: 'GET',
  path: '/api/v1/imports/{id}',
  tag,
  summary: 'One import: state, progress, what was understood, findings, preview',
  scope: 'read',
  params: { id },
  query: { preview: z.enum(['0', '1']).default('1').meta({ description: '0 leaves the preview out' }) },
  answer: importAnswer,
  refusals: [404],
});

export const patchImportOperation = operation({
  method: 'PATCH',
  path: '/api/v1/imports/{id}',
  tag,
  summary: 'Change the plan and read the files again',
  scope: 'write',
  params: { id },
  body: importOptions,
  status: 202,
  answer: importAnswer,
  refusals: [404, 409, 413, 415],
});

export const applyImportOperation = operation({
  method: 'POST',
  path: '/api/v1/imports/{id}/apply',
  tag,
  summary: 'Apply what was read, in one transaction',
  description:
    '202 when it has been started, 200 when it is already applied. When done, `understood.applied` says what changed and which runs were started.',
  scope: 'write',
  params: { id },
  status: 202,
  answer: importAnswer,
  refusals: [404, 409, 422],
});

export const undoImportOperation = operation({
  method: 'POST',
  path: '/api/v1/imports/{id}/undo',
  tag,
  summary: 'Put back everything an applied import changed, in one transaction',
  description: '202 when it has been started, 200 when it is already undone. 409 names the later import that changed the same rows.',
  scope: 'write',
  params: { id },
  status: 202,
  answer: importAnswer,
  refusals: [404, 409],
});

export const cancelImportOperation = operation({
  method: 'POST',
  path: '/api/v1/imports/{id}/cancel',
  tag,
  summary: 'Call an import off before it is applied',
  scope: 'write',
  params: { id },
  answer: importAnswer,
  refusals: [404, 409],
});

export const importFindingsOperation = operation({
  method: 'GET',
  path: '/api/v1/imports/{id}/findings',
  tag,
  summary: 'Findings of an import, errors first; at most a thousand are kept',
  scope: 'read',
  params: { id },
  answer: z.object({ items: z.array(finding) }),
  table: { row: finding },
  refusals: [404],
});
