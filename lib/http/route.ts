/** From a request to a response: parse, authorise, one answer, respond. Route files hold nothing but the answer. */
import { z } from 'zod';
import { type Caller, callerOfRequest, requireScope } from '../access/caller.ts';
import { Malformed, NotFound } from '../base/errors.ts';
import type { UnitSystem } from '../base/units.ts';
import { answerIn } from './border-units.ts';
import { unitSystem } from './contract/common.ts';
import { countAnswer } from './metrics.ts';
import type { Operation, TableShape } from './operation.ts';
import { malformedFrom, problemResponse } from './problem.ts';
import { readJson } from './read-body.ts';
import { requireSameOrigin } from './same-origin.ts';
import { isStorable, requireStorable } from './storable-text.ts';
import { csvOf, csvResponse } from './table.ts';

type Of<S> = S extends z.ZodRawShape ? z.infer<z.ZodObject<S>> : Record<never, never>;

interface Asked<Q extends z.ZodRawShape, B extends z.ZodType, P extends z.ZodRawShape, C> {
  readonly request: Request;
  readonly caller: C;
  readonly params: Of<P>;
  readonly query: Of<Q>;
  readonly body: z.infer<B>;
  readonly units: UnitSystem;
  /** the caller wants a table: every row, unless `limit` says otherwise */
  readonly csv: boolean;
}

/** A route for callers: answers with a value of the operation's answer schema, or a Response of its own making. */
export function route<Q extends z.ZodRawShape, B extends z.ZodType, P extends z.ZodRawShape>(
  operation: Operation<Q, B, P>,
  answer: (asked: Asked<Q, B, P, Caller>) => Promise<unknown>,
): (request: Request) => Promise<Response> {
  return serve(operation, async (request) => {
    const caller = await callerOfRequest(request);
    if (caller.kind === 'person') requireSameOrigin(request, true);
    requireScope(caller, operation.scope as Caller['scope']);
    return respond(operation, await asked(operation, request, caller), answer);
  });
}

/** A route that anybody may call. */
export function openRoute<Q extends z.ZodRawShape, B extends z.ZodType, P extends z.ZodRawShape>(
  operation: Operation<Q, B, P>,
  answer: (asked: Asked<Q, B, P, null>) => Promise<unknown>,
): (request: Request) => Promise<Response> {
  return serve(operation, async (request) => {
    requireSameOrigin(request, false);
    return respond(operation, await asked(operation, request, null), answer);
  });
}

function serve(operation: { method: string; path: string }, work: (request: Request) => Promise<Response>) {
  return async (request: Request): Promise<Response> => {
    const began = performance.now();
    const response = await work(request).catch((error) => problemResponse(error, request));
    countAnswer(operation, response.status, (performance.now() - began) / 1000);
    return response;
  };
}

async function asked<Q extends z.ZodRawShape, B extends z.ZodType, P extends z.ZodRawShape, C>(
  operation: Operation<Q, B, P>,
  request: Request,
  caller: C,
): Promise<Asked<Q, B, P, C>> {
  const url = new URL(request.url);
  const params = readParams(operation, url.pathname);
  const { units, ...query } = readQuery(operation, url.searchParams);
  const body = operation.body ? await readJson(request, operation.body, operation.bodyLimit) : undefined;
  const csv = operation.table !== undefined && (url.pathname.endsWith('.csv') || prefersCsv(request.headers.get('accept') ?? ''));
  return { request, caller, params, query, body, units, csv } as Asked<Q, B, P, C>;
}

async function respond<Q extends z.ZodRawShape, B extends z.ZodType, P extends z.ZodRawShape, C>(
  operation: Operation<Q, B, P>,
  given: Asked<Q, B, P, C>,
  answer: (asked: Asked<Q, B, P, C>) => Promise<unknown>,
): Promise<Response> {
  const made = await answer(given);
  if (made instanceof Response) return made;
  if (made === undefined) return new Response(null, { status: 204 });
  const headers = { vary: 'Accept, Authorization, Cookie' };
  if (given.csv && operation.table) {
    return csvResponse(csvOf(operation.table, rowsOf(operation.table, made), given.units), fileNameOf(operation.path), headers);
  }
  return Response.json(answerIn(given.units, made), {
    status: operation.status ?? 200,
    headers: { 'cache-control': 'private, no-cache', ...headers },
  });
}

function rowsOf(table: TableShape, answer: unknown): Record<string, unknown>[] {
  const rows = table.rows ? table.rows(answer as never) : (answer as { items: object[] }).items;
  return rows as Record<string, unknown>[];
}

function fileNameOf(path: string): string {
  return (
    path
      .split('/')
      .filter((part) => part && !part.startsWith('{'))
      .slice(2)
      .join('-') || 'table'
  );
}

function prefersCsv(accept: string): boolean {
  const csv = accept.indexOf('text/csv');
  const json = accept.indexOf('application/json');
  return csv >= 0 && (json < 0 || csv < json);
}

/** Parameters in the path; what does not fit its schema names nothing that exists. */
function readParams(operation: Operation, pathname: string): Record<string, unknown> {
  const found = pathPattern(operation).exec(pathname)?.groups ?? {};
  const values = Object.fromEntries(Object.entries(found).map(([name, value]) => [name, decoded(value)]));
  const result = z.object(operation.params ?? {}).safeParse(values);
  const storable = Object.values(values).every(isStorable);
  if (!result.success || !storable) throw new NotFound(`there is nothing at ${pathname}`);
  return result.data;
}

const patterns = new Map<Operation, RegExp>();

/** Methods of an address of the API; none where there is nothing. */
export function methodsAt(operations: readonly Operation[], pathname: string): string[] {
  return operations.filter((operation) => pathPattern(operation).test(pathname)).map((operation) => operation.method);
}

/** The path as a pattern; `.csv` may follow where the answer is a table, and belongs to the last parameter where it is not. */
function pathPattern(operation: Operation): RegExp {
  let pattern = patterns.get(operation);
  if (!pattern) {
    const source = operation.path.replace(/[.]/g, '\\.').replace(/\{(\w+)\}/g, '(?<$1>[^/]+?)');
    pattern = new RegExp(`^${source}${operation.table ? '(\\.csv)?' : ''}/?$`);
    patterns.set(operation, pattern);
  }
  return pattern;
}

function decoded(text: string): string {
  try {
    return decodeURIComponent(text);
  } catch (cause) {
    throw new Malformed(`"${text}" in the address is not percent-encoded UTF-8`, [], { cause });
  }
}

function readQuery(operation: Operation, given: URLSearchParams): Record<string, unknown> & { units: UnitSystem } {
  const twice = [...given.keys()].find((name) => given.getAll(name).length > 1);
  if (twice) throw new Malformed(`the parameter "${twice}" is given more than once`);
  requireStorable(Object.fromEntries(given), 'query');
  const units = operation.units ? { units: unitSystem.default('metric') } : {};
  const result = z.strictObject({ ...operation.query, ...units }).safeParse(Object.fromEntries(given));
  if (!result.success) throw malformedFrom(result.error, 'query');
  return { units: 'metric', ...(result.data as Record<string, unknown>) };
}
