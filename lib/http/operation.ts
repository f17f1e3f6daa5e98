/** What one call of the API takes and gives: the same value checks requests, shapes tables and writes the OpenAPI document. */
import type { z } from 'zod';
import type { Scope } from '../access/tokens.ts';

/** A table that can leave as CSV: one row per thing, columns in the order of the row's schema. */
export interface TableShape {
  readonly row: z.ZodObject;
  /** members of the row that are left out of the table, because they are not one value */
  readonly leaveOut?: readonly string[];
  /** rows of the table out of the answer; its `items` unless said */
  readonly rows?: (answer: never) => readonly object[];
}

export interface Operation<
  Query extends z.ZodRawShape = z.ZodRawShape,
  Body extends z.ZodType = z.ZodType,
  Params extends z.ZodRawShape = z.ZodRawShape,
> {
  readonly method: 'GET' | 'POST' | 'PATCH' | 'DELETE';
  /** with `{name}` for each parameter, as in the OpenAPI document */
  readonly path: string;
  readonly tag: string;
  readonly summary: string;
  readonly description?: string;
  /** `open` asks for no caller at all */
  readonly scope: Scope | 'open';
  readonly params?: Params;
  readonly query?: Query;
  readonly body?: Body;
  /** parts of a multipart/form-data body with what each holds; `file` may come more than once */
  readonly form?: Readonly<Record<string, string>>;
  /** most bytes a body may have; 256 KiB unless said */
  readonly bodyLimit?: number;
  /** status of success; 200 unless said */
  readonly status?: number;
  readonly answer?: z.ZodType;
  /** media type of an answer that is not JSON, and what it holds */
  readonly media?: { readonly type: string; readonly holds: string };
  readonly table?: TableShape;
  /** takes `units=us` */
  readonly units?: boolean;
  /** statuses of refusal beside 400, 401, 403, 429 and 500, which any call may give */
  readonly refusals?: readonly number[];
}

/** Keeps the types of query, body and parameters, and whether there is a table. */
export function operation<
  const Query extends z.ZodRawShape = Record<never, z.ZodType>,
  Body extends z.ZodType = z.ZodUndefined,
  const Params extends z.ZodRawShape = Record<never, z.ZodType>,
  Table extends TableShape | undefined = undefined,
>(given: Operation<Query, Body, Params> & { readonly table?: Table }): Operation<Query, Body, Params> & { readonly table: Table } {
  return given as Operation<Query, Body, Params> & { readonly table: Table };
}
