/** The one-use token that makes the first district of an empty installation. */
import { eq } from 'drizzle-orm';
import type { Database } from '../connect.ts';
import { setupToken } from '../schema/auth.ts';

type Outside = Database['outside'];

export async function insertSetupToken(outside: Outside, hash: string): Promise<void> {
  await outside.insert(setupToken).values({ hash }).onConflictDoNothing();
}

export async function hasSetupToken(outside: Outside, hash: string): Promise<boolean> {
  const rows = await outside.select({ hash: setupToken.hash }).from(setupToken).where(eq(setupToken.hash, hash));
  return rows.length > 0;
}

/** True while any token waits to be used: the installation has no district yet. */
export async function hasAnySetupToken(outside: Outside): Promise<boolean> {
  const rows = await outside.select({ hash: setupToken.hash }).from(setupToken).limit(1);
  return rows.length > 0;
}

/** Takes the token out of use; false when somebody else was first. */
export async function deleteSetupToken(outside: Outside, hash: string): Promise<boolean> {
  const rows = await outside.delete(setupToken).where(eq(setupToken.hash, hash)).returning({ hash: setupToken.hash });
  return rows.length > 0;
}

/** Takes every token out of use. */
export async function deleteEverySetupToken(outside: Outside): Promise<void> {
  await outside.delete(setupToken);
}
