import { answerTile } from '../../../../../../../../../lib/http/answers/tile.ts';
import { immutable, viewOf } from '../../../../../../../../../lib/http/conditional.ts';
import { tileOperation } from '../../../../../../../../../lib/http/operations/tiles.ts';
import { route } from '../../../../../../../../../lib/http/route.ts';

export const GET = route(tileOperation, ({ request, caller, params }) => {
  const { layer, version, z, x, y } = params;
  return immutable(request, `${caller.districtId}-${layer}-${version}-${z}-${x}-${y}${viewOf(caller)}`, async () => {
    const bytes = await answerTile(caller, params);
    if (bytes.byteLength === 0) return new Response(null, { status: 204 });
    return new Response(new Uint8Array(bytes), { headers: { 'content-type': 'application/vnd.mapbox-vector-tile' } });
  });
});
