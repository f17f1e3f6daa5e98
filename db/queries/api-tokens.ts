/** API tokens: only their hashes are stored. */
import { and, desc, eq, isNull, lt, or } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { apiToken } from '../schema/district.ts';

export type TokenRow = typeof apiToken.$inferSelect;

/** The token with this hash, or null. Seen with `byTokenHash`. */
export async function findTokenByHash(tx: Tx, hash: string): Promise<TokenRow | null> {
  const [row] = await tx.select().from(apiToken).where(eq(apiToken.hash, hash));
  return row ?? null;
}

export function listTokens(tx: Tx, districtId: string): Promise<TokenRow[]> {
  return tx.select().from(apiToken).where(eq(apiToken.districtId, districtId)).orderBy(desc(apiToken.createdAt));
}

/** Stores a token; one with the same hash in the same district is renewed. */
export async function saveToken(tx: Tx, values: typeof apiToken.$inferInsert): Promise<TokenRow> {
  const [row] = await tx
    .insert(apiToken)
    .values(values)
    .onConflictDoUpdate({ target: apiToken.hash, set: { name: values.name, scope: values.scope, expiresAt: values.expiresAt } })
    .returning();
  return row;
}

export async function deleteToken(tx: Tx, districtId: string, tokenId: string): Promise<boolean> {
  const rows = await tx
    .delete(apiToken)
    .where(and(eq(apiToken.districtId, districtId), eq(apiToken.tokenId, tokenId)))
    .returning({ tokenId: apiToken.tokenId });
  return rows.length > 0;
}

/** Notes that a token was used, unless it was noted after `notedBefore`. */
export async function touchToken(tx: Tx, key: { districtId: string; tokenId: string }, now: Date, notedBefore: Date): Promise<void> {
  await tx
    .update(apiToken)
    .set({ lastUsedAt: now })
    .where(
      and(
        eq(apiToken.districtId, key.districtId),
        eq(apiToken.tokenId, key.tokenId),
        or(isNull(apiToken.lastUsedAt), lt(apiToken.lastUsedAt, notedBefore)),
      ),
    );
}
