import { parse } from 'csv-parse/sync';
import { describe, expect, test } from 'vitest';
import { csvBytes, csvCell, csvText } from '../../lib/files/csv-write.ts';
import { geoJsonCollection, rightHanded, tableFeatures } from '../../lib/files/geojson-write.ts';

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
    expect(new TextDecoder('utf-8', { fatal: true }).decode(csvBytes({ columns, rows }))).toBe(text);
  });
});

describe('GeoJSON', () => {
  // RFC 7946 section 3.1.6: exterior rings counter-clockwise, holes clockwise.
  const clockwise = [
    [0, 0],
    [0, 4],
    [4, 4],
    [4, 0],
    [0, 0],
  ];
  const hole = [
    [1, 1],
    [2, 1],
    [2, 2],
    [1, 2],
    [1, 1],
  ];

  test('rings turn by the right-hand rule', () => {
    expect(rightHanded({ type: 'Polygon', coordinates: [clockwise, hole] })).toEqual({
      type: 'Polygon',
      coordinates: [clockwise.toReversed(), hole.toReversed()],
    });
    const right = { type: 'MultiPolygon' as const, coordinates: [[clockwise.toReversed(), hole.toReversed()]] };
    expect(rightHanded(right)).toEqual(right);
  });

  test('properties keep the suffixed names of the table; missing is null', () => {
    const table = {
      columns: [{ key: 'parcel' }, { key: 'crop_et_mm' }],
      rows: [
        ['P1', 12.5],
        ['P2', null],
        ['P3', 1],
      ],
    };
    const shapes = new Map(['P1', 'P2'].map((code) => [code, { type: 'Point' as const, coordinates: [-115.123456789, 38] }]));
    const collection = geoJsonCollection(tableFeatures(table, shapes), { run: 'r1' });
    expect(JSON.parse(JSON.stringify(collection))).toEqual({
      type: 'FeatureCollection',
      run: 'r1',
      features: [
        {
          type: 'Feature',
          id: 'P1',
          geometry: { type: 'Point', coordinates: [-115.1234568, 38] },
          properties: { parcel: 'P1', crop_et_mm: 12.5 },
        },
        {
          type: 'Feature',
          id: 'P2',
          geometry: { type: 'Point', coordinates: [-115.1234568, 38] },
          properties: { parcel: 'P2', crop_et_mm: null },
        },
      ],
    });
    expect('crs' in collection).toBe(false);
  });
});
