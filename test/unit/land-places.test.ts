/** Turnouts, service areas, soil polygons, and parcels joined by place. */
import { describe, expect, it } from 'vitest';
import { readImport } from '../../lib/files/read-import.ts';
import type { ImportContext, ImportKind, ImportOptions, ImportReading, MapPreview, StagedImport } from '../../lib/files/reading.ts';
import { feature, featureFile, importContext, square, textFile } from '../support/import-context.ts';

type Staged<Kind extends StagedImport['kind']> = Extract<StagedImport, { kind: Kind }>;

const CANALS: Partial<ImportContext> = {
  knownReaches: [
    { code: 'M', parentCode: null },
    { code: 'L', parentCode: 'M' },
  ],
  // M runs along 52.00° N, L along 52.05° N
  reachLines: [52, 52.05].map((latitude, i) => ({
    code: ['M', 'L'][i],
    geometry: {
      type: 'LineString',
      coordinates: [
        [5, latitude],
        [5.2, latitude],
      ],
    },
  })),
};

function read(kind: ImportKind, file: ReturnType<typeof textFile>, over: Partial<ImportContext> = {}, options: ImportOptions = {}) {
  return readImport(kind, [file], options, importContext({ ...CANALS, ...over }));
}

const findingsOf = ({ findings }: ImportReading) => findings.map(({ severity, code }) => `${severity} ${code}`);
const finding = ({ findings }: ImportReading, code: string) => findings.find((one) => one.code === code);
const reasonsOf = ({ preview }: ImportReading) =>
  Object.fromEntries((preview as MapPreview).collection.features.map(({ properties }) => [properties.code, properties.reason]));

describe('turnouts from a table', () => {
  it('bring reach, capacity and place', async () => {
    const reading = await read('turnouts', textFile('turnout,reach,capacity_l_s,longitude,latitude\nT1,M,250,5.01,52.0\nT2,L,,,\n'));
    expect((reading.staged as Staged<'turnouts'>).turnouts).toEqual([
      { code: 'T1', reachCode: 'M', capacity: 0.25, longitude: 5.01, latitude: 52 },
      { code: 'T2', reachCode: 'L', capacity: null, longitude: null, latitude: null },
    ]);
    expect(findingsOf(reading)).toEqual(['note no-place']);
    expect(reading.understood.boundingBox).toEqual([5.01, 52, 5.01, 52]);
  });

  it('leave out rows without a code, a reach or half a place, and say so', async () => {
    const text = 'turnout,reach,longitude,latitude\n,M,5,52\nT2,X9,5,52\nT3,,5,52\nT4,M,5,\nT5,M,5,52\nT5,L,5,52\n';
    const reading = await read('turnouts', textFile(text));
    expect((reading.staged as Staged<'turnouts'>).turnouts.map(({ code }) => code)).toEqual(['T5']);
    expect(reading.findings.filter(({ severity }) => severity === 'error').map(({ code, row }) => [row, code])).toEqual([
      [2, 'missing-code'],
      [3, 'unknown-reach'],
      [4, 'no-reach'],
      [5, 'missing-coordinates'],
      [7, 'duplicate-code'],
    ]);
  });

  it('keep the stored reach when they name none, and warn when they move', async () => {
    const knownTurnouts = [
      { code: 'T1', reachCode: 'L' },
      { code: 'T2', reachCode: 'L' },
    ];
    const reading = await read('turnouts', textFile('turnout,reach\nT1,\nT2,M\n'), { knownTurnouts });
    expect((reading.staged as Staged<'turnouts'>).turnouts.map(({ reachCode }) => reachCode)).toEqual(['L', 'M']);
    expect(finding(reading, 'turnout-moved')?.message).toContain('T2 from L to M');
  });
});

describe('turnouts from points', () => {
  it('are joined to the nearest reach within the distance when the options ask', async () => {
    const file = featureFile([
      feature({ code: 'T1' }, 'Point', [5.1, 52.002]),
      feature({ code: 'T2' }, 'Point', [5.1, 52.049]),
      feature({ code: 'T3' }, 'Point', [5.1, 52.02]),
      feature({ code: 'T4', reach: 'L' }, 'Point', [5.1, 52.0]),
    ]);
    const reading = await read('turnouts', file, {}, { joinByPlace: 'nearest-reach', joinDistance: 300 });
    expect((reading.staged as Staged<'turnouts'>).turnouts.map(({ code, reachCode, latitude }) => [code, reachCode, latitude])).toEqual([
      ['T1', 'M', 52.002],
      ['T2', 'L', 52.049],
      ['T4', 'L', 52],
    ]);
    expect(findingsOf(reading)).toEqual(['error no-reach', 'note joined-by-place']);
    // 0.002° of latitude at 52° N: 222.5 m
    expect(reasonsOf(reading)).toMatchObject({
      T1: 'Joined by place to the nearest reach, M, 223 m away.',
      T3: 'Turnout T3 names no reach.',
      T4: 'On reach L.',
    });
  });

  it('that are lines are refused', async () => {
    const line = [
      [5, 52],
      [5.1, 52],
    ];
    const reading = await read('turnouts', featureFile([feature({ code: 'T1', reach: 'M' }, 'LineString', line)]));
    expect(findingsOf(reading)).toContain('error wrong-geometry');
    expect((reading.staged as Staged<'turnouts'>).turnouts).toEqual([]);
  });
});

describe('service areas', () => {
  const knownTurnouts = [{ code: 'T1', reachCode: 'L' }];

  it('bring outline, area, name, turnout and reach', async () => {
    const file = featureFile([
      feature({ area: 'A1', name: 'North', turnout: 'T1', owner: 'x' }, 'Polygon', [square(5, 52)]),
      feature({ area: 'A2', reach: 'M' }, 'Polygon', [square(5.02, 52)]),
      feature({ area: 'A3', reach: 'gone', turnout: 'T9' }, 'Polygon', [square(5.04, 52)]),
    ]);
    const reading = await read('areas', file, { knownTurnouts });
    const { areas } = reading.staged as Staged<'areas'>;
    expect(areas.map(({ code, name, turnoutCode, reachCode }) => [code, name, turnoutCode, reachCode])).toEqual([
      ['A1', 'North', 'T1', 'L'],
      ['A2', 'A2', null, 'M'],
      ['A3', 'A3', null, null],
    ]);
    // 0.01° × 0.01° at 52.005° N: 686.9 m × 1112.6 m
    expect(areas[0].area / 764_200).toBeCloseTo(1, 2);
    expect(areas[0].attributes).toEqual({ owner: 'x' });
    expect(findingsOf(reading)).toEqual(['warning unknown-reach', 'warning unknown-turnout', 'note area-without-canal']);
  });

  it('warn of overlaps, refuse a second one of a code, and name those that replacing removes', async () => {
    const file = featureFile([
      feature({ area: 'A1', reach: 'M' }, 'Polygon', [square(5, 52)]),
      feature({ area: 'A2', reach: 'M' }, 'Polygon', [square(5.005, 52)]),
      feature({ area: 'A1', reach: 'M' }, 'Polygon', [square(5.05, 52)]),
    ]);
    const serviceAreas = [
      { code: 'old', reachCode: null, turnoutCode: null, geometry: { type: 'Polygon' as const, coordinates: [square(4, 52)] } },
    ];
    const reading = await read('areas', file, { serviceAreas }, { replace: true });
    expect(findingsOf(reading)).toEqual(['error duplicate-code', 'warning areas-overlap', 'warning areas-removed']);
    expect(finding(reading, 'areas-overlap')?.message).toContain('50 %');
    expect(finding(reading, 'areas-removed')?.message).toContain('old');
  });
});

describe('soil polygons', () => {
  const soilNames = { loam: 'Loam', clay: 'Heavy clay' };

  it('find their soils by code, by name and by the options; others are left out', async () => {
    const file = featureFile([
      feature({ id: 1, soil: 'LOAM' }, 'Polygon', [square(5, 52)]),
      feature({ id: 2, soil: 'heavy clay' }, 'Polygon', [square(5.02, 52)]),
      feature({ id: 3, soil: 'Rn1' }, 'Polygon', [square(5.04, 52)]),
      feature({ id: 4, soil: 'Zx' }, 'Polygon', [square(5.06, 52)]),
      feature({ id: 5, soil: 'water' }, 'Polygon', [square(5.08, 52)]),
      feature({ id: 6 }, 'Polygon', [square(5.1, 52)]),
    ]);
    const reading = await read('soil-areas', file, { soilNames }, { soilMappings: { Rn1: 'clay', water: null } });
    const { soilAreas } = reading.staged as Staged<'soil-areas'>;
    expect(soilAreas.map(({ code, soilCode }) => [code, soilCode])).toEqual([
      ['1', 'loam'],
      ['2', 'clay'],
      ['3', 'clay'],
    ]);
    expect(reading.understood.soilClasses).toEqual([
      { foreignCode: 'LOAM', count: 1, soilCode: 'loam', by: 'code' },
      { foreignCode: 'heavy clay', count: 1, soilCode: 'clay', by: 'name' },
      { foreignCode: 'Rn1', count: 1, soilCode: 'clay', by: 'option' },
      { foreignCode: 'Zx', count: 1, soilCode: null, by: null },
      { foreignCode: 'water', count: 1, soilCode: null, by: 'option' },
    ]);
    expect(findingsOf(reading)).toEqual(['warning unknown-soil', 'warning no-soil', 'note soil-left-out']);
    expect(finding(reading, 'unknown-soil')?.message).toContain('Zx (1)');
  });

  it('take a lone code for the class and number the polygons', async () => {
    const file = featureFile([
      feature({ code: 'loam' }, 'Polygon', [square(5, 52)]),
      feature({ code: 'loam' }, 'Polygon', [square(5.02, 52)]),
    ]);
    const reading = await read('soil-areas', file);
    expect((reading.staged as Staged<'soil-areas'>).soilAreas.map(({ code, soilCode }) => [code, soilCode])).toEqual([
      ['S00001', 'loam'],
      ['S00002', 'loam'],
    ]);
  });

  it('without a class are refused as a whole', async () => {
    const reading = await read('soil-areas', featureFile([feature({ colour: 'brown' }, 'Polygon', [square(5, 52)])]));
    expect(findingsOf(reading)).toContain('error missing-column');
    expect((reading.staged as Staged<'soil-areas'>).soilAreas).toEqual([]);
  });
});

describe('parcels joined by place', () => {
  const parcelsAt = (...places: readonly (readonly [string, number, number, object?])[]) =>
    featureFile(places.map(([code, x, y, more]) => feature({ parcel: code, ...more }, 'Polygon', [square(x, y, 0.002)])));
  const joinsOf = (reading: ImportReading) =>
    Object.fromEntries(
      (reading.staged as Staged<'parcels'>).parcels.map(({ code, turnoutCode, reachCode }) => [code, [turnoutCode, reachCode]]),
    );
  const knownTurnouts = [
    { code: 'T1', reachCode: 'M', longitude: 5.01, latitude: 52.001 },
    { code: 'T2', reachCode: 'L', longitude: 5.05, latitude: 52.001 },
    { code: 'T3', reachCode: 'L', longitude: null, latitude: null },
  ];

  it('take the nearest turnout from their edge, after the codes they bring', async () => {
    // the edge of P1 is 0.001° of longitude from T1: 68.7 m at 52.001° N
    const file = parcelsAt(['P1', 5.011, 52], ['P2', 5.048, 52], ['P3', 5.1, 52], ['P4', 5.011, 52.0021, { turnout: 'T3' }]);
    const reading = await read('parcels', file, { knownTurnouts }, { joinByPlace: 'nearest-turnout' });
    expect(joinsOf(reading)).toEqual({ P1: ['T1', 'M'], P2: ['T2', 'L'], P3: [null, null], P4: ['T3', 'L'] });
    expect(reasonsOf(reading)).toEqual({
      P1: 'Joined by place to the nearest turnout, T1, 69 m away.',
      P2: 'Joined by place to the nearest turnout, T2, 0 m away.',
      P3: null,
      P4: null,
    });
    expect(finding(reading, 'joined-by-place')?.message).toMatch(/^2 parcels .* The furthest lies 69 m from its edge\./);
    expect(finding(reading, 'nothing-near')).toMatchObject({ severity: 'warning', limit: '500 m' });
    expect(finding(reading, 'nothing-near')?.message).toContain('P3');
  });

  it('take the nearest reach within the distance', async () => {
    const file = parcelsAt(['P1', 5.05, 52.001], ['P2', 5.05, 52.0465], ['P3', 5.05, 52.02]);
    const reading = await read('parcels', file, {}, { joinByPlace: 'nearest-reach', joinDistance: 200 });
    expect(joinsOf(reading)).toEqual({ P1: [null, 'M'], P2: [null, 'L'], P3: [null, null] });
  });

  it('take the service area with the largest share of them; areas that share one are told', async () => {
    const area = (code: string, x: number, turnoutCode: string | null, reachCode: string | null) => ({
      code,
      turnoutCode,
      reachCode,
      geometry: { type: 'Polygon' as const, coordinates: [square(x, 51.99, 0.03)] },
    });
    // A ends at 5.03° E and B begins at 5.029° E
    const serviceAreas = [area('A', 5, 'T1', null), area('B', 5.029, null, 'L'), area('C', 5.07, null, null)];
    const file = parcelsAt(['P1', 5.01, 52], ['P2', 5.0285, 52], ['P3', 5.04, 52], ['P4', 5.08, 52], ['P5', 5.15, 52]);
    const reading = await read('parcels', file, { knownTurnouts, serviceAreas }, { joinByPlace: 'service-area' });
    expect(joinsOf(reading)).toEqual({ P1: ['T1', 'M'], P2: ['T1', 'M'], P3: [null, 'L'], P4: [null, null], P5: [null, null] });
    // P2 lies on 5.0285–5.0305: 0.75 of it in A, 0.75 in B; the first is kept of two alike
    expect(reasonsOf(reading).P2).toBe('Joined by place to service area A, which holds 75 % of it, 75 % in B.');
    expect(finding(reading, 'areas-share-parcel')?.message).toContain('P2');
    expect(finding(reading, 'area-without-canal')?.message).toContain('P4');
    expect(finding(reading, 'outside-areas')?.message).toContain('P5');
  });

  it('are not joined when nothing is there to join to, which is told', async () => {
    for (const joinByPlace of ['nearest-turnout', 'nearest-reach', 'service-area'] as const) {
      const reading = await read('parcels', parcelsAt(['P1', 5.05, 52.001]), { reachLines: [] }, { joinByPlace });
      expect(finding(reading, 'no-places')?.severity).toBe('warning');
      expect(joinsOf(reading)).toEqual({ P1: [null, null] });
    }
  });

  it('are not joined unless asked', async () => {
    expect(joinsOf(await read('parcels', parcelsAt(['P1', 5.011, 52]), { knownTurnouts }))).toEqual({ P1: [null, null] });
  });
});
