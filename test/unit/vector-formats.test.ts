import { describe, expect, test } from 'vitest';
import { nestedGeometry } from '../../lib/files/geoparquet-nested.ts';
import { readImport } from '../../lib/files/read-import.ts';
import { geoPackage, polygonBlob } from '../support/geopackage-file.ts';
import { feature, featureFile, importContext, square, textFile } from '../support/import-context.ts';
import { readLayer, vectorFile, zipOf } from '../support/vector-files.ts';

async function parcels(name: string, codeColumn?: string) {
  const reading = await readImport('parcels', [vectorFile(name)], { codeColumn }, importContext());
  if (reading.staged.kind !== 'parcels') throw new Error('not parcels');
  const parcels = reading.staged.parcels.map(({ code, area, geometry, longitude }) => ({ code, area, geometry, longitude }));
  return parcels.sort((a, b) => a.code.localeCompare(b.code));
}

describe('one content in two formats gives one result', () => {
  test('GeoJSON and GeoParquet', async () => {
    const [json, parquet] = [await parcels('de-fields.geojson'), await parcels('de-fields.parquet')];
    expect(parquet).toEqual(json);
    expect(json.map(({ code }) => code)).toEqual(['12324', '2713']);
  });

  test('Shapefile and FlatGeobuf', async () => {
    const [shp, fgb] = [await parcels('br-fields.zip', 'id'), await parcels('br-fields.fgb', 'id')];
    expect(fgb).toEqual(shp);
    expect(shp).toHaveLength(6);
  });

  test('GeoParquet takes the values that hold for the whole collection', async () => {
    const { features } = await readLayer(vectorFile('de-fields.parquet'));
    expect(features[0].properties).toMatchObject({ 'crop:code': 'A', flik: 'DENWLI0542130247', 'metrics:area': 16311 });
    expect(features[0].properties).not.toHaveProperty('bbox');
  });
});

describe('understood', () => {
  const CASES: [file: string, format: string, layer: string, crs: string, transformation: RegExp | null][] = [
    ['nl-parcels.gpkg', 'geopackage', 'brp_gewas', 'EPSG:28992 Amersfoort / RD New', /seven parameters.*1 m/],
    [
      'nz-irrigated.zip',
      'shapefile',
      'irrigated-land-area-raw-2020-update',
      'NZGD_2000_New_Zealand_Transverse_Mercator',
      /taken as WGS 84.*1 m/,
    ],
    ['it-parcels.parquet', 'geoparquet', 'it-parcels', 'EPSG:3035 ETRS89-extended / LAEA Europe', /taken as WGS 84/],
    ['br-fields.fgb', 'flatgeobuf', 'br-fields', 'EPSG:4326 WGS 84', null],
    ['de-fields.geojson', 'geojson', 'de-fields', 'OGC:CRS84', null],
  ];
  for (const [file, format, layer, crs, transformation] of CASES) {
    test(file, async () => {
      const { understood } = await readImport('parcels', [vectorFile(file)], {}, importContext());
      expect(understood).toMatchObject({ format, layer, crs });
      if (transformation) expect(understood.transformation).toMatch(transformation);
      else expect(understood.transformation).toBeNull();
    });
  }
});

const ring = square(5, 52);

describe('GeoPackage', () => {
  test('the first layer with features of a wanted type is read, and said', async () => {
    const file = geoPackage([
      { name: 'empty', type: 'POLYGON', rows: [] },
      { name: 'gates', type: 'POINT', rows: [null] },
      { name: 'parcel "2024"', type: 'POLYGON', rows: [polygonBlob(ring)] },
    ]);
    const { understood, codes, features } = await readLayer(file, {}, ['Polygon', 'MultiPolygon']);
    expect(understood.layer).toBe('parcel "2024"');
    expect(understood.layers).toEqual([
      { name: 'empty', featureCount: 0, geometry: 'POLYGON' },
      { name: 'gates', featureCount: 1, geometry: 'POINT' },
      { name: 'parcel "2024"', featureCount: 1, geometry: 'POLYGON' },
    ]);
    expect(codes).toContain('layer-chosen');
    expect(features[0]).toMatchObject({ properties: { fid: 1, label: 'row 1' }, geometry: { type: 'Polygon', coordinates: [ring] } });
  });

  test('the layer of the options is read; one that is not there is refused with the list', async () => {
    const file = geoPackage([
      { name: 'a', type: 'POLYGON', rows: [polygonBlob(ring)] },
      { name: 'b', type: 'POLYGON', rows: [polygonBlob(ring), polygonBlob(ring)] },
    ]);
    const chosen = await readLayer(file, { layer: 'b' });
    expect(chosen.features).toHaveLength(2);
    expect(chosen.codes).not.toContain('layer-chosen');
    const missing = await readLayer(file, { layer: 'c' });
    expect(missing.findings[0]).toMatchObject({ code: 'unknown-layer', limit: 'a, b' });
    expect(missing.fatal).toBe(true);
  });

  test('envelopes, byte orders, heights, empty and missing geometries', async () => {
    const rows = [
      polygonBlob(ring, { envelope: true }),
      polygonBlob(ring, { big: true }),
      polygonBlob(ring, { heights: true }),
      polygonBlob([], { empty: true }),
      null,
      Uint8Array.of(1, 2, 3),
      polygonBlob(ring).subarray(0, 60),
    ];
    const { features, findings } = await readLayer(geoPackage([{ name: 'a', type: 'POLYGON', rows }]));
    expect(features.map(({ geometry }) => geometry !== null)).toEqual([true, true, true, false, false, false, false]);
    for (const { geometry } of features.slice(0, 3)) expect(geometry).toEqual({ type: 'Polygon', coordinates: [ring] });
    expect(findings.filter(({ severity }) => severity === 'error').map(({ code, row }) => [code, row])).toEqual([
      ['no-geometry', 4],
      ['no-geometry', 5],
      ['bad-geometry', 6],
      ['bad-geometry', 7],
    ]);
  });

  test('a view is a layer', async () => {
    const file = geoPackage(
      [{ name: 'a', type: 'POLYGON', rows: [polygonBlob(ring), polygonBlob(ring)] }],
      [
        'CREATE VIEW half AS SELECT * FROM a WHERE fid = 2',
        "INSERT INTO gpkg_contents VALUES ('half', 'features', NULL, NULL, NULL, NULL, 4326)",
        "INSERT INTO gpkg_geometry_columns VALUES ('half', 'shape', 'POLYGON', 4326, 0, 0)",
      ],
    );
    expect((await readLayer(file, { layer: 'half' })).features).toHaveLength(1);
  });

  test('coordinates without a system are taken as degrees, with a warning; each that is none is refused', async () => {
    const { codes, features } = await readLayer(
      geoPackage([{ name: 'a', type: 'POLYGON', srs: -1, rows: [polygonBlob(ring), polygonBlob(square(155000, 463000))] }]),
    );
    expect(codes).toContain('crs-assumed');
    expect(features.map(({ geometry }) => geometry !== null)).toEqual([true, false]);
  });

  test('cut short, or another database, is refused', async () => {
    const whole = vectorFile('nl-parcels.gpkg').bytes;
    const cut = await readLayer({ name: 'cut.gpkg', bytes: whole.slice(0, 30_000) });
    expect(cut.codes).toEqual(['geopackage-unreadable']);
    expect(cut.features).toEqual([]);
    const other = await readLayer(geoPackage([], ['DROP TABLE gpkg_contents']));
    expect(other.codes).toEqual(['not-a-geopackage']);
  });
});

describe('FlatGeobuf and GeoParquet that are damaged', () => {
  const CUTS: [file: string, share: number, code: string][] = [
    ['br-fields.fgb', 0.02, 'flatgeobuf-unreadable'],
    ['it-parcels.parquet', 0.5, 'geoparquet-unreadable'],
    ['de-fields.parquet', 0.1, 'geoparquet-unreadable'],
  ];
  for (const [name, share, code] of CUTS) {
    test(`${name} cut to ${share * 100} %`, async () => {
      const { bytes } = vectorFile(name);
      const { codes, features } = await readLayer({ name, bytes: bytes.slice(0, bytes.length * share) });
      expect(codes).toEqual([code]);
      expect(features).toEqual([]);
    });
  }

  test('a FlatGeobuf cut in its features gives none of them', async () => {
    const { bytes } = vectorFile('br-fields.fgb');
    const { fatal, features } = await readLayer({ name: 'cut.fgb', bytes: bytes.slice(0, bytes.length - 500) });
    expect(fatal).toBe(true);
    expect(features).toEqual([]);
  });

  test('an older FlatGeobuf is refused by its version', async () => {
    const bytes = vectorFile('br-fields.fgb').bytes.slice();
    bytes[3] = 2;
    expect((await readLayer({ name: 'old.fgb', bytes })).findings[0].message).toContain('version 2');
  });
});

const placemark = (name: string, inner: string) => `<Placemark id="p-${name}"><name>${name}</name>${inner}</Placemark>`;
const outline = (x: number) =>
  `<Polygon><outerBoundaryIs><LinearRing><coordinates>${square(x, 45)
    .map((position) => [...position, 12].join(','))
    .join(' ')}</coordinates></LinearRing></outerBoundaryIs></Polygon>`;
const kml = (inner: string, head = '') =>
  `<?xml version="1.0" encoding="UTF-8"?>${head}<kml xmlns="http://www.opengis.net/kml/2.2"><Document>${inner}</Document></kml>`;

describe('KML', () => {
  test('folders are layers, extended data properties, styles no properties', async () => {
    const data = '<ExtendedData><Data name="crop"><value>Almond</value></Data></ExtendedData>';
    const style = '<Style><LineStyle><color>ff0000ff</color><width>2</width></LineStyle></Style>';
    const text = kml(
      `<Folder><name>North</name>${placemark('a', data + style + outline(10))}</Folder><Folder><name>South</name>${placemark('b', outline(11))}${placemark('c', outline(12))}</Folder>`,
    );
    const first = await readLayer(textFile(text, 'fields.kml'));
    expect(first.understood).toMatchObject({ format: 'kml', layer: 'North', crs: 'OGC:CRS84' });
    expect(first.features[0].properties).toEqual({ name: 'a', crop: 'Almond' });
    expect(first.features[0].geometry).toMatchObject({ type: 'Polygon' });
    expect(first.codes).toContain('layer-chosen');
    expect((await readLayer(textFile(text, 'fields.kml'), { layer: 'South' })).features).toHaveLength(2);
  });

  test('several polygons in one Placemark are a multipolygon', async () => {
    const text = kml(placemark('a', `<MultiGeometry>${outline(10)}${outline(11)}</MultiGeometry>`));
    expect((await readLayer(textFile(text, 'a.kml'))).features[0].geometry).toMatchObject({ type: 'MultiPolygon' });
  });

  test('KMZ is opened', async () => {
    const file = zipOf('fields.kmz', { 'doc.kml': kml(placemark('a', outline(10))), 'files/icon.png': 'x' });
    expect((await readLayer(file)).features).toHaveLength(1);
  });

  const REFUSED: [string, string][] = [
    ['a document type', kml('', '<!DOCTYPE kml [<!ENTITY a "aaaa"><!ENTITY b "&a;&a;&a;">]>')],
    ['not well formed', kml('<Placemark><name>a</Placemark>')],
    ['XML of another kind', '<?xml version="1.0"?><gpx></gpx>'],
    ['comments without end', kml('<!--'.repeat(200_000))],
    ['nested without end', kml('<Folder>'.repeat(5000) + '</Folder>'.repeat(5000))],
  ];
  for (const [name, text] of REFUSED) {
    test(`${name} is refused`, async () => {
      expect((await readLayer(textFile(text, 'x.kml'))).codes).toEqual(['kml-unreadable']);
    });
  }
});

describe('native encodings of GeoParquet', () => {
  const point = (x: number, y: number) => ({ x, y, z: 3 });
  const CASES: [encoding: string, value: unknown, geometry: unknown][] = [
    ['point', point(1, 2), { type: 'Point', coordinates: [1, 2] }],
    [
      'linestring',
      [point(1, 2), point(3, 4)],
      {
        type: 'LineString',
        coordinates: [
          [1, 2],
          [3, 4],
        ],
      },
    ],
    [
      'multipolygon',
      [[[point(1, 2), point(3, 4)]]],
      {
        type: 'MultiPolygon',
        coordinates: [
          [
            [
              [1, 2],
              [3, 4],
            ],
          ],
        ],
      },
    ],
  ];
  for (const [encoding, value, geometry] of CASES) {
    test(encoding, () => {
      expect(nestedGeometry(value, encoding)).toEqual(geometry);
    });
  }

  test('a position without x, and bytes that are none, are faults', () => {
    expect(() => nestedGeometry([{ y: 1 }], 'linestring')).toThrow('no x and y');
    expect(() => nestedGeometry('text', 'WKB')).toThrow('not bytes');
  });
});

describe('archives', () => {
  const layer = featureFile([feature({}, 'Polygon', [ring])]).bytes;

  test('a single GeoJSON or GeoPackage in an archive is read', async () => {
    expect((await readLayer(zipOf('a.zip', { 'layer.geojson': layer, 'readme.txt': 'x' }))).features).toHaveLength(1);
    const inner = geoPackage([{ name: 'a', type: 'POLYGON', rows: [polygonBlob(ring)] }]).bytes;
    expect((await readLayer(zipOf('a.zip', { 'folder/a.gpkg': inner }))).features).toHaveLength(1);
  });

  const REFUSED: [string, Record<string, Uint8Array | string>, string][] = [
    ['nothing to read', { 'readme.txt': 'x' }, 'archive-without-layer'],
    ['an archive in an archive', { 'a.zip': zipOf('a.zip', { 'layer.geojson': layer }).bytes }, 'archive-in-archive'],
    ['an archive with another ending', { 'a.json': zipOf('a.zip', { 'layer.geojson': layer }).bytes }, 'archive-in-archive'],
    ['a file geodatabase', { 'x.gdb/a00000001.gdbtable': 'x', 'x.gdb/gdb': 'x' }, 'file-geodatabase'],
    ['a path outside', { '../layer.geojson': layer }, 'archive-unreadable'],
  ];
  for (const [name, members, code] of REFUSED) {
    test(`${name} is refused`, async () => {
      const { codes, fatal } = await readLayer(zipOf('a.zip', members));
      expect(codes).toEqual([code]);
      expect(fatal).toBe(true);
    });
  }

  test('a table is told from a layer', async () => {
    expect((await readLayer(textFile('a,b\n1,2\n'))).findings[0]).toMatchObject({
      code: 'not-a-vector-file',
      message: expect.stringContaining('a table'),
    });
  });
});
