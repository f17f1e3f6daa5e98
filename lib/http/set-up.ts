/** Who may make a district: the holder of the set-up token of an empty installation, or somebody who manages one. */
import { bearerOf, callerOfRequest, requireScope } from '../access/caller.ts';
import { addressOf, limitInProcess, UNKNOWN_TOKEN_LIMIT } from '../access/rate-limit.ts';
import { createPerson, findPersonByEmail } from '../access/sessions.ts';
import { closeSetUp, createSetupToken, isSetupToken, spendSetupToken } from '../access/tokens.ts';
import { Conflict, Forbidden, Refused } from '../base/errors.ts';
import { createDistrict } from './answers/district.ts';
import type { DistrictAnswer, DistrictRequest } from './contract/rest.ts';
import { requireSameOrigin } from './same-origin.ts';

/**
 * Makes a district for whoever sent the request.
 *
 * @throws {Forbidden} for a caller who manages nothing. @throws {Refused} when the manager's name, address and password are missing.
 */
export async function createDistrictFor(request: Request, wanted: DistrictRequest): Promise<DistrictAnswer> {
  const token = bearerOf(request.headers);
  if (token) limitInProcess(`set-up from ${addressOf(request.headers)}`, UNKNOWN_TOKEN_LIMIT);
  if (token && (await isSetupToken(token))) return setUp(token, wanted);
  const caller = await callerOfRequest(request);
  requireSameOrigin(request, true);
  requireScope(caller, 'administer');
  const managerId = wanted.manager ? await managerOf(wanted.manager) : caller.userId;
  if (!managerId) throw new Forbidden('a token belongs to no person: give the manager of the new district, or sign in');
  return createDistrict(wanted, managerId);
}

/** The token is spent first, so that it makes one district only, and given back when nothing was made; afterwards no other may be used. */
async function setUp(token: string, wanted: DistrictRequest): Promise<DistrictAnswer> {
  const { manager } = wanted;
  if (!manager) throw new Refused('the first district needs a manager: give "manager" with name, email and password');
  if (!(await spendSetupToken(token))) throw new Conflict('the set-up token was used by somebody else at the same moment');
  const made = await createDistrictWith(manager, wanted).catch(async (error) => {
    await createSetupToken(token);
    throw error;
  });
  await closeSetUp();
  return made;
}

async function createDistrictWith(manager: Manager, wanted: DistrictRequest): Promise<DistrictAnswer> {
  return createDistrict(wanted, await managerOf(manager));
}

type Manager = NonNullable<DistrictRequest['manager']>;

/** The person of this address; made when nobody has it. */
async function managerOf(manager: Manager): Promise<string> {
  return (await findPersonByEmail(manager.email))?.userId ?? createPerson(manager);
}
