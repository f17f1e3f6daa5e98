/** One spelling per unit, one word per thing, and every docstring example true. */
import { pathToFileURL } from 'node:url';
import { describe, expect, it } from 'vitest';
import { sourceFiles } from '../support/sources.ts';

const files = sourceFiles(['lib', 'db', 'app']);
const FORBIDDEN_SPELLINGS = [/\bW\/m2\b/, /\bW m-2\b/, /\bMJ\/m2\/d(ay)?\b/, /\bMJ m-2/, /\bm\^3/, /\bmm\/day\b/, /\bdegC\b/];
const FORBIDDEN_WORDS = /(^|\/)(utils?|helpers?|misc|manager|common-stuff)\.tsx?$/;

describe('vocabulary', () => {
  it('spells units one way in the numeric rooms', () => {
    const rooms = files.filter((file) => /^lib\/(base|energy|crop|season|canal|weather)\//.test(file.path));
    const found = rooms.flatMap((file) =>
      FORBIDDEN_SPELLINGS.filter((spelling) => spelling.test(file.text)).map((s) => `${file.path}: ${s.source}`),
    );
    expect(found).toEqual([]);
  });

  it('has no file that could hold anything', () => {
    expect(files.map((file) => file.path).filter((path) => FORBIDDEN_WORDS.test(path))).toEqual([]);
  });
});

const EXAMPLE = /@example\s+([A-Za-z0-9_]+\(.*\)(?:\.[A-Za-z0-9_.()]+)?)\s+\/\/\s+(.+?)\s*(?:\*\/)?$/gm;

describe('docstring examples', () => {
  const numeric = files.filter(
    (file) => /^lib\/(base|geo|weather|energy|crop|season|canal|report)\//.test(file.path) && EXAMPLE.test(file.text),
  );

  it.each(numeric.map((file) => file.path))('of %s hold', async (path) => {
    const module = (await import(pathToFileURL(path).href)) as Record<string, unknown>;
    const text = files.find((file) => file.path === path)?.text ?? '';
    for (const [, call, promised] of text.matchAll(EXAMPLE)) {
      const names = Object.keys(module);
      const actual = new Function(...names, `return ${call};`)(...names.map((name) => module[name]));
      const expected = new Function(`return ${promised};`)();
      if (typeof expected === 'number' && Number.isFinite(expected)) {
        // printed digits say how close: an example ends where its last digit is rounded
        const digits = String(promised).split('.')[1]?.length ?? 0;
        expect(actual, `${call} in ${path}`).toBeCloseTo(expected, digits);
      } else {
        expect(actual, `${call} in ${path}`).toEqual(expected);
      }
    }
  });
});
