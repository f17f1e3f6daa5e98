/** Compares with a file kept in the repository; UPDATE_GOLDEN=1 rewrites it, a mismatch leaves `*.actual` beside it. */
import { existsSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { expect } from 'vitest';

export function expectGolden(name: string, text: string): void {
  const path = new URL(name, import.meta.url);
  const actual = new URL(`${name}.actual`, import.meta.url);
  if (process.env.UPDATE_GOLDEN === '1') writeFileSync(path, text);
  const kept = existsSync(path) ? readFileSync(path, 'utf8') : '';
  if (kept === text) rmSync(actual, { force: true });
  else writeFileSync(actual, text);
  expect(text).toBe(kept);
}

/** JSON with sorted keys and numbers to six significant digits. */
export function goldenJson(value: unknown): string {
  return `${JSON.stringify(value, sorted, 2)}\n`;
}

function sorted(_: string, value: unknown): unknown {
  if (typeof value === 'number') return Number.isFinite(value) ? Number(value.toPrecision(6)) : null;
  if (value === null || typeof value !== 'object' || Array.isArray(value)) return value;
  return Object.fromEntries(Object.entries(value).sort(([a], [b]) => (a < b ? -1 : 1)));
}
