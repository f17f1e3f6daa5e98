/** The OpenAPI 3.1 document, written from the same values that check the requests. */
import { z } from 'zod';
import { problem, unitSystem } from './contract/common.ts';
import type { Operation } from './operation.ts';
import { OPERATIONS } from './operations/all.ts';

type Json = Record<string, unknown>;

const PROBLEMS: Record<number, string> = {
  400: 'Malformed: the request cannot be read',
  401: 'Not signed in, or the token is unknown, withdrawn or expired',
  403: 'The role or the token does not reach this far',
  404: 'Not there, or owned by another district',
  409: 'The state does not allow this now',
  413: 'Too large',
  415: 'Unknown kind of content',
  422: 'Understood, but refused; `findings` names what is at fault',
  429: 'Too many requests; see Retry-After',
  500: 'A failure of ours; `instance` is the id that the log has',
};

/** The whole document. Made once; it does not change while the process lives. */
export function openApiDocument(): Json {
  document ??= makeDocument();
  return document;
}

let document: Json | undefined;

function makeDocument(): Json {
  return {
    openapi: '3.1.0',
    info: {
      title: 'Tillwater',
      version: '1',
      description:
        'Irrigation demand of a district: weather, reference ET, crop water requirement by parcel, flow by reach. ' +
        'Names carry the unit; missing is null; dates are days in the district’s time zone. Refusals are problem details (RFC 9457). ' +
        'Tables also leave as CSV: `Accept: text/csv`, or `.csv` after the path.',
      license: { name: 'Apache-2.0', identifier: 'Apache-2.0' },
    },
    servers: [{ url: '/' }],
    tags: [...new Set(OPERATIONS.map((operation) => operation.tag))].map((name) => ({ name })),
    security: [{ token: [] }, { session: [] }],
    paths: pathsOf(OPERATIONS),
    components: { schemas: componentSchemas(), securitySchemes: SECURITY },
  };
}

const SECURITY = {
  token: { type: 'http', scheme: 'bearer', description: 'A token made in Settings, scoped to read, write or administer, of one district.' },
  session: { type: 'apiKey', in: 'cookie', name: 'tillwater.session_token', description: 'Set by signing in.' },
};

const refOf = (id: string) => `#/components/schemas/${id}`;

/**
 * Every schema that has an id and that an operation uses, by its id. Not the global registry itself: the pages and the routes are bundled apart,
 * and each bundle would put its own copy of every schema there.
 */
function componentSchemas(): Json {
  const registry = z.registry<{ id?: string; description?: string }>();
  for (const [schema] of knownSchemas()) registry.add(schema, { ...z.globalRegistry.get(schema) });
  const { schemas } = z.toJSONSchema(registry, { uri: refOf, io: 'output', unrepresentable: 'any' });
  return Object.fromEntries(Object.entries(schemas).map(([id, schema]) => [id, tidied(schema)]));
}

/** A schema in place: a reference when it has an id. */
function schemaOf(schema: z.ZodType, io: 'input' | 'output' = 'output'): Json {
  const id = z.globalRegistry.get(schema)?.id;
  if (id) return { $ref: refOf(id) };
  const registry = z.registry<{ id?: string }>();
  for (const [known, meta] of knownSchemas()) registry.add(known, meta);
  registry.add(schema, { id: 'Here' });
  const { schemas } = z.toJSONSchema(registry, { uri: (name) => refOf(name), io, unrepresentable: 'any' });
  return tidied(schemas.Here);
}

/** Schemas with an id that operations use, so that a schema in place refers to them. */
function knownSchemas(): [z.ZodType, { id: string }][] {
  const found = new Map<z.ZodType, { id: string }>();
  const visit = (schema: unknown): void => {
    if (!(schema instanceof z.ZodType) || found.has(schema)) return;
    const id = z.globalRegistry.get(schema)?.id;
    if (id) found.set(schema, { id });
    if (schema instanceof z.ZodObject) Object.values(schema.shape).forEach(visit);
    if (schema instanceof z.ZodArray) visit(schema.element);
    if (schema instanceof z.ZodRecord) visit(schema.valueType);
    if (schema instanceof z.ZodUnion) schema.options.forEach(visit);
    if (schema instanceof z.ZodOptional || schema instanceof z.ZodNullable || schema instanceof z.ZodDefault) visit(schema.unwrap());
  };
  visit(problem);
  for (const operation of OPERATIONS) for (const schema of [operation.answer, operation.body]) visit(schema);
  return [...found];
}

/** Without the marks of the generator, and without bounds that only say "a safe integer". */
function tidied(schema: unknown): Json {
  return JSON.parse(
    JSON.stringify(schema, (key, value) => {
      if (key === '$schema' || key === '$id' || key === 'id') return typeof value === 'string' ? undefined : value;
      if ((key === 'minimum' || key === 'maximum') && Math.abs(value) === Number.MAX_SAFE_INTEGER) return undefined;
      return value;
    }),
  );
}

function pathsOf(operations: readonly Operation[]): Json {
  const paths: Record<string, Json> = {};
  for (const operation of operations) {
    const method = operation.method.toLowerCase();
    paths[operation.path] = { ...paths[operation.path], [method]: operationMembers(operation) };
    if (operation.table && operation.method === 'GET') paths[`${operation.path}.csv`] = { get: csvMembers(operation) };
  }
  return paths;
}

function operationMembers(operation: Operation): Json {
  return {
    operationId: operationId(operation),
    tags: [operation.tag],
    summary: operation.summary,
    description: [operation.description, scopeText(operation)].filter(Boolean).join('\n\n'),
    ...(operation.scope === 'open' ? { security: [] } : {}),
    parameters: parametersOf(operation),
    ...(operation.body ? { requestBody: bodyOf(operation.body) } : {}),
    ...(operation.form ? { requestBody: formOf(operation.form) } : {}),
    responses: { ...successOf(operation), ...problemsOf(operation) },
  };
}

function csvMembers(operation: Operation): Json {
  return {
    ...operationMembers(operation),
    operationId: `${operationId(operation)}Csv`,
    summary: `${operation.summary}, as CSV`,
    responses: { 200: { description: 'a table', content: CSV }, ...problemsOf(operation) },
  };
}

/** @example operationId({ method: 'GET', path: '/api/v1/runs/{id}/parcels' }) // 'getRunsIdParcels' */
function operationId({ method, path }: Pick<Operation, 'method' | 'path'>): string {
  const words = path
    .replace('/api/v1/', '')
    .split(/[^a-zA-Z]+/)
    .filter(Boolean);
  return method.toLowerCase() + words.map((word) => word[0].toUpperCase() + word.slice(1)).join('');
}

function scopeText({ scope }: Operation): string {
  return scope === 'open' ? '' : `Needs: ${scope}.`;
}

function parametersOf(operation: Operation): Json[] {
  const query = operation.units ? { ...operation.query, units: unitSystem.default('metric') } : (operation.query ?? {});
  return [
    ...Object.entries(operation.params ?? {}).map(([name, schema]) => parameter('path', name, schema as z.ZodType)),
    ...Object.entries(query).map(([name, schema]) => parameter('query', name, schema as z.ZodType)),
  ];
}

function parameter(place: 'path' | 'query', name: string, schema: z.ZodType): Json {
  const { description, ...rest } = schemaOf(schema, 'output');
  const required = place === 'path' || !schema.safeParse(undefined).success;
  const texts: Record<string, string> = { units: 'us: names and values in inches, acre-feet, cfs, acres, feet, °F' };
  const text = description ?? texts[name];
  return { name, in: place, required, ...(text ? { description: text } : {}), schema: rest };
}

function bodyOf(schema: z.ZodType): Json {
  return { required: true, content: { 'application/json': { schema: schemaOf(schema, 'input') } } };
}

function formOf(form: Readonly<Record<string, string>>): Json {
  const part = (name: string, description: string) =>
    name === 'file'
      ? { type: 'array', items: { type: 'string', contentMediaType: 'application/octet-stream' }, description }
      : { type: 'string', description };
  const properties = Object.fromEntries(Object.entries(form).map(([name, text]) => [name, part(name, text)]));
  const required = Object.keys(form).filter((name) => name !== 'options');
  return { required: true, content: { 'multipart/form-data': { schema: { type: 'object', properties, required } } } };
}

const CSV = { 'text/csv': { schema: { type: 'string', description: 'RFC 4180, UTF-8, one header row' } } };

function successOf(operation: Operation): Json {
  const status = operation.status ?? 200;
  if (operation.media) {
    const schema = { type: 'string', ...(operation.media.type.startsWith('application/') ? { contentEncoding: 'binary' } : {}) };
    return { [status]: { description: operation.media.holds, content: { [operation.media.type]: { schema } } } };
  }
  if (!operation.answer) return { [status]: { description: 'done; nothing more to say' } };
  const json = { 'application/json': { schema: schemaOf(operation.answer) } };
  return { [status]: { description: 'the answer', content: operation.table ? { ...json, ...CSV } : json } };
}

function problemsOf(operation: Operation): Json {
  const always = operation.scope === 'open' ? [400, 403, 429, 500] : [400, 401, 403, 429, 500];
  const statuses = [...new Set([...always, ...(operation.refusals ?? [])])].sort((a, b) => a - b);
  const content = { 'application/problem+json': { schema: schemaOf(problem) } };
  return Object.fromEntries(statuses.map((status) => [status, { description: PROBLEMS[status], content }]));
}
