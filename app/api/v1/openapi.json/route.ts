import { openApiDocument } from '../../../../lib/http/openapi.ts';
import { openApiOperation } from '../../../../lib/http/operations/tiles.ts';
import { openRoute } from '../../../../lib/http/route.ts';

export const GET = openRoute(openApiOperation, async () =>
  Response.json(openApiDocument(), { headers: { 'cache-control': 'public, max-age=300' } }),
);
