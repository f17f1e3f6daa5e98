import { parse } from 'csv-parse/sync';
import { describe, expect, test } from 'vitest';
import { csvCell, csvText } from '../../lib/files/csv-write.ts';

describe('CSV', () => {
  // RFC 4180 section 2, rules 1–7.
  test.each([
    ['plain', 'plain'],
    ['a,b', '"a,b"'],
    ['a "b"', '"a ""b"""'],
    ['a\nb', '"a\nb"'],
    ['a\r\nb', '"a\r\nb"'],
    ['', ''],
  ])('text %j is written %j', (text, written) => {
    expect(csvCell(text)).toBe(written);
  });

  test('numbers are untouched, missing is empty', () => {
    expect([-1.5, 0, 1e21, Number.NaN, Number.POSITIVE_INFINITY, null, undefined, true].map(csvCell)).toEqual([
      '-1.5',
      '0',
      '1e+21',
      '',
      '',
      '',
      '',
      'true',
    ]);
  });

  // OWASP "CSV Injection": = + - @ tab and carriage return start a formula.
  test.each(['=1+1', '+1', '-1', '@SUM(A1)', '\tx', '\rx'])('text %j cannot run as a formula', (text) => {
    expect(csvCell(text).replaceAll('"', '')).toBe(`'${text}`);
  });

  test('a reader gets back what was written', () => {
    const rows = [
      ['a,b', 'line\r\nbreak', 'say "so"', 1.25],
      ['ü – m³', '', ' space ', -3],
    ];
    const columns = ['one', 'two', 'three', 'four_mm'].map((key) => ({ key }));
    const text = csvText({ columns, rows });
    expect(parse(text)).toEqual([columns.map(({ key }) => key), ...rows.map((row) => row.map(String))]);
    expect(text.endsWith('\r\n')).toBe(true);
  });
});
