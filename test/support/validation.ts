/**
 * Checks against something outside the project that the reader of the Methods page sees too: each is asserted here and kept, with its figure, in
 * `lib/report/validation/<file>.json`. A figure that moves fails the test; UPDATE_GOLDEN=1 writes the files anew.
 */
import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { basename } from 'node:path';
import { afterAll, expect } from 'vitest';
import type { ValidationFile, ValidationRow } from '../../lib/report/validation.ts';

type Provenance = ValidationRow['provenance'];

interface Recorder {
  /** within `tolerance` of the value outside; both ends included */
  held(computed: number, expected: number, tolerance: number, more?: { unit?: string; provenance?: Provenance; what?: string }): void;
  /** a figure with a bar on one side: a correlation, a bias; `expected` says the bar in words */
  figure(what: string, computed: number, bar: { text: string; met: boolean; unit?: string }): void;
}

/**
 * The recorder of a test file.
 *
 * @param url `import.meta.url` of the test file
 * @param about title and source as the reader sees them, and where the values come from unless a row says otherwise
 */
export function validation(url: string, about: { title: string; source: string; provenance?: Provenance }): Recorder {
  const rows: ValidationRow[] = [];
  const name = basename(url).replace(/\.test\.tsx?$/, '');
  const usual = about.provenance ?? 'printed';
  afterAll(() => {
    keep(name, { title: about.title, source: about.source, rows });
  });
  return {
    held(computed, expected, tolerance, { unit = '', provenance = usual, what } = {}) {
      const row = what ?? nameOfTest();
      expect(Math.abs(computed - expected), `${row}: ${computed} against ${expected}`).toBeLessThanOrEqual(tolerance + 1e-12);
      rows.push({ what: row, expected: short(expected), computed: short(computed), tolerance: short(tolerance), unit, provenance });
    },
    figure(what, computed, { text, met, unit = '' }) {
      expect(met, `${what}: ${computed}, ${text}`).toBe(true);
      rows.push({ what, expected: text, computed: short(computed), tolerance: null, unit, provenance: usual });
    },
  };
}

/** Words of the describes and the test around the check, without the file. */
function nameOfTest(): string {
  return (expect.getState().currentTestName ?? '').split(' > ').join(' · ');
}

/** Six significant digits: enough to see a change, few enough to be the same on every machine; what is left of a difference that is zero is zero. */
function short(value: number): number {
  return Math.abs(value) < 1e-11 ? 0 : Number(value.toPrecision(6));
}

function keep(name: string, file: ValidationFile): void {
  const folder = new URL('../../lib/report/validation/', import.meta.url);
  const path = new URL(`${name}.json`, folder);
  const text = `${JSON.stringify(file, null, 2)}\n`;
  if (process.env.UPDATE_GOLDEN === '1') {
    mkdirSync(folder, { recursive: true });
    writeFileSync(path, text);
  }
  const kept = existsSync(path) ? (JSON.parse(readFileSync(path, 'utf8')) as ValidationFile) : null;
  expect(kept, `${name}.json is not kept yet: run npm run test:golden:update`).not.toBeNull();
  if (isPartial()) {
    for (const row of file.rows) expect(kept?.rows, `kept in ${name}.json`).toContainEqual(row);
    return;
  }
  expect(file, `differs from what is kept in ${name}.json; if it should, run npm run test:golden:update and say why`).toEqual(kept);
}

/** Only some tests of the file were asked for by name. */
function isPartial(): boolean {
  const worker = (globalThis as { __vitest_worker__?: { config?: { testNamePattern?: unknown } } }).__vitest_worker__;
  return Boolean(worker?.config?.testNamePattern);
}
