import { describe, expect, test } from 'vitest';
import { type ImportOptions, readImport } from '../../lib/files/read-import.ts';
import type { ImportContext, ImportFile } from '../../lib/files/reading.ts';
import { feature, featureFile, importContext, square, textFile } from '../support/import-context.ts';

async function parcels(file: ImportFile, options: ImportOptions = {}, over: Partial<ImportContext> = {}) {
  const reading = await readImport('parcels', [file], options, importContext(over));
  if (reading.staged.kind !== 'parcels') throw new Error('not parcels');
  return { ...reading, ...reading.staged };
}

const codes = (reading: { findings: readonly { severity: string; code: string }[] }, severity = 'error') =>
  reading.findings.filter((finding) => finding.severity === severity).map(({ code }) => code);
const polygon = (properties: unknown, ...rings: number[][][]) => feature(properties, 'Polygon', rings);

describe('parcels', () => {
  test('codes are trimmed and joined, unused properties kept, the area is that of the ellipsoid', async () => {
    const properties = {
      Parcel: ' 007 ',
      turnout: 'T1',
      reach: 'L2',
      Soil: 'LOAM',
      method: '*',
      crop: 'Almond',
      elevation_ft: 100,
      owner: 'x',
      tags: [1],
    };
    const reading = await parcels(featureFile([polygon(properties, square(0, 0))]), { season: '2023' });
    // Snyder (1987) Eq. 3-12 for 0–0.01° N over 0.01°: 1 230 907.2 m²
    expect(Math.abs(reading.parcels[0].area - 1230907.2)).toBeLessThan(1);
    expect(reading.parcels[0]).toMatchObject({
      code: '007',
      turnoutCode: 'T1',
      reachCode: 'L2',
      soilCode: 'loam',
      methodCode: null,
      crop: 'almond',
      west: 0,
      north: 0.01,
      attributes: { owner: 'x', tags: '[1]' },
    });
    expect(reading.parcels[0].elevation).toBeCloseTo(30.48, 6);
    expect(reading.turnouts).toEqual([{ code: 'T1', reachCode: 'L2', capacity: null }]);
    expect(reading.plantings).toEqual([
      {
        parcelCode: '007',
        seasonCode: '2023',
        sequence: 1,
        cropCode: 'almond',
        calendarCode: 'almond-std',
        plantingDate: '2023-04-01',
        harvestDate: null,
        cutDates: [],
        areaShare: 1,
      },
    ]);
    expect(codes(reading, 'warning')).toEqual(['planting-date-season-start']);
    expect(codes(reading, 'note')).toContain('no-method');
  });

  test('foreign crop codes: mapped by option or store, proposed by likeness, else without planting', async () => {
    const file = featureFile(['G6', 'G6', 'D12', 'Alfalfa', '**'].map((crop, i) => polygon({ parcel: `p${i}`, crop }, square(i, 45))));
    const reading = await parcels(file, { season: '2023', cropMappings: { D12: 'almond' } }, { cropMappings: { G6: 'maize-grain' } });
    expect(reading.understood.crops).toEqual([
      { foreignCode: 'G6', count: 2, cropCode: 'maize-grain', by: 'stored', proposed: 'maize-grain' },
      { foreignCode: 'Alfalfa', count: 1, cropCode: null, by: 'similar', proposed: 'alfalfa-hay' },
      { foreignCode: 'D12', count: 1, cropCode: 'almond', by: 'option', proposed: 'almond' },
    ]);
    expect(reading.plantings).toHaveLength(3);
    expect(codes(reading, 'warning')).toContain('unmapped-crop');
    expect(reading.cropMappings).toEqual({ G6: 'maize-grain', D12: 'almond' });
  });

  test('without a code column the unique one is proposed, or the parcels are numbered', async () => {
    const unique = await parcels(
      featureFile([polygon({ ref_no: 'a7', kind: 'x' }, square(0, 0)), polygon({ ref_no: 'a8', kind: 'x' }, square(1, 0))]),
    );
    expect(unique.parcels.map(({ code }) => code)).toEqual(['a7', 'a8']);
    expect(codes(unique, 'warning')).toContain('code-column-proposed');
    const none = await parcels(featureFile([polygon({ kind: 'x' }, square(0, 0)), polygon({ kind: 'x' }, square(1, 0))]));
    expect(none.parcels.map(({ code }) => code)).toEqual(['P0001', 'P0002']);
  });

  test('a second parcel of one code is refused; overlaps are told with their share', async () => {
    const reading = await parcels(
      featureFile([
        polygon({ parcel: 'a' }, square(10, 45)),
        polygon({ parcel: 'a' }, square(11, 45)),
        polygon({ parcel: 'b' }, square(10.005, 45)),
      ]),
    );
    expect(reading.findings.find(({ severity }) => severity === 'error')).toMatchObject({ code: 'duplicate-code', row: 2 });
    expect(reading.findings.find(({ code }) => code === 'parcels-overlap')?.message).toContain('overlap by 50 %');
  });

  test('two of one outline overlap by 100 %', async () => {
    const reading = await parcels(featureFile([polygon({ parcel: 'a' }, square(10, 45)), polygon({ parcel: 'b' }, square(10, 45))]));
    expect(reading.findings.find(({ code }) => code === 'parcels-overlap')?.message).toContain('overlap by 100 %');
  });

  test('replacing tells how many parcels and plantings it removes', async () => {
    const file = featureFile([polygon({ parcel: 'a' }, square(10, 45)), feature({ parcel: 'bad' }, 'Polygon', [[[0, 0]]])]);
    const over = { knownParcels: ['a', 'bad', 'old', 'older'], plantingCounts: { a: 4, old: 2, older: 1 } };
    const replacing = await parcels(file, { replace: true }, over);
    expect(replacing.findings.filter(({ code }) => code === 'parcels-removed')).toMatchObject([
      {
        severity: 'warning',
        message:
          'Replacing the parcels removes 3 parcels and 3 plantings: bad, old, older. 1 of them stands in the file but could not be read: bad.',
      },
    ]);
    expect(codes(await parcels(file, {}, over), 'warning')).not.toContain('parcels-removed');
    expect(codes(await parcels(file, { replace: true }, { knownParcels: ['a'] }), 'warning')).not.toContain('parcels-removed');
  });

  test('codes that are too long or read as a folder are refused', async () => {
    const names = ['a', 'x'.repeat(101), 'y'.repeat(100), '.'];
    const reading = await parcels(featureFile(names.map((parcel, i) => polygon({ parcel }, square(i, 45)))));
    expect(reading.parcels.map(({ code }) => code)).toEqual(['a', 'y'.repeat(100)]);
    expect(reading.findings.filter(({ severity }) => severity === 'error')).toMatchObject([
      { code: 'code-too-long', row: 2, limit: 'at most 100 characters' },
      { code: 'bad-code', row: 4, value: '.' },
    ]);
  });

  test('a turnout code that is too long is refused, its parcel kept', async () => {
    const reading = await parcels(featureFile([polygon({ parcel: 'a', turnout: 'T'.repeat(101), reach: 'L1' }, square(0, 45))]));
    expect(reading.parcels[0]).toMatchObject({ turnoutCode: null, reachCode: 'L1' });
    expect(reading.turnouts).toEqual([]);
    expect(reading.findings[0]).toMatchObject({ severity: 'error', code: 'code-too-long', column: 'turnout' });
  });

  test('a parcel above 5,000 ha is a warning', async () => {
    // a hundredth of a degree squared at the equator is 123 ha (Snyder 1987, as above): 0.06° gives 4 431 ha, 0.07° gives 6 031 ha
    const reading = await parcels(
      featureFile([polygon({ parcel: 'fits' }, square(0, 0, 0.06)), polygon({ parcel: 'large' }, square(1, 0, 0.07))]),
    );
    expect(reading.findings.filter(({ code }) => code === 'parcel-large')).toMatchObject([
      { severity: 'warning', value: 'large', limit: '5000 ha', row: 2 },
    ]);
    expect(reading.parcels).toHaveLength(2);
  });

  test('a parcel more than 500 km from the district is a warning', async () => {
    // a degree of the WGS 84 equator is 111.319 km: 4° is 445 km, 5° is 557 km
    const file = featureFile([polygon({ parcel: 'near' }, square(4, 0)), polygon({ parcel: 'far' }, square(5, 0))]);
    const far = { code: 'parcel-far-away', severity: 'warning', value: expect.stringContaining('5.0'), row: 2, limit: '500 km' };
    const found = async (over: Partial<ImportContext>, options: ImportOptions = {}) =>
      (await parcels(file, options, over)).findings.filter(({ code }) => code === 'parcel-far-away');
    expect(await found({ districtBox: [-1, -1, 0, 1] })).toMatchObject([far]);
    expect(await found({ siteBox: [-1, -1, 0, 1] })).toMatchObject([far]);
    expect(await found({ districtBox: [-1, -1, 0, 1], siteBox: [5, 0, 6, 1] })).toEqual([]);
    expect(await found({ districtBox: [-1, -1, 0, 1] }, { replace: true })).toEqual([]);
    const alone = await parcels(featureFile([0, 1, 2, 9].map((x) => polygon({ parcel: `p${x}` }, square(x, 0)))));
    expect(alone.findings.filter(({ code }) => code === 'parcel-far-away')).toMatchObject([{ row: 4 }]);
  });

  test('unknown reaches are told once the district has canals', async () => {
    const file = featureFile([polygon({ parcel: 'a', reach: 'L9' }, square(10, 45))]);
    expect((await parcels(file)).parcels[0].reachCode).toBe('L9');
    const strict = await parcels(file, {}, { knownReaches: [{ code: 'L1', parentCode: null }] });
    expect(strict.parcels[0].reachCode).toBeNull();
    expect(codes(strict, 'warning')).toContain('unknown-reach');
  });
});

const bow = [
  [0, 0],
  [0.01, 0.01],
  [0.01, 0],
  [0, 0.01],
  [0, 0],
];

/** Broken features, in the manner of RFC 7946's rules: what each is refused as. */
const BROKEN: [string, unknown, string][] = [
  ['null in place of a feature', null, 'not-a-feature'],
  ['geometry is a text', { type: 'Feature', properties: {}, geometry: 'x' }, 'bad-geometry'],
  ['no geometry', { type: 'Feature', properties: {}, geometry: null }, 'no-geometry'],
  ['properties are a number', { type: 'Feature', properties: 2, geometry: null }, 'bad-properties'],
  [
    'a line among polygons',
    feature({}, 'LineString', [
      [0, 0],
      [1, 1],
    ]),
    'wrong-geometry',
  ],
  [
    'coordinates as texts',
    feature({}, 'Polygon', [
      [
        ['1', '2'],
        ['3', '4'],
        ['5', '6'],
        ['1', '2'],
      ],
    ]),
    'bad-coordinates',
  ],
  ['an empty position', feature({}, 'Polygon', [[[0, 0], [1, 0], [], [0, 0]]]), 'bad-coordinates'],
  ['nested too deep', feature({}, 'Polygon', [[square(0, 0)]]), 'bad-coordinates'],
  ['nested too shallow', feature({}, 'MultiPolygon', [square(0, 0)]), 'bad-coordinates'],
  ['projected metres', feature({}, 'Polygon', [square(612000, 4180000)]), 'coordinates-out-of-range'],
  ['a bow tie', feature({}, 'Polygon', [bow]), 'self-intersection'],
  [
    'no area',
    feature({}, 'Polygon', [
      [
        [0, 0],
        [1, 1],
        [2, 2],
        [0, 0],
      ],
    ]),
    'zero-area',
  ],
];

describe('broken features are named and left out, their neighbours kept', () => {
  for (const [name, broken, code] of BROKEN) {
    test(name, async () => {
      const reading = await parcels(featureFile([polygon({}, square(10, 45)), broken]));
      expect(reading.findings.filter(({ severity }) => severity === 'error')).toMatchObject([{ code, row: 2 }]);
      expect(reading.parcels).toHaveLength(1);
      expect(reading.preview.kind === 'map' && reading.preview.collection.features.map(({ properties }) => properties.status)).toEqual([
        'ok',
        'refused',
      ]);
    });
  }

  test('projected coordinates come with the advice to reproject', async () => {
    const reading = await parcels(featureFile([polygon({}, square(612000, 4180000))]));
    expect(reading.findings[0].advice).toContain('reproject');
  });
});

/** Whole files that are no GeoJSON. */
const REFUSED: [string, string, string][] = [
  ['empty', '', 'empty-file'],
  ['cut short', '{"type":"FeatureCollection","features":[{', 'not-json'],
  ['a hundred thousand brackets', '['.repeat(100_000), 'json-too-deep'],
  ['an array', '[1]', 'not-geojson'],
  ['lower-case type', '{"type":"featurecollection","features":[]}', 'not-geojson'],
  ['no features member', '{"type":"FeatureCollection"}', 'not-geojson'],
  ['no features', '{"type":"FeatureCollection","features":[]}', 'no-features'],
  ['bare geometry', '{"type":"Point","coordinates":[1,2]}', 'not-geojson'],
];

describe('files that are refused', () => {
  for (const [name, text, code] of REFUSED) {
    test(name, async () => {
      const reading = await parcels(textFile(text, 'x.geojson'));
      expect(codes(reading)).toEqual([code]);
      expect(reading.parcels).toEqual([]);
    });
  }

  test('a file without a type says so', async () => {
    expect((await parcels(textFile('{"features":[]}', 'x.geojson'))).findings[0].message).toContain('The file has no type member');
  });

  test('another coordinate system is brought to WGS 84, one that is not known is refused by its name; CRS84 stays', async () => {
    const crs = (name: string) => ({ crs: { type: 'name', properties: { name } } });
    const refused = await parcels(featureFile([polygon({}, square(0, 0))], crs('urn:ogc:def:crs:EPSG::999999')));
    expect(refused.findings[0]).toMatchObject({
      code: 'unsupported-crs',
      message: expect.stringContaining('urn:ogc:def:crs:EPSG::999999'),
    });
    // UTM zone 10 north has its central meridian at 123° W, where the easting is 500 000 m
    const moved = await parcels(featureFile([polygon({}, square(500_000, 4_180_000, 100))], crs('urn:ogc:def:crs:EPSG::32610')));
    expect(moved.parcels[0].west).toBeCloseTo(-123, 9);
    expect(moved.understood.crs).toBe('EPSG:32610 WGS 84 / UTM zone 10N');
    for (const name of ['urn:ogc:def:crs:OGC:1.3:CRS84', 'EPSG:4326', 'urn:ogc:def:crs:EPSG::4326']) {
      expect((await parcels(featureFile([polygon({}, square(0, 0))], crs(name)))).parcels).toHaveLength(1);
    }
  });
});
