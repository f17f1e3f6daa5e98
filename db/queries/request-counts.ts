/** How often something was tried within a window, counted for every host alike. */
import { randomUUID } from 'node:crypto';
import { sql } from 'drizzle-orm';
import type { Database } from '../connect.ts';

/**
 * Counts one more try under a key.
 *
 * @returns tries in the window so far, and when the window began [ms since 1970]
 */
export async function countRequest(
  outside: Database['outside'],
  key: string,
  nowMs: number,
  windowMs: number,
): Promise<{ count: number; since: number }> {
  const [row] = await outside.execute<{ count: number; since: string }>(sql`
    insert into auth.rate_limit as r (id, key, count, last_request) values (${randomUUID()}, ${key}, 1, ${nowMs})
    on conflict (key) do update set
      count = case when r.last_request <= ${nowMs - windowMs} then 1 else r.count + 1 end,
      last_request = case when r.last_request <= ${nowMs - windowMs} then ${nowMs} else r.last_request end
    returning count, last_request as since`);
  return { count: Number(row.count), since: Number(row.since) };
}
