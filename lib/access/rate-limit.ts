/** How often one caller may ask. Sign-in is counted in the database, for every host alike; tokens are counted in each process. */
import { createHash } from 'node:crypto';
import { countRequest } from '../../db/queries/request-counts.ts';
import { TooMany } from '../base/errors.ts';
import { database } from './database.ts';

const MINUTE = 60_000;
/** Tries in a minute for one address of a person, and from one network address. */
const SIGN_IN_LIMIT = { perPerson: 10, perAddress: 60 } as const;
/** Requests in a minute by one token, on one process. */
export const TOKEN_LIMIT = 1200;
/** Requests in a minute with tokens that are not known, from one network address, on one process. */
export const UNKNOWN_TOKEN_LIMIT = 60;

/** @throws {TooMany} when this person's address or this network address was tried too often in the last minute. */
export async function limitSignIn(email: string, address: string): Promise<void> {
  const person = createHash('sha256').update(email.trim().toLowerCase()).digest('hex');
  await limitInDatabase(`sign-in person ${person}`, SIGN_IN_LIMIT.perPerson);
  await limitInDatabase(`sign-in address ${address}`, SIGN_IN_LIMIT.perAddress);
}

async function limitInDatabase(key: string, most: number): Promise<void> {
  const now = Date.now();
  const { count, since } = await countRequest(database().outside, key, now, MINUTE);
  if (count > most) throw tooMany(most, since + MINUTE - now);
}

const held = globalThis as unknown as { tillwaterCounts?: Map<string, { count: number; since: number }> };

/** @throws {TooMany} when `key` was counted more than `most` times in this process within a minute. */
export function limitInProcess(key: string, most: number): void {
  held.tillwaterCounts ??= new Map();
  const counts = held.tillwaterCounts;
  const now = Date.now();
  const entry = counts.get(key);
  if (!entry || now - entry.since >= MINUTE) {
    if (counts.size > 20_000) counts.clear();
    counts.set(key, { count: 1, since: now });
    return;
  }
  entry.count++;
  if (entry.count > most) throw tooMany(most, entry.since + MINUTE - now);
}

function tooMany(most: number, waitMs: number): TooMany {
  const seconds = Math.max(1, Math.ceil(waitMs / 1000));
  return new TooMany(`more than ${most} requests in a minute: try again in ${seconds} s`, seconds);
}

/** Network address of the caller as the server or the proxy before it wrote it down. */
export function addressOf(headers: Headers): string {
  return headers.get('x-forwarded-for')?.split(',')[0].trim() || 'unknown';
}
