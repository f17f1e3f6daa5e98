/** People, their passwords and their sessions. Sessions live in the database; the browser holds a signed cookie that names one. */
import { hash, verify } from '@node-rs/argon2';
import { betterAuth } from 'better-auth';
import { drizzleAdapter } from 'better-auth/adapters/drizzle';
import * as schema from '../../db/schema/auth.ts';
import { Conflict, Refused } from '../base/errors.ts';
import { database } from './database.ts';
import { environment } from './environment.ts';
import { log } from './log.ts';

/** Source: OWASP Password Storage Cheat Sheet, argon2id with 19 MiB, two passes, one lane. */
const ARGON2 = { memoryCost: 19456, timeCost: 2, parallelism: 1 };
const PASSWORD_LENGTH = { least: 10, most: 200 } as const;
const SESSION_SECONDS = 14 * 86400;

export interface Person {
  readonly userId: string;
  readonly name: string;
  readonly email: string;
}

function makeAuth(handle: ReturnType<typeof database>['outside'], secure: boolean) {
  const { TILLWATER_SECRET, TILLWATER_URL } = environment();
  if (!TILLWATER_SECRET)
    throw new Error('TILLWATER_SECRET is not set: start through `npm start`, or set it to at least 32 random characters.');
  return betterAuth({
    appName: 'Tillwater',
    secret: TILLWATER_SECRET,
    baseURL: TILLWATER_URL,
    basePath: '/api/auth',
    database: drizzleAdapter(handle, { provider: 'pg', schema }),
    emailAndPassword: {
      enabled: true,
      disableSignUp: true,
      minPasswordLength: PASSWORD_LENGTH.least,
      maxPasswordLength: PASSWORD_LENGTH.most,
      password: { hash: (password) => hash(password, ARGON2), verify: ({ hash: stored, password }) => verify(stored, password) },
    },
    session: { expiresIn: SESSION_SECONDS, updateAge: 86400 },
    rateLimit: { enabled: true, storage: 'database', window: 60, max: 120 },
    trustedOrigins: (request) => (request ? [originOf(request)] : []),
    advanced: {
      cookiePrefix: 'tillwater',
      useSecureCookies: secure,
      defaultCookieAttributes: { httpOnly: true, sameSite: 'lax', secure },
      ipAddress: { ipAddressHeaders: ['x-forwarded-for'] },
    },
    // Signing in goes through POST /api/v1/sign-in, which counts tries by person: a network address can be made up.
    disabledPaths: ['/sign-in/email', '/sign-up/email'],
    telemetry: { enabled: false },
    logger: { level: 'error', log: (level, message) => log().warn({ part: 'auth', level }, message) },
  });
}

type Auth = ReturnType<typeof makeAuth>;
const held = globalThis as unknown as { tillwaterAuth?: { handle: unknown; plain: Auth; secure: Auth } };

function instances() {
  const handle = database().outside;
  if (held.tillwaterAuth?.handle !== handle)
    held.tillwaterAuth = { handle, plain: makeAuth(handle, false), secure: makeAuth(handle, true) };
  return held.tillwaterAuth;
}

/** The instance that fits the way the reader came: cookies are `Secure` under https, and only there. */
function authFor(headers: Headers): Auth {
  return isSecure(headers) ? instances().secure : instances().plain;
}

/** True when the reader's own connection is https, here or at a proxy that ends TLS. */
export function isSecure(headers: Headers): boolean {
  const forwarded = headers.get('x-forwarded-proto')?.split(',')[0].trim();
  return forwarded ? forwarded === 'https' : (environment().TILLWATER_URL ?? '').startsWith('https:');
}

/** The origin under which the reader sees this service. */
export function originOf(request: Request): string {
  const host = request.headers.get('host') ?? new URL(request.url).host;
  return `${isSecure(request.headers) ? 'https' : 'http'}://${host}`;
}

/** Hands a request under /api/auth to the session library. */
export function handleAuthRequest(request: Request): Promise<Response> {
  return authFor(request.headers).handler(request);
}

/** The person signed in by the cookie of these headers, or null. */
export async function findSignedIn(headers: Headers): Promise<Person | null> {
  if (!headers.get('cookie')?.includes('tillwater.session_token')) return null;
  const found = await authFor(headers).api.getSession({ headers });
  return found ? { userId: found.user.id, name: found.user.name, email: found.user.email } : null;
}

/** Opens a session. Answers the cookies to set, or null when the address or the password is wrong: the two are not told apart. */
export async function signIn(headers: Headers, given: { email: string; password: string }): Promise<string[] | null> {
  const response = await authFor(headers).api.signInEmail({ body: given, headers, asResponse: true });
  return response.ok ? response.headers.getSetCookie() : null;
}

/** Ends the session of these headers, when there is one. Answers the cookies that remove it. */
export async function signOut(headers: Headers): Promise<string[]> {
  const response = await authFor(headers).api.signOut({ headers, asResponse: true });
  return response.headers.getSetCookie();
}

/**
 * Makes a person who can sign in.
 *
 * @returns the person's id
 * @throws {Conflict} when the address is taken. @throws {Refused} when the password is too short or too long.
 */
export async function createPerson(given: { name: string; email: string; password: string }): Promise<string> {
  if (given.password.length < PASSWORD_LENGTH.least || given.password.length > PASSWORD_LENGTH.most) {
    throw new Refused(
      `the password must have ${PASSWORD_LENGTH.least} to ${PASSWORD_LENGTH.most} characters; it has ${given.password.length}`,
    );
  }
  const context = await instances().plain.$context;
  const email = given.email.trim().toLowerCase();
  if (await context.internalAdapter.findUserByEmail(email)) throw new Conflict(`somebody already signs in as ${email}`);
  const person = await context.internalAdapter.createUser({ name: given.name, email, emailVerified: true }, { method: 'email-password' });
  const password = await context.password.hash(given.password);
  await context.internalAdapter.linkAccount({ userId: person.id, providerId: 'credential', accountId: person.id, password });
  return person.id;
}

/** Id and names of the person with this address, or null. */
export async function findPersonByEmail(email: string): Promise<Person | null> {
  const context = await instances().plain.$context;
  const found = await context.internalAdapter.findUserByEmail(email.trim().toLowerCase());
  return found ? { userId: found.user.id, name: found.user.name, email: found.user.email } : null;
}
