import { z } from 'zod';
import { operation } from '../operation.ts';

export const tileOperation = operation({
  method: 'GET',
  path: '/api/v1/tiles/{layer}/{version}/{z}/{x}/{y}.mvt',
  tag: 'Map',
  summary: 'Vector tile of parcels, canals or service areas',
  description:
    'Mapbox Vector Tile 2. Feature id and property `o`: ordinal; property `code`; canals also `kind`, areas `name`. 204 where there is nothing. ' +
    'Immutable for a version; the version in use is `geometry_version` of the district. In an earlier version parcels are drawn as they stood then. Growers get the shapes of their own parcels.',
  scope: 'read',
  params: {
    layer: z.enum(['parcels', 'canals', 'areas']),
    version: z.coerce.number().int().min(1),
    z: z.coerce.number().int().min(0).max(16),
    x: z.coerce.number().int().min(0),
    y: z.coerce.number().int().min(0),
  },
  media: { type: 'application/vnd.mapbox-vector-tile', holds: 'a vector tile' },
  refusals: [404],
});

export const openApiOperation = operation({
  method: 'GET',
  path: '/api/v1/openapi.json',
  tag: 'This document',
  summary: 'The OpenAPI 3.1 document',
  scope: 'open',
  media: { type: 'application/json', holds: 'an OpenAPI 3.1 document' },
});
