/** Cursors: opaque to the caller, a small JSON array inside. */
import { z } from 'zod';
import { Malformed } from '../base/errors.ts';

/** Query members of a list that pages. */
export function pageQuery(usual: number, most: number) {
  return {
    limit: z.coerce
      .number()
      .int()
      .min(1)
      .max(most)
      .optional()
      .meta({ description: `rows in a page, at most ${most}; ${usual} unless said, or every row of a CSV` }),
    cursor: z.string().max(200).optional().meta({ description: '`next_cursor` of the page before' }),
  };
}

export function writeCursor(...place: readonly (string | number)[]): string {
  return Buffer.from(JSON.stringify(place)).toString('base64url');
}

/** @throws {Malformed} when the cursor is not one of ours. */
export function readCursor<T extends z.ZodType>(cursor: string | undefined, shape: T): z.infer<T> | null {
  if (!cursor) return null;
  try {
    return shape.parse(JSON.parse(Buffer.from(cursor, 'base64url').toString('utf8')));
  } catch (cause) {
    throw new Malformed('the cursor is not one that this list gave out: begin again without it', [], { cause });
  }
}

/** Rows to read: what was asked for, else the usual number, else every row of a table. */
export function pageLimit(query: { limit?: number }, csv: boolean, usual: number): number {
  return query.limit ?? (csv ? Number.MAX_SAFE_INTEGER : usual);
}
