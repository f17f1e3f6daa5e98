/** Rows of an answer as CSV. */
import type { UnitSystem } from '../base/units.ts';
import { csvText } from '../files/csv-write.ts';
import { nameIn, valueIn } from './border-units.ts';
import type { TableShape } from './operation.ts';

type Row = Record<string, unknown>;

/** Columns of a table in the order of its schema. */
function columnsOf(shape: TableShape): string[] {
  return Object.keys(shape.row.shape).filter((name) => !shape.leaveOut?.includes(name));
}

/** The whole table at once. */
export function csvOf(shape: TableShape, rows: readonly Row[], units: UnitSystem): string {
  const columns = columnsOf(shape);
  return csvText({
    columns: columns.map((name) => ({ key: nameIn(units, name) })),
    rows: rows.map((row) => columns.map((name) => cell(valueIn(units, name, row[name])))),
  });
}

/** A list becomes words in one cell; a missing value an empty cell. */
function cell(value: unknown): string | number | null {
  if (value === null || value === undefined) return null;
  if (typeof value === 'number' || typeof value === 'string') return value;
  if (Array.isArray(value)) return value.join(' ');
  return typeof value === 'boolean' ? String(value) : JSON.stringify(value);
}

export function csvResponse(body: string | ReadableStream<Uint8Array>, name: string, headers: Record<string, string> = {}): Response {
  return new Response(body, {
    headers: {
      'content-type': 'text/csv; charset=utf-8; header=present',
      'content-disposition': `attachment; filename="${name}.csv"`,
      'cache-control': 'private, no-cache',
      ...headers,
    },
  });
}

/** A table of any length: pages are asked for as the reader takes them, and one page at a time is held. */
export function csvStream(shape: TableShape, pages: AsyncIterator<readonly Row[]>, units: UnitSystem): ReadableStream<Uint8Array> {
  const encoder = new TextEncoder();
  let first = true;
  return new ReadableStream({
    async pull(controller) {
      const { value, done } = await pages.next();
      if (done) {
        if (first) controller.enqueue(encoder.encode(csvOf(shape, [], units)));
        return controller.close();
      }
      const text = csvOf(shape, value, units);
      controller.enqueue(encoder.encode(first ? text : text.slice(text.indexOf('\n') + 1)));
      first = false;
    },
    async cancel() {
      await pages.return?.();
    },
  });
}

/** Asks for the first page now, so that a refusal can still become a refusal. */
export async function begun<T>(pages: AsyncGenerator<T>): Promise<AsyncGenerator<T>> {
  const first = await pages.next();
  return (async function* replay() {
    if (first.done) return;
    yield first.value;
    yield* pages;
  })();
}
