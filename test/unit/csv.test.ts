import iconv from 'iconv-lite';
import { describe, expect, test } from 'vitest';
import { isoDate } from '../../lib/base/civil-date.ts';
import { openTable, readRows } from '../../lib/files/csv.ts';
import { sniffDecimalComma, sniffDelimiter } from '../../lib/files/csv-dialect.ts';
import { parseDate, sniffDateOrder } from '../../lib/files/date-cell.ts';
import { FINDING_LIMIT, FindingList } from '../../lib/files/finding-list.ts';
import { NOT_A_NUMBER, numberReader } from '../../lib/files/number-cell.ts';
import { detectEncoding } from '../../lib/files/text-encoding.ts';
import { bytesFile } from '../support/import-context.ts';

async function table(text: string | Uint8Array, plan = {}) {
  const findings = new FindingList();
  const file = bytesFile(typeof text === 'string' ? new TextEncoder().encode(text) : text);
  const head = openTable({ file, plan, recognise: (header) => /^(site|date|tmax|name)$/i.test(header.trim()) }, findings);
  const rows: { row: number; cells: readonly string[] }[] = [];
  const bad: number[] = [];
  const count = head
    ? await readRows(file, head, { each: (row) => rows.push(row), bad: ({ row }) => bad.push(row), progress: () => undefined }, findings)
    : 0;
  return { head, rows, bad, count, findings: findings.list(), fatal: findings.fatal };
}

describe('how a table is written', () => {
  test('line ends: CRLF, LF and CR alone give the same rows', async () => {
    for (const end of ['\r\n', '\n', '\r']) {
      const { rows } = await table(['site,date', 'a,1', 'b,2', ''].join(end));
      expect(rows).toEqual([
        { row: 2, cells: ['a', '1'] },
        { row: 3, cells: ['b', '2'] },
      ]);
    }
  });

  test('encodings: UTF-8 with mark, UTF-16 both ways, Windows-1252', async () => {
    for (const [encoding, options] of [
      ['utf-8', { addBOM: true }],
      ['utf-16le', { addBOM: true }],
      ['utf-16be', { addBOM: true }],
      ['utf-16le', { addBOM: false }],
      ['windows-1252', {}],
    ] as const) {
      const { head, rows } = await table(iconv.encode('site,name\n1,Añover °\n', encoding, options));
      expect(head?.header).toEqual(['site', 'name']);
      expect(rows[0].cells).toEqual(['1', 'Añover °']);
      expect(head?.encoding.name).toBe(encoding);
    }
  });

  test('a UTF-8 sequence cut by a piece of the file is not broken', async () => {
    const line = `a,${'é'.repeat(50)}\n`;
    const { rows, count } = await table(`site,name\n${line.repeat(6000)}`);
    expect(count).toBe(6000);
    expect(rows.every(({ cells }) => cells[1] === 'é'.repeat(50))).toBe(true);
    expect(detectEncoding(new TextEncoder().encode(line)).name).toBe('utf-8');
  });

  test('delimiters', () => {
    expect(sniffDelimiter('site;date;tmax\na;2024-01-01;1,5\nb;2024-01-01;2,5\n')).toBe(';');
    expect(sniffDelimiter('site\tname\na\tb, c\n')).toBe('\t');
    expect(sniffDelimiter('parcel,cut_dates\na,"2024-05-01;2024-06-01"\n')).toBe(',');
    expect(sniffDelimiter('only one column\nvalue\n')).toBeNull();
  });

  test('decimal comma', () => {
    expect(
      sniffDecimalComma([
        ['a', '12,5'],
        ['b', '13'],
      ]),
    ).toBe(true);
    expect(
      sniffDecimalComma([
        ['a', '12.5'],
        ['b', '13'],
      ]),
    ).toBe(false);
  });

  test('comments above the header, a units row under it, blank lines', async () => {
    const { head, rows } = await table('# made by hand,,\n\nsite,date,tmax\n-,,°C\n\na,2024-01-01,5\n');
    expect(head).toMatchObject({ header: ['site', 'date', 'tmax'], headerRow: 3, units: ['-', '', '°C'] });
    expect(rows).toEqual([{ row: 6, cells: ['a', '2024-01-01', '5'] }]);
  });

  test('a legend of "key: value" lines above the header is passed over', async () => {
    const { head } = await table('Latitude: 45\nmonth,year\n1,2018\nsite,date,tmax\na,2024-01-01,5\n');
    expect(head?.headerRow).toBe(4);
  });

  test('quoted cells with delimiters, quotes and line ends keep the row numbers right', async () => {
    const { rows } = await table('site,name\na,"x, ""y""\nz"\nb,w\n');
    expect(rows).toEqual([
      { row: 2, cells: ['a', 'x, "y"\nz'] },
      { row: 4, cells: ['b', 'w'] },
    ]);
  });

  test('rows with a wrong number of cells are named and left out; a trailing delimiter is no fault', async () => {
    const { rows, bad, count, findings } = await table('site,date\na,1\nb\nc,2,3\nd,4,\n');
    expect(rows.map(({ row }) => row)).toEqual([2, 5]);
    expect(bad).toEqual([3, 4]);
    expect(count).toBe(4);
    expect(findings).toMatchObject([
      { code: 'row-cell-count', row: 3, value: '1', limit: '2' },
      { code: 'row-cell-count', row: 4, value: '3' },
    ]);
  });
});

describe('tables that are refused', () => {
  const cases: [string, string | Uint8Array, string][] = [
    ['empty', '', 'empty-file'],
    ['binary', new Uint8Array([1, 2, 0, 0, 0, 5, 6, 7, 1, 1, 1]), 'binary-file'],
    ['one column of text', '53131 20190101 1610 -111.17 32.24\n53131 20190101 1615 -111.17 32.24\n', 'no-delimiter'],
    ['no header', '1,2024-01-01,5\n2,2024-01-02,6\n', 'no-header'],
    ['quote never closed', `site,name\na,"x\n${'b,c\n'.repeat(20)}`, 'unclosed-quote'],
  ];
  for (const [name, text, code] of cases) {
    test(name, async () => {
      const { findings, fatal } = await table(text);
      expect(findings[0]).toMatchObject({ severity: 'error', code });
      expect(fatal).toBe(true);
    });
  }
});

describe('cells', () => {
  test('numbers', () => {
    const point = numberReader(false, ['-99.9', 'broken']);
    expect([' 12.5 ', '-0', '1e3', '1,234.5', '.5'].map((text) => point.read(text))).toEqual([12.5, 0, 1000, 1234.5, 0.5]);
    expect(['', 'NA', 'n/a', 'NaN', 'null', '-', '-99.90', 'Broken'].map((text) => point.read(text))).toEqual(Array(8).fill(Number.NaN));
    expect(['12x', '0x10', '1 2', '12,5'].map((text) => point.read(text))).toEqual(Array(4).fill(NOT_A_NUMBER));
    const comma = numberReader(true);
    expect(['12,5', '1.234,5', '7'].map((text) => comma.read(text))).toEqual([12.5, 1234.5, 7]);
  });

  test('dates', () => {
    const read = (text: string, order: 'ymd' | 'dmy' | 'mdy' = 'ymd') => {
      const date = parseDate(text, order);
      return date && isoDate(date.day);
    };
    expect([read('2024-02-29'), read('20240229'), read('2024/2/29'), read('2024-02-29T13:30:00Z')]).toEqual(Array(4).fill('2024-02-29'));
    expect([read('29/02/2024', 'dmy'), read('02/29/2024', 'mdy'), read('29.2.2024', 'dmy'), read('29 Feb 2024')]).toEqual(
      Array(4).fill('2024-02-29'),
    );
    expect([read('2023-02-29'), read('2024-13-01'), read('31/04/2024', 'dmy'), read('yesterday'), read('0001-01-01')]).toEqual(
      Array(5).fill(null),
    );
    expect(parseDate('2024-02-29 13:30', 'ymd')?.minute).toBe(810);
  });

  test('order of day and month', () => {
    expect(sniffDateOrder(['01/02/2024', '13/02/2024'])).toBe('dmy');
    expect(sniffDateOrder(['01/02/2024', '01/13/2024'])).toBe('mdy');
    expect(sniffDateOrder(['01/02/2024'])).toBe('ambiguous');
    expect(sniffDateOrder(['13/01/2024', '01/13/2024'])).toBe('mixed');
    expect(sniffDateOrder(['2024-01-13'])).toBe('ymd');
  });
});

test('a thousand findings are kept, all are counted, and warnings are not drowned', () => {
  const findings = new FindingList();
  for (let i = 0; i < 5000; i++) findings.error({ code: 'x', message: 'bad' });
  for (let i = 0; i < 300; i++) findings.warn({ code: 'y', message: 'odd' });
  findings.note({ code: 'z', message: 'so' });
  expect(findings.totals()).toEqual({ error: 5000, warning: 300, note: 1 });
  const kept = findings.list();
  expect(kept).toHaveLength(FINDING_LIMIT);
  expect(kept.filter(({ severity }) => severity === 'warning').length).toBeGreaterThanOrEqual(200);
  expect(kept.at(-1)?.code).toBe('z');
});
