import { readiness } from '../../lib/http/readiness.ts';

export const dynamic = 'force-dynamic';

/** The database answers and is migrated. */
export async function GET(): Promise<Response> {
  const found = await readiness();
  return Response.json(found, { status: found.ready ? 200 : 503, headers: { 'cache-control': 'no-store' } });
}
