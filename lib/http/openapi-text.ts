/** The OpenAPI document in words, for the page that shows it. */
import { openApiDocument } from './openapi.ts';

interface Schema {
  readonly $ref?: string;
  readonly type?: string | string[];
  readonly enum?: readonly unknown[];
  readonly const?: unknown;
  readonly anyOf?: readonly Schema[];
  readonly items?: Schema;
  readonly properties?: Readonly<Record<string, Schema>>;
  readonly default?: unknown;
  readonly description?: string;
}
interface Described {
  readonly operationId: string;
  readonly tags: readonly string[];
  readonly summary: string;
  readonly description?: string;
  readonly parameters: readonly { name: string; in: string; required: boolean; description?: string; schema: Schema }[];
  readonly requestBody?: { content: Record<string, { schema: Schema }> };
  readonly responses: Record<string, { description: string; content?: Record<string, { schema: Schema }> }>;
}

export interface OperationText {
  readonly id: string;
  readonly method: string;
  readonly path: string;
  readonly summary: string;
  readonly paragraphs: readonly string[];
  readonly parameters: readonly { name: string; place: string; type: string; text: string }[];
  readonly body: string | null;
  readonly answers: readonly { status: string; text: string; type: string | null }[];
}
export interface SchemaText {
  readonly id: string;
  readonly text: string;
  readonly members: readonly { name: string; type: string; text: string }[];
}

/** Calls by group, in the order of the document; the CSV twin of a call is not listed by itself. */
export function describeApi(): { id: string; name: string; operations: OperationText[] }[] {
  const groups = new Map<string, OperationText[]>();
  for (const [path, methods] of Object.entries(openApiDocument().paths as Record<string, Record<string, Described>>)) {
    if (path.endsWith('.csv')) continue;
    for (const [method, operation] of Object.entries(methods)) {
      const group = groups.get(operation.tags[0]) ?? [];
      group.push(operationText(method, path, operation));
      groups.set(operation.tags[0], group);
    }
  }
  return [...groups].map(([name, operations]) => ({ id: name.toLowerCase().replace(/\W+/g, '-'), name, operations }));
}

function operationText(method: string, path: string, operation: Described): OperationText {
  return {
    id: operation.operationId,
    method: method.toUpperCase(),
    path,
    summary: operation.summary,
    paragraphs: operation.description?.split('\n\n') ?? [],
    parameters: operation.parameters.map((parameter) => ({
      name: parameter.name,
      place: parameter.in,
      type: typeText(parameter.schema) + (parameter.required ? '' : defaultText(parameter.schema)),
      text: parameter.description ?? '',
    })),
    body: operation.requestBody ? contentText(operation.requestBody.content) : null,
    answers: Object.entries(operation.responses)
      .filter(([status]) => Number(status) < 500)
      .map(([status, answer]) => ({
        status,
        text: answer.description,
        type: Number(status) < 400 && answer.content ? contentText(answer.content) : null,
      })),
  };
}

function contentText(content: Record<string, { schema: Schema }>): string {
  const [type, { schema }] = Object.entries(content)[0];
  return type === 'application/json' ? typeText(schema) : type;
}

function defaultText(schema: Schema): string {
  return schema.default === undefined ? ', may be left out' : `, ${JSON.stringify(schema.default)} unless said`;
}

/** A schema's type in words. @example typeText({ type: ['string', 'null'] }) // 'string or null' */
function typeText(schema: Schema): string {
  if (schema.$ref) return schema.$ref.split('/').pop() as string;
  if (schema.enum) return schema.enum.join(' · ');
  if (schema.const !== undefined) return String(schema.const);
  if (schema.anyOf) return schema.anyOf.map(typeText).join(' or ');
  if (schema.type === 'array') return `list of ${schema.items ? typeText(schema.items) : 'anything'}`;
  if (schema.properties)
    return `{ ${Object.entries(schema.properties)
      .map(([name, inner]) => `${name}: ${typeText(inner)}`)
      .join(', ')} }`;
  return [schema.type ?? 'anything'].flat().join(' or ');
}

/** Shapes with names and members. */
export function describeSchemas(): SchemaText[] {
  const { schemas } = openApiDocument().components as { schemas: Record<string, Schema> };
  return Object.entries(schemas)
    .sort(([a], [b]) => a.localeCompare(b))
    .map(([id, schema]) => ({
      id,
      text: schema.description ?? '',
      members: Object.entries(schema.properties ?? {}).map(([name, member]) => ({
        name,
        type: typeText(member),
        text: member.description ?? '',
      })),
    }));
}
