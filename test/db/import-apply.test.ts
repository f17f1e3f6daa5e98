/** Applying and undoing, against the database itself: what is checked is that rows are there, or are again as they were. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { StagedImport } from '../../lib/files/reading.ts';
import { performApply } from '../../lib/jobs/import-apply.ts';
import { performUndo } from '../../lib/jobs/import-undo.ts';
import { applyImport, undoImport } from '../../lib/jobs/imports.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import {
  block,
  dumpTables,
  inState,
  makeDistrict,
  parcel,
  parcels,
  planting,
  reach,
  rowsOf,
  site,
  stage,
  stateOf,
  weather,
} from '../support/import-district.ts';

let test: TestDatabase;
let counter = 0;

beforeAll(async () => {
  test = await testDatabase();
});
afterAll(async () => {
  await stopQueue();
  await test.close();
});

const newDistrict = () => makeDistrict(`district-${++counter}`);

async function apply(districtId: string, staged: StagedImport, options: Record<string, unknown> = {}) {
  const own = await stage(districtId, staged, options);
  await inState(own, 'ready', 'applying');
  await performApply(own);
  return own;
}

async function undo(own: { districtId: string; importId: string }) {
  await inState(own, 'applied', 'undoing');
  await performUndo(own);
}

/** A district with land, plantings and weather already in it. */
async function settledDistrict(): Promise<string> {
  const districtId = await newDistrict();
  await apply(districtId, { kind: 'canals', reaches: [reach('main', null), reach('L1', 'main')] });
  await apply(
    districtId,
    parcels([parcel('0007', { reachCode: 'L1', turnoutCode: 'T1', soilCode: 'loam' }), parcel('8')], {
      turnouts: [{ code: 'T1', reachCode: 'L1', capacity: 0.3 }],
      plantings: [planting('0007'), planting('8')],
    }),
  );
  await apply(districtId, { kind: 'stations', sites: [site('001'), site('002')] });
  await apply(districtId, weather([block('2023-05-01', ['001', '002'], (s, d) => s + d * 0.1)]));
  return districtId;
}

const KINDS: Record<string, { staged: StagedImport; options?: Record<string, unknown> }> = {
  stations: { staged: { kind: 'stations', sites: [site('002', -119.5), site('003')] } },
  'stations in a new source': { staged: { kind: 'stations', sites: [site('9')] }, options: { source: 'Elsewhere' } },
  weather: {
    staged: weather([block('2023-05-01', ['002'], (_, d) => (d % 2 ? 7.7 : null)), block('2023-06-01', ['001', '002'], () => 1.25)]),
  },
  parcels: {
    staged: parcels([parcel('0007', { name: 'Home' }), parcel('0009', { reachCode: 'main', turnoutCode: 'T9' })], {
      turnouts: [{ code: 'T9', reachCode: 'main', capacity: null }],
      plantings: [planting('0009'), planting('0007', 1, '2023-05-05')],
      cropMappings: { '1': 'maize', '24': null },
    }),
  },
  'parcels that replace all': { staged: parcels([parcel('0010')]), options: { replace: true } },
  canals: { staged: { kind: 'canals', reaches: [reach('L1', 'main'), { ...reach('L2', 'L1'), capacity: null }] } },
  'canals that replace all': {
    staged: { kind: 'canals', reaches: [reach('L1', null), { ...reach('L2', 'L1'), capacity: null }] },
    options: { replace: true },
  },
  plantings: { staged: { kind: 'plantings', plantings: [planting('8', 1, '2023-03-20'), planting('8', 2, '2023-08-01')] } },
  'plantings with a practice': {
    staged: {
      kind: 'plantings',
      plantings: [{ ...planting('8', 1, '2023-03-20'), practice: { irrigation: { kind: 'interval', days: 7 } } }],
    },
  },
  soils: {
    staged: {
      kind: 'soils',
      soils: [
        {
          code: 'loam',
          name: 'Loam, deep',
          fieldCapacity: 0.28,
          wiltingPoint: 0.1,
          evaporationDepth: 0.1,
          readilyEvaporableWater: 9,
          totalEvaporableWater: 23,
          curveNumber: null,
          rootLimit: null,
          source: 'survey',
        },
        {
          code: '07',
          name: 'Sand',
          fieldCapacity: 0.12,
          wiltingPoint: 0.045,
          evaporationDepth: 0.1,
          readilyEvaporableWater: 6,
          totalEvaporableWater: 9,
          curveNumber: 68,
          rootLimit: 0.9,
          source: 'survey',
        },
      ],
    },
  },
};

describe.each(Object.entries(KINDS))('%s', (_name, { staged, options }) => {
  it('is applied, and undone to byte-identical tables', async () => {
    const districtId = await settledDistrict();
    const before = await dumpTables(districtId);
    const own = await apply(districtId, staged, options);
    expect(await stateOf(own)).toMatchObject({ state: 'applied', error: null });
    expect(await dumpTables(districtId)).not.toEqual(before);
    await undo(own);
    expect(await stateOf(own)).toMatchObject({ state: 'undone', error: null });
    expect(await dumpTables(districtId)).toEqual(before);
  });

  it('is applied once however often the job runs', async () => {
    const districtId = await settledDistrict();
    const own = await apply(districtId, staged, options);
    const applied = await dumpTables(districtId);
    await performApply(own);
    expect(await dumpTables(districtId)).toEqual(applied);
    await undo(own);
    const undone = await dumpTables(districtId);
    await performUndo(own);
    expect(await dumpTables(districtId)).toEqual(undone);
  });

  it('leaves nothing half done, whichever step the process dies after', async () => {
    const districtId = await settledDistrict();
    const before = await dumpTables(districtId);
    const own = await stage(districtId, staged, options);
    await inState(own, 'ready', 'applying');
    const steps: string[] = [];
    for (let dieAfter = 1; ; dieAfter++) {
      let step = 0;
      const died = await performApply(own, (name) => {
        if (++step === dieAfter) {
          steps.push(name);
          throw new Error('killed');
        }
      }).then(
        () => false,
        () => true,
      );
      if (!died) break;
      expect(await dumpTables(districtId)).toEqual(before);
      expect((await stateOf(own)).state).toBe('applying');
    }
    expect(steps.length).toBeGreaterThanOrEqual(5);
    expect((await stateOf(own)).state).toBe('applied');
    const applied = await dumpTables(districtId);
    await inState(own, 'applied', 'undoing');
    for (const step of ['blocks', 'rows', 'checked', 'marked']) {
      await expect(performUndo(own, (name) => (name === step ? Promise.reject(new Error('killed')) : undefined))).rejects.toThrow('killed');
      expect(await dumpTables(districtId)).toEqual(applied);
    }
    await performUndo(own);
    expect(await dumpTables(districtId)).toEqual(before);
  });

  it('changes nothing when the same file is imported again', async () => {
    const districtId = await settledDistrict();
    await apply(districtId, staged, options);
    const once = await dumpTables(districtId);
    const again = await apply(districtId, staged, options);
    expect(await dumpTables(districtId)).toEqual(once);
    expect(await rowsOf(districtId, `select 1 from import_before where import_id = '${again.importId}'`)).toHaveLength(0);
  });
});

describe('parcels', () => {
  it('keeps places: known parcels stay where they are, new ones come after, a removed place is not given away', async () => {
    const districtId = await settledDistrict();
    const replaced = await apply(districtId, parcels([parcel('0007'), parcel('new')]), { replace: true });
    await apply(districtId, parcels([parcel('newer')]));
    const places = await rowsOf<{ code: string; ordinal: number }>(districtId, 'select code, ordinal from parcel order by ordinal');
    expect(places).toEqual([
      { code: '0007', ordinal: 0 },
      { code: 'new', ordinal: 2 },
      { code: 'newer', ordinal: 3 },
    ]);
    await undo(replaced);
    const after = await rowsOf<{ code: string; ordinal: number }>(districtId, 'select code, ordinal from parcel order by ordinal');
    expect(after).toEqual([
      { code: '0007', ordinal: 0 },
      { code: '8', ordinal: 1 },
      { code: 'newer', ordinal: 3 },
    ]);
  });

  it('holds codes with leading zeros apart', async () => {
    const districtId = await newDistrict();
    await apply(districtId, parcels([parcel('7'), parcel('007'), parcel('0007')]));
    const codes = await rowsOf<{ code: string }>(districtId, 'select code from parcel order by ordinal');
    expect(codes.map((row) => row.code)).toEqual(['7', '007', '0007']);
  });

  it('keeps what the file does not say', async () => {
    const districtId = await settledDistrict();
    await apply(districtId, parcels([parcel('0007', { area: 5 })]));
    const [row] = await rowsOf(districtId, "select area_m2, turnout_code, reach_code, soil_code from parcel where code = '0007'");
    expect(row).toEqual({ area_m2: 5, turnout_code: 'T1', reach_code: 'L1', soil_code: 'loam' });
  });

  it('counts the geometry up, also when undone', async () => {
    const districtId = await settledDistrict();
    const version = async () =>
      (await rowsOf<{ geometry_version: number }>(districtId, 'select geometry_version from district'))[0].geometry_version;
    const first = await version();
    const own = await apply(districtId, parcels([parcel('x')]));
    expect(await version()).toBe(first + 1);
    await undo(own);
    expect(await version()).toBe(first + 2);
  });

  it('takes more than one piece', async () => {
    const districtId = await newDistrict();
    const many = Array.from({ length: 2300 }, (_, i) => parcel(`P${i}`));
    const own = await apply(
      districtId,
      parcels(many, { plantings: many.flatMap((one) => [planting(one.code, 1), planting(one.code, 2, '2023-07-01')]) }),
    );
    expect((await stateOf(own)).understood.applied).toMatchObject({ parcels_added: 2300, plantings_added: 2300 });
    expect(await rowsOf(districtId, 'select count(*)::int as n, count(distinct ordinal)::int as places from parcel')).toEqual([
      { n: 2300, places: 2300 },
    ]);
    expect(await rowsOf(districtId, 'select count(*)::int as n from planting')).toEqual([{ n: 4600 }]);
    await undo(own);
    expect(await rowsOf(districtId, 'select count(*)::int as n from planting')).toEqual([{ n: 0 }]);
  });
});

describe('plantings with a practice', () => {
  it('keep it as it was read, and lose it with the next table that says nothing of it', async () => {
    const districtId = await settledDistrict();
    const practice = { irrigation: { kind: 'fixed-depth', depth: 40 }, mulch: { kind: 'plastic', cover: 0.7 } } as const;
    await apply(districtId, { kind: 'plantings', plantings: [{ ...planting('8', 1, '2023-03-20'), practice }] });
    const stored = () => rowsOf(districtId, "select practice from planting where parcel_code = '8'");
    expect(await stored()).toEqual([{ practice }]);
    await apply(districtId, { kind: 'plantings', plantings: [planting('8', 1, '2023-03-20')] });
    expect(await stored()).toEqual([{ practice: {} }]);
  });
});

describe('canals that replace all', () => {
  it('removes the reaches that the file does not have', async () => {
    const districtId = await newDistrict();
    await apply(districtId, { kind: 'canals', reaches: [reach('main', null), reach('L1', 'main'), reach('L2', 'L1')] });
    const own = await apply(districtId, { kind: 'canals', reaches: [reach('L2', null)] }, { replace: true });
    const { state, understood } = await stateOf(own);
    expect(state).toBe('applied');
    expect(understood.applied).toMatchObject({ reaches_added: 0, reaches_changed: 1, reaches_removed: 2 });
    expect(await rowsOf(districtId, 'select code, parent_code from reach')).toEqual([{ code: 'L2', parent_code: null }]);
  });

  it('refuses while turnouts and parcels stand on a removed reach, naming them', async () => {
    const districtId = await settledDistrict();
    const before = await dumpTables(districtId);
    const own = await apply(districtId, { kind: 'canals', reaches: [reach('main', null)] }, { replace: true });
    const { state, error } = await stateOf(own);
    expect(state).toBe('failed');
    expect(error).toContain('1 turnout (T1 on L1) and 1 parcel (0007 on L1) still name');
    expect(await dumpTables(districtId)).toEqual(before);
  });
});

describe('refusals', () => {
  it('refuses canals that would not be one tree, and changes nothing', async () => {
    const districtId = await settledDistrict();
    const before = await dumpTables(districtId);
    const own = await apply(districtId, { kind: 'canals', reaches: [reach('main', 'L1')] });
    const { state, error } = await stateOf(own);
    expect(state).toBe('failed');
    expect(error).toContain('circle');
    expect(await dumpTables(districtId)).toEqual(before);
  });

  it('refuses plantings of a parcel that has gone since the file was read', async () => {
    const districtId = await settledDistrict();
    const own = await apply(districtId, { kind: 'plantings', plantings: [planting('gone')] });
    expect((await stateOf(own)).error).toMatch(/plantings on parcels that do not exist.*"gone"/);
  });

  it('refuses weather of stations the district does not have', async () => {
    const districtId = await newDistrict();
    const own = await apply(districtId, weather([block('2023-05-01', ['404'], () => 1)]));
    expect(await stateOf(own)).toMatchObject({ state: 'failed', error: expect.stringContaining('404') });
  });

  it('refuses to undo canals while later parcels stand on them, naming the import', async () => {
    const districtId = await newDistrict();
    const canals = await apply(districtId, { kind: 'canals', reaches: [reach('main', null)] });
    await apply(districtId, parcels([parcel('1', { reachCode: 'main' })]));
    const before = await dumpTables(districtId);
    await undo(canals);
    const { state, error } = await stateOf(canals);
    expect(state).toBe('applied');
    expect(error).toMatch(/parcels on reaches that do not exist.*Undo the parcels import "parcels\.csv" applied \d{4}-\d\d-\d\d/);
    expect(await dumpTables(districtId)).toEqual(before);
  });

  it('takes reach codes on trust while there are no canals, and lets canals come and go after', async () => {
    const districtId = await newDistrict();
    await apply(
      districtId,
      parcels([parcel('1', { reachCode: 'main', turnoutCode: 'T' })], { turnouts: [{ code: 'T', reachCode: 'main', capacity: null }] }),
    );
    const before = await dumpTables(districtId);
    const canals = await apply(districtId, { kind: 'canals', reaches: [reach('main', null)] });
    expect((await stateOf(canals)).state).toBe('applied');
    await undo(canals);
    expect((await stateOf(canals)).state).toBe('undone');
    expect(await dumpTables(districtId)).toEqual(before);
  });

  it('refuses to undo what a later import changed again, until that one is undone', async () => {
    const districtId = await settledDistrict();
    const before = await dumpTables(districtId);
    const first = await apply(districtId, parcels([parcel('0007', { name: 'A' })]));
    const second = await apply(districtId, parcels([parcel('0007', { name: 'B' })]));
    await expect(undoImport({ districtId, name: 'test' }, first.importId)).rejects.toThrow(
      /parcel 0007 was changed again by the parcels import "parcels\.csv" applied/,
    );
    await undo(second);
    await undo(first);
    expect(await dumpTables(districtId)).toEqual(before);
  });

  it('refuses to undo stations whose weather came later', async () => {
    const districtId = await newDistrict();
    const stations = await apply(districtId, { kind: 'stations', sites: [site('1')] });
    const rain = await apply(districtId, weather([block('2023-05-01', ['1'], () => 1)]));
    await undo(stations);
    expect(await stateOf(stations)).toMatchObject({ state: 'applied', error: expect.stringContaining('Undo the weather import first') });
    await undo(rain);
    await undo(stations);
    expect((await stateOf(stations)).state).toBe('undone');
  });

  it('answers 200 twice and 409 where the state does not allow it', async () => {
    const districtId = await settledDistrict();
    const who = { districtId, name: 'test' };
    const own = await stage(districtId, parcels([parcel('5')]));
    await expect(undoImport(who, own.importId)).rejects.toThrow('ready');
    await applyImport(who, own.importId);
    await applyImport(who, own.importId);
    expect((await stateOf(own)).state).toBe('applying');
    await performApply(own);
    await applyImport(who, own.importId);
    await undoImport(who, own.importId);
    await performUndo(own);
    await undoImport(who, own.importId);
    await expect(applyImport(who, own.importId)).rejects.toThrow('undone');
  });
});

describe('weather', () => {
  const cells = (districtId: string) =>
    rowsOf<{ month: string; site_count: number; values: Buffer; quality: Buffer; version: number }>(
      districtId,
      'select month::text, site_count, values, quality, version from weather_block order by month',
    );

  it('holds stations in the order they came, whatever order a file names them in', async () => {
    const districtId = await newDistrict();
    await apply(districtId, { kind: 'stations', sites: [site('010'), site('9')] });
    await apply(districtId, weather([block('2023-02-01', ['9', '010'], (s, d) => (s === 0 ? 900 : 10) + d)]));
    const [row] = await cells(districtId);
    const values = new Float32Array(new Uint8Array(row.values).buffer);
    expect([row.site_count, values[0], values[27], values[28], values[55]]).toEqual([2, 10, 37, 900, 927]);
    expect([...row.quality]).toEqual(Array(56).fill(1));
  });

  it('lets the last import of a day win and leaves days without a value alone', async () => {
    const districtId = await newDistrict();
    await apply(districtId, { kind: 'stations', sites: [site('1')] });
    await apply(districtId, weather([block('2023-02-01', ['1'], (_, d) => d)]));
    await apply(districtId, weather([block('2023-02-01', ['1'], (_, d) => (d < 2 ? 55.5 : null))]));
    const [row] = await cells(districtId);
    const values = new Float32Array(new Uint8Array(row.values).buffer);
    expect([...values.slice(0, 4), row.version]).toEqual([55.5, 55.5, 2, 3, 2]);
  });

  it('undoes imports of two stations of one month in either order', async () => {
    const districtId = await newDistrict();
    await apply(districtId, { kind: 'stations', sites: [site('1'), site('2')] });
    const empty = await dumpTables(districtId);
    const one = await apply(districtId, weather([block('2023-02-01', ['1'], () => 1)]));
    const two = await apply(districtId, weather([block('2023-02-01', ['2'], () => 2)]));
    await undo(one);
    const [row] = await cells(districtId);
    const values = new Float32Array(new Uint8Array(row.values).buffer);
    expect([values[0], values[27], values[28], values[55]]).toEqual([Number.NaN, Number.NaN, 2, 2]);
    expect(row.quality[0]).toBe(0);
    await undo(two);
    expect((await dumpTables(districtId)).site).toBe(empty.site);
    expect((await cells(districtId)).flatMap((left) => [...left.quality]).every((quality) => quality === 0)).toBe(true);
  });

  it('refuses to undo the import that made a month while a later one has written the same days', async () => {
    const districtId = await newDistrict();
    await apply(districtId, { kind: 'stations', sites: [site('1'), site('2')] });
    const first = await apply(districtId, weather([block('2023-02-01', ['1', '2'], () => 1)]));
    const second = await apply(districtId, weather([block('2023-02-01', ['2'], () => 2)]));
    await expect(undoImport({ districtId, name: 'test' }, first.importId)).rejects.toThrow(
      /weather of 2023-02 \(precipitation_mm\) was changed/,
    );
    await undo(second);
    await undo(first);
    expect(await cells(districtId)).toEqual([]);
  });

  it('makes a grid with its cells and takes it away whole', async () => {
    const districtId = await newDistrict();
    const before = await dumpTables(districtId);
    const [rows, columns] = [60, 80];
    const codes = Array.from(
      { length: rows * columns },
      (_, i) => `r${String(Math.floor(i / columns)).padStart(3, '0')}c${i % columns}`,
    ).sort();
    const staged: StagedImport = {
      kind: 'weather',
      source: 'Grid',
      blocks: [block('2023-02-01', codes, (cell) => cell % 7)],
      cells: codes.map((code, i) => ({
        code,
        row: Math.floor(i / columns),
        column: i % columns,
        longitude: -120 + (i % columns) / 100,
        latitude: 45 + Math.floor(i / columns) / 100,
        elevation: null,
      })),
      grid: {
        rows,
        columns,
        kind: 'rectilinear',
        x: Array.from({ length: columns }, (_, i) => -120 + i / 100),
        y: Array.from({ length: rows }, (_, i) => 45 + i / 100),
        crs: 'EPSG:4326',
      },
      rows: 1,
      sites: codes.length,
    };
    const own = await apply(districtId, staged);
    expect(await rowsOf(districtId, 'select count(*)::int as n from site')).toEqual([{ n: codes.length }]);
    await undo(own);
    expect(await dumpTables(districtId)).toEqual(before);
  });

  it('puts a station’s weather where the station is', async () => {
    const districtId = await newDistrict();
    await apply(districtId, { kind: 'stations', sites: [site('1')] }, { source: 'North' });
    await apply(districtId, { kind: 'stations', sites: [site('2')] }, { source: 'South' });
    await apply(districtId, weather([block('2023-02-01', ['2', '1'], (s) => s)], 'file name'));
    const rows = await rowsOf(
      districtId,
      'select s.name, b.site_count from weather_block b join weather_source s using (district_id, source_id) order by s.name',
    );
    expect(rows).toEqual([
      { name: 'North', site_count: 1 },
      { name: 'South', site_count: 1 },
    ]);
  });
});

describe('districts side by side', () => {
  it('one district’s import and undo never touch another’s rows, nor its import', async () => {
    const [here, there] = [await settledDistrict(), await settledDistrict()];
    const before = await dumpTables(there);
    const own = await apply(here, parcels([parcel('0007', { name: 'Mine' })]), { replace: true });
    await expect(undoImport({ districtId: there, name: 'test' }, own.importId)).rejects.toThrow('There is no import');
    await performUndo({ districtId: there, importId: own.importId });
    expect((await stateOf(own)).state).toBe('applied');
    await undo(own);
    expect(await dumpTables(there)).toEqual(before);
  });
});

describe('runs', () => {
  it('asks once for a run of each season that can be computed', async () => {
    const districtId = await settledDistrict();
    const own = await stage(districtId, weather([block('2023-07-01', ['001'], () => 3)]), { recompute: true });
    await inState(own, 'ready', 'applying');
    await performApply(own);
    await performApply(own);
    const runs = await rowsOf<{ run_id: string; season_code: string }>(districtId, 'select run_id, season_code from run');
    expect(runs).toHaveLength(1);
    expect(runs[0].season_code).toBe('2023');
    expect((await stateOf(own)).understood.applied.runs).toEqual([runs[0].run_id]);
  });

  it('asks for none when the weather lies outside every season', async () => {
    const districtId = await settledDistrict();
    const own = await apply(districtId, weather([block('2023-12-01', ['001'], () => 3)]), { recompute: true });
    expect((await stateOf(own)).understood.applied.runs).toEqual([]);
  });
});
