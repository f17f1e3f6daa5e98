/** Who asks, for which district, and how far they may reach. */
import { findTokenByHash, touchToken } from '../../db/queries/api-tokens.ts';
import { findDistrictHead, listGrowerParcels, listMemberships, type Role } from '../../db/queries/memberships.ts';
import { Forbidden, Unauthenticated } from '../base/errors.ts';
import { database } from './database.ts';
import { addressOf, limitInProcess, TOKEN_LIMIT, UNKNOWN_TOKEN_LIMIT } from './rate-limit.ts';
import { findSignedIn, type Person } from './sessions.ts';
import { type Scope, tokenHash } from './tokens.ts';

export interface Caller {
  kind: 'person' | 'token';
  userId: string | null;
  name: string;
  email: string | null;
  districtId: string;
  role: Role;
  scope: Scope;
  /** in which the pages show numbers; the API answers metric unless `units=us` is asked for */
  units: 'metric' | 'us';
  /** grower: only these parcels; null: all */
  parcels: string[] | null;
  district: { code: string; name: string; timeZone: string; invented: boolean; weekStart: number; units: 'metric' | 'us' };
}

const RANK: Record<Scope, number> = { read: 0, write: 1, administer: 2 };
const SCOPE_OF_ROLE: Record<Role, Scope> = { grower: 'read', regulator: 'read', operator: 'write', manager: 'administer' };
const ROLE_OF_SCOPE: Record<Scope, Role> = { read: 'regulator', write: 'operator', administer: 'manager' };

/** Cookies that hold what a reader prefers. */
export const PREFERENCE_COOKIES = { units: 'tillwater_units', district: 'tillwater_district', theme: 'tillwater_theme' } as const;

/**
 * The caller of an API request: a bearer token, else the session of the cookie.
 *
 * @throws {Unauthenticated} when there is neither, or it is unknown, withdrawn or expired.
 * @throws {Forbidden} when the person belongs to no district.
 */
export function callerOfRequest(request: Request): Promise<Caller> {
  return callerOfHeaders(request.headers);
}

/** The token of an Authorization header, or null. */
export function bearerOf(headers: Headers): string | null {
  return /^Bearer\s+(\S+)$/i.exec(headers.get('authorization') ?? '')?.[1] ?? null;
}

async function callerOfHeaders(headers: Headers): Promise<Caller> {
  const token = bearerOf(headers);
  if (token) return callerOfToken(token, headers);
  if (headers.get('authorization')) throw new Unauthenticated('the Authorization header must read "Bearer <token>"');
  const person = await findSignedIn(headers);
  if (!person) throw new Unauthenticated('sign in, or send "Authorization: Bearer <token>"');
  const caller = await callerOfPerson(person, (name) => cookieOf(headers, name));
  if (!caller) throw new Forbidden(`${person.email} belongs to no district: ask a manager to be added`);
  return caller;
}

/**
 * The caller of a page; sends a reader who is not signed in to the sign-in page.
 */
export async function callerOfPage(): Promise<Caller> {
  const [{ headers, cookies }, { redirect }] = await Promise.all([import('next/headers'), import('next/navigation')]);
  const [sent, jar] = await Promise.all([headers(), cookies()]);
  const person = await findSignedIn(sent);
  if (!person) redirect('/sign-in');
  const caller = await callerOfPerson(person as Person, (name) => jar.get(name)?.value);
  if (!caller) redirect('/sign-in?reason=no-district');
  return caller as Caller;
}

/** @throws {Forbidden} when the caller's role or token does not reach as far as `scope`. */
export function requireScope(caller: Caller, scope: Scope): void {
  if (RANK[caller.scope] >= RANK[scope]) return;
  const who = caller.kind === 'token' ? `a token of scope "${caller.scope}"` : `the role "${caller.role}"`;
  throw new Forbidden(`${who} may not do this: it needs "${scope}"`);
}

async function callerOfToken(token: string, headers: Headers): Promise<Caller> {
  const hash = tokenHash(token);
  const now = new Date();
  const row = await database().byTokenHash(hash, (tx) => findTokenByHash(tx, hash));
  if (!row || (row.expiresAt && row.expiresAt <= now)) {
    limitInProcess(`unknown token from ${addressOf(headers)}`, UNKNOWN_TOKEN_LIMIT);
    throw new Unauthenticated(
      row ? 'this token has expired: make a new one in Settings' : 'this token is not known: it may have been withdrawn',
    );
  }
  limitInProcess(`token ${row.tokenId}`, TOKEN_LIMIT);
  const minuteAgo = new Date(now.getTime() - 60_000);
  const district = await database().inDistrict(row.districtId, async (tx) => {
    if (!row.lastUsedAt || row.lastUsedAt < minuteAgo) await touchToken(tx, row, now, minuteAgo);
    return findDistrictHead(tx, row.districtId);
  });
  if (!district) throw new Unauthenticated('this token is not known: it may have been withdrawn');
  return {
    kind: 'token',
    userId: null,
    name: row.name,
    email: null,
    districtId: row.districtId,
    role: ROLE_OF_SCOPE[row.scope],
    scope: row.scope,
    units: district.units,
    parcels: null,
    district,
  };
}

/** Districts a person belongs to, with the role in each. */
export function membershipsOf(userId: string) {
  return database().asPerson(userId, (tx) => listMemberships(tx, userId));
}

async function callerOfPerson(person: Person, cookie: (name: string) => string | undefined): Promise<Caller | null> {
  const chosen = await chosenMembership(await membershipsOf(person.userId), cookie(PREFERENCE_COOKIES.district));
  if (!chosen) return null;
  const { district, parcels } = await database().inDistrict(chosen.districtId, async (tx) => ({
    district: await findDistrictHead(tx, chosen.districtId),
    parcels: chosen.role === 'grower' ? await listGrowerParcels(tx, chosen.districtId, person.userId) : null,
  }));
  if (!district) return null;
  const units = cookie(PREFERENCE_COOKIES.units);
  return {
    kind: 'person',
    ...person,
    districtId: chosen.districtId,
    role: chosen.role,
    scope: SCOPE_OF_ROLE[chosen.role],
    units: units === 'us' || units === 'metric' ? units : district.units,
    parcels,
    district,
  };
}

/** The membership whose district has the preferred code, else the oldest. */
async function chosenMembership(memberships: Awaited<ReturnType<typeof membershipsOf>>, preferred: string | undefined) {
  if (memberships.length < 2 || !preferred) return memberships[0];
  for (const membership of memberships) {
    const head = await database().inDistrict(membership.districtId, (tx) => findDistrictHead(tx, membership.districtId));
    if (head?.code === preferred) return membership;
  }
  return memberships[0];
}

function cookieOf(headers: Headers, name: string): string | undefined {
  for (const part of headers.get('cookie')?.split(';') ?? []) {
    const at = part.indexOf('=');
    if (part.slice(0, at).trim() === name) return part.slice(at + 1).trim();
  }
  return undefined;
}
