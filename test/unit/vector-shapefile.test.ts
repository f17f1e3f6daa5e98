import iconv from 'iconv-lite';
import { describe, expect, test } from 'vitest';
import { bytesFile } from '../support/import-context.ts';
import { dbfOf, readLayer, shpOf, vectorFile, zipOf } from '../support/vector-files.ts';

/** Clockwise, as shapefiles have outer rings. */
const ring = (x: number, y: number, size = 0.01) =>
  [
    [x, y],
    [x, y + size],
    [x + size, y + size],
    [x + size, y],
    [x, y],
  ] as [number, number][];

const DEGREES =
  'GEOGCS["GCS_WGS_1984",DATUM["D_WGS_1984",SPHEROID["WGS_1984",6378137.0,298.257223563]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]]';
const shp = shpOf([ring(10, 45), ring(11, 45)]);
const columns = [
  { name: 'NAME', type: 'C', length: 20 },
  { name: 'AREA', type: 'N', length: 8 },
  { name: 'SINCE', type: 'D', length: 8 },
  { name: 'WET', type: 'L', length: 1 },
];
const dbf = dbfOf(columns, [
  ['Feld 1', '    12.5', '20240131', 'T'],
  ['', '********', '        ', '?'],
]);

describe('shapefile', () => {
  test('zipped: properties by their types, missing ones null', async () => {
    const { features, understood, codes } = await readLayer(zipOf('a.zip', { 'x/a.shp': shp, 'x/a.dbf': dbf, 'x/a.prj': DEGREES }));
    expect(understood).toMatchObject({ format: 'shapefile', layer: 'a', crs: 'GCS_WGS_1984', transformation: null, featureCount: 2 });
    expect(features.map(({ properties }) => properties)).toEqual([
      { NAME: 'Feld 1', AREA: 12.5, SINCE: '2024-01-31', WET: true },
      { NAME: null, AREA: null, SINCE: null, WET: null },
    ]);
    expect(features[0].geometry).toEqual({ type: 'Polygon', coordinates: [ring(10, 45)] });
    expect(codes).toEqual([]);
  });

  test('loose parts belong together by their name; a part without its .shp is refused', async () => {
    const parts = [bytesFile(dbf, 'A.DBF'), bytesFile(shp, 'a.shp'), bytesFile(Buffer.from(DEGREES), 'a.prj')];
    const { features, fatal } = await readLayer(parts);
    expect(features).toHaveLength(2);
    expect(features[0].properties.NAME).toBe('Feld 1');
    expect(fatal).toBe(false);
    expect((await readLayer([bytesFile(dbf, 'a.dbf')])).codes).toEqual(['shapefile-incomplete']);
  });

  test('without .prj: degrees are assumed with a warning, other coordinates refused, the options decide', async () => {
    expect((await readLayer(zipOf('a.zip', { 'a.shp': shp, 'a.dbf': dbf }))).codes).toEqual(['crs-assumed']);
    const metres = zipOf('a.zip', { 'a.shp': shpOf([ring(155_000, 463_000, 100), ring(156_000, 463_000, 100)]), 'a.dbf': dbf });
    const refused = await readLayer(metres);
    expect(refused.findings[0]).toMatchObject({ code: 'no-crs', advice: expect.stringContaining('options') });
    // the origin of the grid is the tower of Amersfoort: 52° 09′ 22.178″ N, 5° 23′ 15.500″ E on Bessel, which on WGS 84 is 52.15517° N, 5.38721° E
    // (pyproj 3.4.1, EPSG:28992 to EPSG:4326: 5.387205, 52.155172)
    const { features } = await readLayer(metres, { crs: 'EPSG:28992' });
    const [x, y] = (features[0].geometry as { coordinates: number[][][] }).coordinates[0][0];
    expect(Math.abs(x - 5.387205)).toBeLessThan(2e-6);
    expect(Math.abs(y - 52.155172)).toBeLessThan(2e-6);
  });

  test('several shapefiles in one archive are its layers', async () => {
    const file = zipOf('a.zip', {
      'fields.shp': shp,
      'fields.dbf': dbf,
      'fields.prj': DEGREES,
      'soils.shp': shpOf([ring(1, 2)]),
      'soils.prj': DEGREES,
    });
    const first = await readLayer(file);
    expect(first.understood.layers?.map(({ name }) => name)).toEqual(['fields', 'soils']);
    expect(first.understood.layer).toBe('fields');
    expect(first.codes).toContain('layer-chosen');
    const second = await readLayer(file, { layer: 'soils' });
    expect(second.features).toHaveLength(1);
    expect(second.codes).toEqual(['no-attribute-table']);
  });
});

describe('lengths that are wrong', () => {
  const wrong = (change: (bytes: Uint8Array) => Uint8Array) =>
    readLayer(zipOf('a.zip', { 'a.shp': change(shp.slice()), 'a.dbf': dbf, 'a.prj': DEGREES }));

  test('cut short is refused', async () => {
    for (const length of [50, 150, shp.length - 8])
      expect((await wrong((bytes) => bytes.slice(0, length))).codes).toEqual(['shp-unreadable']);
  });

  test('a record that reaches beyond the file, and one that states more corners than it holds', async () => {
    const set = (offset: number, value: number, little: boolean) => (bytes: Uint8Array) => {
      new DataView(bytes.buffer).setInt32(offset, value, little);
      return bytes;
    };
    for (const change of [set(104, 0x0fffffff, false), set(104, 1, false), set(148, 0x7fffffff, true), set(152, -5, true)])
      expect((await wrong(change)).codes).toEqual(['shp-unreadable']);
  });

  test('bytes behind the last record are left out with a warning', async () => {
    const { codes, features } = await wrong((bytes) => new Uint8Array([...bytes, 1, 2, 3, 4, 5]));
    expect(codes).toEqual(['shp-trailing-bytes']);
    expect(features).toHaveLength(2);
  });

  test('fewer records than shapes are refused, more are a warning', async () => {
    const table = (rows: number) =>
      dbfOf(
        [columns[0]],
        Array.from({ length: rows }, () => ['x']),
      );
    const read = (rows: number) => readLayer(zipOf('a.zip', { 'a.shp': shp, 'a.dbf': table(rows), 'a.prj': DEGREES }));
    expect((await read(1)).fatal).toBe(true);
    expect((await read(3)).findings).toMatchObject([{ severity: 'warning', code: 'shapefile-counts-differ' }]);
  });

  test('a table whose header makes no sense is refused', async () => {
    const table = dbf.slice();
    table[8] = 0xff;
    table[9] = 0xff;
    expect((await readLayer(zipOf('a.zip', { 'a.shp': shp, 'a.dbf': table, 'a.prj': DEGREES }))).codes).toEqual(['dbf-unreadable']);
  });
});

/** One name in the encodings that attribute tables come in. */
const ENCODINGS: [what: string, name: string, written: string, driver: number, cpg: string | null, understood: string][] = [
  ['UTF-8 told by .cpg', 'Área', 'utf-8', 0, 'UTF-8', 'utf-8'],
  ['UTF-8 told by nothing', 'Área', 'utf-8', 0, null, 'utf-8'],
  ['UTF-8 against the header', 'Área', 'utf-8', 0x57, null, 'utf-8'],
  ['Windows-1252 told by nothing', 'Fläche', 'windows-1252', 0, null, 'windows-1252'],
  ['Windows-1251 told by nothing', 'Площ', 'windows-1251', 0, null, 'windows-1251'],
  ['Windows-1251 told by the header', 'Площ', 'windows-1251', 201, null, 'windows-1251'],
  ['code page 850 told by the header', 'Fläche', 'cp850', 2, null, 'cp850'],
  ['Windows-1250 told by .cpg', 'Výměra', 'windows-1250', 0, '1250', 'windows-1250'],
  ['ISO 8859-2 told by .cpg', 'Výměra', 'iso-8859-2', 0, 'ISO 88592', 'iso-8859-2'],
];

describe('encodings of names and texts', () => {
  for (const [what, name, written, driver, cpg, understood] of ENCODINGS) {
    test(what, async () => {
      const column = { name: iconv.encode(name, written), type: 'C', length: 30 };
      const text = iconv.encode(`${name} ${name}`, written);
      const table = dbfOf([column], [[text], [text]], driver);
      const read = await readLayer(zipOf('a.zip', { 'a.shp': shp, 'a.dbf': table, 'a.prj': DEGREES, ...(cpg ? { 'a.cpg': cpg } : {}) }));
      expect(read.understood.encoding).toBe(understood);
      expect(read.features[0].properties).toEqual({ [name]: `${name} ${name}` });
    });
  }

  test('the options decide', async () => {
    const table = dbfOf([{ name: 'N', type: 'C', length: 10 }], [[iconv.encode('ж', 'cp866')], ['x']]);
    const file = zipOf('a.zip', { 'a.shp': shp, 'a.dbf': table, 'a.prj': DEGREES });
    expect((await readLayer(file, { plan: { encoding: 'cp866' } })).features[0].properties).toEqual({ N: 'ж' });
  });

  test('names that are question marks only are told as lost', async () => {
    const table = dbfOf([{ name: '????', type: 'N', length: 4 }], [['1'], ['2']]);
    const { codes } = await readLayer(zipOf('a.zip', { 'a.shp': shp, 'a.dbf': table, 'a.prj': DEGREES }));
    expect(codes).toEqual(['texts-lost']);
  });
});

test('a real shapefile keeps its system types and areas', async () => {
  const { features } = await readLayer(vectorFile('nz-irrigated.zip'));
  expect(features).toHaveLength(8);
  expect(features[0].properties).toMatchObject({ area_ha: 7.53100042025 });
});
