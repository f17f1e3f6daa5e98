/** Every refusal leaves as problem details (RFC 9457); a failure of ours leaves as an id that the log has. */
import { randomUUID } from 'node:crypto';
import { ZodError, type z } from 'zod';
import { log } from '../access/log.ts';
import { type Finding, Malformed, TillwaterError, TooMany } from '../base/errors.ts';
import { WrongMethod } from './wrong-method.ts';

const TITLES: Record<number, string> = {
  400: 'The request cannot be read',
  401: 'Not signed in',
  403: 'Not allowed',
  404: 'Not there',
  405: 'Not a method of this address',
  409: 'The state does not allow this now',
  413: 'Too large',
  415: 'Unknown kind of content',
  422: 'Understood, but refused',
  429: 'Too many requests',
  500: 'A failure of ours',
};

/** Kinds of problem: the stable codes, for the documentation of the API. */
export const PROBLEM_CODES: Record<string, number> = {
  malformed: 400,
  unauthenticated: 401,
  forbidden: 403,
  'not-found': 404,
  'wrong-method': 405,
  conflict: 409,
  'too-large': 413,
  'unknown-kind': 415,
  refused: 422,
  range: 422,
  tree: 422,
  'too-many': 429,
  failure: 500,
};

/** The response for anything thrown while a request was answered. */
export function problemResponse(error: unknown, request: Request): Response {
  if (error instanceof ZodError) return problemResponse(malformedFrom(error), request);
  if (!(error instanceof TillwaterError) || error.status >= 500) return failure(error, request);
  const findings = 'findings' in error ? (error.findings as readonly Finding[]) : [];
  const headers: Record<string, string> = {};
  if (error instanceof TooMany) headers['retry-after'] = String(error.retryAfterSeconds);
  if (error instanceof WrongMethod) headers.allow = error.allow.join(', ');
  if (error.status === 401) headers['www-authenticate'] = 'Bearer';
  return problem({ code: error.code, status: error.status, detail: error.message, findings }, headers);
}

function problem(
  given: { code: string; status: number; detail: string; findings?: readonly Finding[]; instance?: string },
  headers = {},
): Response {
  const body = {
    type: `/api/docs#problem-${given.code}`,
    title: TITLES[given.status] ?? 'Refused',
    status: given.status,
    detail: given.detail,
    ...(given.instance ? { instance: given.instance } : {}),
    ...(given.findings?.length ? { findings: given.findings } : {}),
  };
  return new Response(JSON.stringify(body), {
    status: given.status,
    headers: { 'content-type': 'application/problem+json', 'cache-control': 'no-store', ...headers },
  });
}

function failure(error: unknown, request: Request): Response {
  const id = randomUUID();
  log().error({ id, err: error, method: request.method, path: new URL(request.url).pathname }, 'request failed');
  const detail = `Something failed on our side. Nothing was changed by this request. Give this id to whoever runs the service: ${id}`;
  return problem({ code: 'failure', status: 500, detail, instance: `urn:uuid:${id}` });
}

/** One finding for each member at fault. */
export function malformedFrom(error: ZodError, where = 'request'): Malformed {
  const findings = error.issues.flatMap(findingsOf);
  const lines = findings.slice(0, 3).map((finding) => (finding.column ? `${finding.column}: ${finding.message}` : finding.message));
  const more = findings.length > 3 ? ` and ${findings.length - 3} more` : '';
  return new Malformed(`the ${where} cannot be read: ${lines.join('; ')}${more}`, findings);
}

/** A member that nobody knows is named itself, not the object it stands in. */
function findingsOf(issue: z.core.$ZodIssue): Finding[] {
  const code = issue.code.replaceAll('_', '-');
  const at = (path: readonly PropertyKey[]) => path.map(String).join('.');
  if (issue.code === 'unrecognized_keys') {
    return issue.keys.map((key) => ({ severity: 'error', code, message: 'not known here', column: at([...issue.path, key]) }));
  }
  const column = at(issue.path);
  return [{ severity: 'error', code, message: issue.message, ...(column ? { column } : {}) }];
}
