/** People of the district and API tokens: what managers look after. */
import type { Tx } from '../../../db/connect.ts';
import { deleteToken, listTokens, type TokenRow } from '../../../db/queries/api-tokens.ts';
import { listParcels } from '../../../db/queries/land-read.ts';
import { deleteMembership, listMembers, lockManagers, saveMembership } from '../../../db/queries/memberships.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { createPerson, findPersonByEmail } from '../../access/sessions.ts';
import { createToken } from '../../access/tokens.ts';
import { Conflict, type Finding, NotFound, Refused } from '../../base/errors.ts';
import type { MemberAnswer, MemberRequest, TokenAnswer, TokenRequest } from '../contract/rest.ts';

export async function answerMembers(caller: Caller): Promise<MemberAnswer[]> {
  const rows = await database().inDistrict(caller.districtId, (tx) => listMembers(tx, caller.districtId));
  return rows.map(({ userId, ...member }) => ({ user_id: userId, ...member }));
}

/**
 * Adds a person, or changes the role and parcels of a member.
 *
 * @throws {Refused} when the person is new and no name or password is given, or a parcel is not the district's. @throws {Conflict} when the last manager would step down.
 */
export async function saveMember(caller: Caller, wanted: MemberRequest): Promise<MemberAnswer> {
  const parcels = wanted.role === 'grower' ? [...new Set(wanted.parcels)] : [];
  await database().inDistrict(caller.districtId, (tx) => requireParcels(tx, caller.districtId, parcels));
  const known = await findPersonByEmail(wanted.email);
  const userId = known?.userId ?? (await createMember(wanted));
  await database().inDistrict(caller.districtId, async (tx) => {
    if (wanted.role !== 'manager') await requireAnotherManager(tx, caller.districtId, userId);
    await saveMembership(tx, caller.districtId, { userId, role: wanted.role, parcels });
  });
  const saved = (await answerMembers(caller)).find((member) => member.user_id === userId);
  if (!saved) throw new NotFound('this member was removed at the same moment');
  return saved;
}

async function requireParcels(tx: Tx, districtId: string, codes: readonly string[]): Promise<void> {
  if (codes.length === 0) return;
  const known = new Set((await listParcels(tx, { districtId, codes: [...codes] }, null, codes.length)).map((row) => row.code));
  const findings = codes
    .filter((code) => !known.has(code))
    .map((code): Finding => ({ ...UNKNOWN_PARCEL, message: `no parcel "${code}" in this district`, value: code }));
  if (findings.length === 0) return;
  const named = findings.slice(0, 3).map(({ value }) => `"${value}"`);
  const more = findings.length > 3 ? ` and ${findings.length - 3} more` : '';
  throw new Refused(`no such parcel in this district: ${named.join(', ')}${more}`, findings);
}

const UNKNOWN_PARCEL = {
  severity: 'error',
  code: 'unknown-parcel',
  column: 'parcels',
  advice: 'give the code as the list of parcels has it',
} as const;

async function createMember({ email, name, password }: MemberRequest): Promise<string> {
  if (!name || !password) throw new Refused(`nobody signs in as ${email} yet: give a name and a password too`);
  return createPerson({ email, name, password });
}

/** @throws {NotFound} @throws {Conflict} when nobody would manage the district any more. */
export async function removeMember(caller: Caller, userId: string): Promise<void> {
  await database().inDistrict(caller.districtId, async (tx) => {
    await requireAnotherManager(tx, caller.districtId, userId);
    if (!(await deleteMembership(tx, caller.districtId, userId))) throw new NotFound(`no member ${userId} in this district`);
  });
}

async function requireAnotherManager(tx: Tx, districtId: string, userId: string): Promise<void> {
  const managers = await lockManagers(tx, districtId);
  if (managers.length === 1 && managers[0] === userId) {
    throw new Conflict('this is the only manager of the district: make somebody else manager first');
  }
}

export async function answerTokens(caller: Caller): Promise<TokenAnswer[]> {
  const rows = await database().inDistrict(caller.districtId, (tx) => listTokens(tx, caller.districtId));
  return rows.map(tokenMembers);
}

function tokenMembers(row: TokenRow): TokenAnswer {
  return {
    id: row.tokenId,
    name: row.name,
    prefix: row.prefix,
    scope: row.scope,
    expires_at: row.expiresAt?.toISOString() ?? null,
    last_used_at: row.lastUsedAt?.toISOString() ?? null,
    created_at: row.createdAt.toISOString(),
  };
}

/** Makes a token; this answer is the only one that holds it. */
export async function createDistrictToken(caller: Caller, wanted: TokenRequest): Promise<TokenAnswer> {
  const { token, row } = await createToken(caller.districtId, {
    name: wanted.name,
    scope: wanted.scope,
    expiresInDays: wanted.expires_in_days,
    createdBy: caller.userId,
  });
  return { ...tokenMembers(row), token };
}

export async function withdrawToken(caller: Caller, tokenId: string): Promise<void> {
  const found = await database().inDistrict(caller.districtId, (tx) => deleteToken(tx, caller.districtId, tokenId));
  if (!found) throw new NotFound(`no token ${tokenId} in this district`);
}
