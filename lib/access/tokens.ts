/** API tokens: shown once, stored as a hash, tied to one district, expiring. */
import { createHash, randomBytes } from 'node:crypto';
import { saveToken, type TokenRow } from '../../db/queries/api-tokens.ts';
import {
  deleteEverySetupToken,
  deleteSetupToken,
  hasAnySetupToken,
  hasSetupToken,
  insertSetupToken,
} from '../../db/queries/setup-tokens.ts';
import { database } from './database.ts';

export type Scope = 'read' | 'write' | 'administer';

/** SHA-256 of a token, hex. A token is 32 random bytes, so no salt and no slow hash is needed. */
export function tokenHash(token: string): string {
  return createHash('sha256').update(token).digest('hex');
}

/** `tw_` and 43 base64url characters: 256 bits of chance. */
function newToken(): string {
  return `tw_${randomBytes(32).toString('base64url')}`;
}

/**
 * Makes a token of a district.
 *
 * @param options.token a value to use instead of a new one; given again, it is renewed
 * @param options.expiresInDays null for a token that does not expire
 */
export async function createToken(
  districtId: string,
  options: { name: string; scope: Scope; expiresInDays: number | null; createdBy?: string | null; token?: string },
): Promise<{ token: string; row: TokenRow }> {
  const token = options.token ?? newToken();
  const expiresAt = options.expiresInDays === null ? null : new Date(Date.now() + options.expiresInDays * 86_400_000);
  const row = await database().inDistrict(districtId, (tx) =>
    saveToken(tx, {
      districtId,
      name: options.name,
      prefix: token.slice(0, 7),
      hash: tokenHash(token),
      scope: options.scope,
      expiresAt,
      createdBy: options.createdBy ?? null,
    }),
  );
  return { token, row };
}

/** Makes the token with which the first district of an empty installation is set up, and answers it. */
export async function createSetupToken(token = newToken()): Promise<string> {
  await insertSetupToken(database().outside, tokenHash(token));
  return token;
}

export function isSetupToken(token: string): Promise<boolean> {
  return hasSetupToken(database().outside, tokenHash(token));
}

/** Takes a set-up token out of use; false when it is gone already. */
export function spendSetupToken(token: string): Promise<boolean> {
  return deleteSetupToken(database().outside, tokenHash(token));
}

/** True while the first district is still to be made: a set-up token waits to be used. */
export function isSetUpOpen(): Promise<boolean> {
  return hasAnySetupToken(database().outside);
}

/** Takes every set-up token out of use, those of earlier starts too: the first district is there. */
export function closeSetUp(): Promise<void> {
  return deleteEverySetupToken(database().outside);
}
