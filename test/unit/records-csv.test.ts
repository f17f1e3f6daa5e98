/** Tables of deliveries and measurements. Conversions are against NIST SP 811: 1 ac-ft = 1233.48184 m³, 1 in = 25.4 mm, 1 cfs-day = 2446.5755 m³. */
import { describe, expect, test } from 'vitest';
import { type ImportOptions, readImport } from '../../lib/files/read-import.ts';
import type { ImportContext } from '../../lib/files/reading.ts';
import { importContext, textFile } from '../support/import-context.ts';

const known = { knownParcels: ['001', '002'], parcelAreas: { '001': 40_000, '002': 10_000 } };

async function read(kind: 'deliveries' | 'measurements', text: string, over: Partial<ImportContext> = {}, options: ImportOptions = {}) {
  const reading = await readImport(kind, [textFile(text)], options, importContext({ ...known, ...over }));
  const { staged } = reading;
  return {
    ...reading,
    deliveries: staged.kind === 'deliveries' ? staged.deliveries : [],
    measurements: staged.kind === 'measurements' ? staged.measurements : [],
  };
}

type Read = Awaited<ReturnType<typeof read>>;
const errors = ({ findings }: Read) => findings.filter(({ severity }) => severity === 'error').map(({ row, code }) => [row, code]);
const codes = ({ findings }: Read) => findings.map(({ code }) => code);

describe('deliveries', () => {
  test('rows of a parcel and day add up, in order', async () => {
    const reading = await read('deliveries', 'parcel,date,volume_m3\n002,2023-06-02,300\n001,2023-06-01,1000\n001,2023-06-01,500\n');
    expect(reading.deliveries).toEqual([
      { parcelCode: '001', date: '2023-06-01', volume: 1500 },
      { parcelCode: '002', date: '2023-06-02', volume: 300 },
    ]);
    expect(codes(reading)).toEqual(['deliveries-added-up']);
    expect(reading.understood.dateRange).toEqual({ start: '2023-06-01', end: '2023-06-02' });
  });

  test.each([
    ['volume_acft', 0.5, 616.74092],
    ['Volume (ac-ft)', 0.5, 616.74092],
    ['delivered_volume_ml', 1.2, 1200],
    ['volume_ac_in', 10, 1027.90153],
    ['volume_ha_m', 0.01, 100],
    ['volume_cfs_day', 0.25, 611.64389],
    ['water [ft3]', 10_000, 283.16847],
    ['amount_gal', 100_000, 378.54118],
    ['volume_l', 250_000, 250],
    // 25 mm over 4 ha
    ['gross_depth_mm', 25, 1000],
    // 1 in over 4 ha = 25.4 mm
    ['irrigation_in', 1, 1016],
    ['depth_cm', 2.5, 1000],
  ])('%s %f is %f m³', async (header, value, volume) => {
    const { deliveries } = await read('deliveries', `parcel,date,${header}\n001,2023-06-01,${value}\n`);
    expect(deliveries[0].volume).toBeCloseTo(volume, 4);
  });

  test('a volume without a unit is in the unit of the district, with a warning where that is not m³', async () => {
    const text = 'parcel,date,volume\n001,2023-06-01,0.5\n';
    const us = await read('deliveries', text, { districtUnits: 'us' });
    expect(us.deliveries[0].volume).toBeCloseTo(616.74092, 4);
    expect(codes(us)).toContain('unit-assumed');
    expect((await read('deliveries', text)).deliveries[0].volume).toBe(0.5);
  });

  test('a day of 0 is kept: nothing was delivered', async () => {
    const { deliveries } = await read('deliveries', 'parcel,date,volume_m3\n001,2023-06-01,0\n');
    expect(deliveries).toEqual([{ parcelCode: '001', date: '2023-06-01', volume: 0 }]);
  });

  test('bad rows are named and left out', async () => {
    const reading = await read(
      'deliveries',
      [
        'parcel,date,volume_m3',
        '001,2023-06-01,-5',
        '001,2023-06-02,1e12',
        '009,2023-06-03,10',
        ',2023-06-03,10',
        '001,soon,10',
        '001,,10',
        '001,2023-06-04,',
        '001,2023-06-05,much',
        // 1,000 mm over 1 ha
        '002,2023-06-06,10000',
        '001,2023-06-07,100',
      ].join('\n'),
    );
    expect(errors(reading)).toEqual([
      [2, 'value-out-of-range'],
      [3, 'value-out-of-range'],
      [4, 'unknown-parcel'],
      [5, 'missing-code'],
      [6, 'not-a-date'],
      [7, 'missing-date'],
      [8, 'missing-value'],
      [9, 'not-a-number'],
      [10, 'delivery-too-deep'],
    ]);
    expect(reading.deliveries).toEqual([{ parcelCode: '001', date: '2023-06-07', volume: 100 }]);
    expect(reading.findings.find(({ code }) => code === 'delivery-too-deep')?.limit).toBe('600 mm in a day, 6000 m³ on this parcel');
  });

  test('two turns that are too deep together leave the day out', async () => {
    const reading = await read('deliveries', 'parcel,date,depth_mm\n001,2023-06-01,400\n001,2023-06-01,300\n');
    expect(reading.deliveries).toEqual([]);
    expect(errors(reading)).toEqual([[2, 'delivery-too-deep']]);
  });

  test('volume and depth of a row must agree', async () => {
    const reading = await read('deliveries', 'parcel,date,volume_m3,depth_mm\n001,2023-06-01,1000,25\n001,2023-06-02,1000,40\n');
    expect(reading.deliveries).toHaveLength(1);
    expect(errors(reading)).toEqual([[3, 'volume-and-depth-differ']]);
  });

  test('what looks like a slip is told', async () => {
    const twice = await read('deliveries', 'parcel,date,volume_m3\n001,2023-06-01,10\n001,2023-06-01,10\n');
    expect(codes(twice)).toEqual(['rows-alike', 'deliveries-added-up']);
    expect(twice.deliveries[0].volume).toBe(20);
    const outside = await read('deliveries', 'parcel,date,volume_m3\n001,2019-06-01,10\n');
    expect(outside.findings).toMatchObject([{ code: 'date-outside-season', severity: 'warning' }]);
    const unit = await read('deliveries', 'parcel,date,volume (buckets)\n001,2023-06-01,10\n');
    expect(codes(unit)).toContain('unknown-unit');
  });

  test('a table without an amount is refused as a whole', async () => {
    const reading = await read('deliveries', 'parcel,date,who\n001,2023-06-01,x\n001,2023-06-02,y\n');
    expect(reading.deliveries).toEqual([]);
    expect(reading.findings.filter(({ severity }) => severity === 'error')).toMatchObject([{ code: 'missing-column', column: 'volume' }]);
  });
});

describe('measurements', () => {
  test('a wide table, with units from its headers', async () => {
    const reading = await read(
      'measurements',
      'parcel,date,depth_cm,water_content_pct,water_table_ft,ECe (dS/m),ecw_us_cm,efficiency\n001,2023-03-28,30,22.5,,,,\n001,2023-03-28,60,28,,,,\n002,2023-03-29,,,6,2.4,800,75\n',
    );
    expect(errors(reading)).toEqual([]);
    expect(reading.measurements).toEqual([
      { parcelCode: '001', date: '2023-03-28', quantity: 'water_content_m3_m3', depth: 0.3, value: 0.225 },
      { parcelCode: '001', date: '2023-03-28', quantity: 'water_content_m3_m3', depth: 0.6, value: 0.28 },
      { parcelCode: '002', date: '2023-03-29', quantity: 'efficiency', depth: 0, value: 0.75 },
      { parcelCode: '002', date: '2023-03-29', quantity: 'soil_salinity_ds_m', depth: 0, value: 2.4 },
      { parcelCode: '002', date: '2023-03-29', quantity: 'water_salinity_ds_m', depth: 0, value: 0.8 },
      { parcelCode: '002', date: '2023-03-29', quantity: 'water_table_depth_m', depth: 0, value: 1.8288 },
    ]);
  });

  test('a long table, with quantity and unit in each row', async () => {
    const reading = await read(
      'measurements',
      [
        'parcel,date,quantity,value,unit,depth_m',
        '001,2023-03-28,Water content,0.21,,0.3',
        '001,2023-03-28,depletion,2,in,0.9',
        '001,2023-03-28,depth to water,150,cm,',
        '001,2023-03-28,ECe,3.2,dS/m,',
        '002,2023-03-28,application efficiency,0.82,,',
        '002,2023-03-28,water_salinity_ds_m,1.1,,',
      ].join('\n'),
    );
    expect(errors(reading)).toEqual([]);
    expect(reading.measurements.map(({ parcelCode, quantity, depth, value }) => [parcelCode, quantity, depth, value])).toEqual([
      ['001', 'root_zone_depletion_mm', 0.9, 50.8],
      ['001', 'soil_salinity_ds_m', 0, 3.2],
      ['001', 'water_content_m3_m3', 0.3, 0.21],
      ['001', 'water_table_depth_m', 0, 1.5],
      ['002', 'efficiency', 0, 0.82],
      ['002', 'water_salinity_ds_m', 0, 1.1],
    ]);
  });

  test('bad rows are named', async () => {
    const reading = await read(
      'measurements',
      [
        'parcel,date,quantity,value,unit,depth_m',
        '009,2023-03-28,ECe,3,,',
        '001,2023-03-28,mood,3,,',
        '001,2023-03-28,ECe,-1,,',
        '001,2023-03-28,ECe,1e12,,',
        '001,2023-03-28,water content,0.2,,',
        '001,2023-03-28,water content,0.95,,0.3',
        '001,2023-03-28,ECe,3,mm,',
        '001,2023-03-28,efficiency,130,,',
        '001,2023-03-28,ECe,,,',
        '001,2023-03-28,depletion,5,,99',
        '001,when,ECe,3,,',
      ].join('\n'),
    );
    expect(errors(reading)).toEqual([
      [2, 'unknown-parcel'],
      [3, 'unknown-quantity'],
      [4, 'value-out-of-range'],
      [5, 'value-out-of-range'],
      [6, 'missing-depth'],
      [7, 'value-out-of-range'],
      [8, 'unknown-unit'],
      [9, 'value-out-of-range'],
      [10, 'missing-value'],
      [11, 'value-out-of-range'],
      [12, 'not-a-date'],
    ]);
    expect(reading.measurements).toEqual([]);
  });

  test('a second value of the same thing is refused, the same value counts once', async () => {
    const reading = await read('measurements', 'parcel,date,ece_ds_m\n001,2023-03-28,2\n001,2023-03-28,2\n001,2023-03-28,3\n');
    expect(reading.measurements).toMatchObject([{ value: 2 }]);
    expect(errors(reading)).toEqual([[4, 'duplicate-measurement']]);
    expect(codes(reading)).toContain('rows-alike');
  });

  test('shares of both kinds in one file are told', async () => {
    const reading = await read('measurements', 'parcel,date,depth_m,water_content\n001,2023-03-28,0.3,22\n001,2023-03-28,0.6,0.25\n');
    expect(reading.measurements.map(({ value }) => value)).toEqual([0.22, 0.25]);
    expect(codes(reading)).toContain('shares-mixed');
  });
});

describe('layers of a soil', () => {
  async function soils(text: string) {
    const reading = await readImport('soils', [textFile(text)], {}, importContext());
    return { ...reading, soils: reading.staged.kind === 'soils' ? reading.staged.soils : [] };
  }

  test('several rows of one code are its layers, the top one gives the rest', async () => {
    const { soils: rows, findings } = await soils(
      'code,name,top_cm,bottom_cm,fc,wp,rew,texture\nA,Two layers,0,40,30,14,9,Loam\nA,,40,150,12,5,,sand\nB,One layer,,,36,22,10,clay\n',
    );
    expect(findings.filter(({ severity }) => severity === 'error')).toEqual([]);
    expect(rows[0]).toMatchObject({
      code: 'A',
      name: 'Two layers',
      fieldCapacity: 0.3,
      readilyEvaporableWater: 9,
      capillaryClass: 'loam',
      layers: [
        { top: 0, bottom: 0.4, fieldCapacity: 0.3, wiltingPoint: 0.14 },
        { top: 0.4, bottom: 1.5, fieldCapacity: 0.12, wiltingPoint: 0.05 },
      ],
    });
    expect(rows[0].texture).toBeUndefined();
    expect(rows[1]).toMatchObject({ code: 'B', texture: 'fine', capillaryClass: 'clay' });
    expect(rows[1].layers).toBeUndefined();
  });

  test('gaps, overlaps and edges the wrong way round are refused', async () => {
    const gap = await soils('code,top_m,bottom_m,fc,wp\nA,0,0.4,0.3,0.1\nA,0.5,1,0.3,0.1\n');
    expect(gap.soils).toEqual([]);
    expect(gap.findings.find(({ severity }) => severity === 'error')).toMatchObject({ code: 'layers-not-joined', row: 3, limit: '0.4 m' });
    const under = await soils('code,top_m,bottom_m,fc,wp\nA,0.2,0.4,0.3,0.1\n');
    expect(under.soils).toEqual([]);
    const turned = await soils('code,top_m,bottom_m,fc,wp\nA,0.4,0.1,0.3,0.1\n');
    expect(turned.findings.find(({ severity }) => severity === 'error')).toMatchObject({ code: 'layer-upside-down' });
  });

  test('saturation, seepage and classes are checked', async () => {
    const good = await soils('code,fc,wp,saturation,percolation_mm_d,capillary_class\nA,30,14,47,4,sandy clay loam\n');
    expect(good.soils[0]).toMatchObject({ saturation: 0.47, percolationRate: 4, capillaryClass: 'sandy-clay-loam' });
    const bad = await soils('code,fc,wp,saturation,capillary_class\nA,30,14,25,loam\nB,30,14,,moss\nC,30,14,,\n');
    expect(bad.soils.map(({ code }) => code)).toEqual(['C']);
    expect(bad.findings.filter(({ severity }) => severity === 'error').map(({ code }) => code)).toEqual([
      'saturation-below-field-capacity',
      'unknown-class',
    ]);
    const odd = await soils('code,fc,wp,texture\nA,30,14,Deep alluvium\n');
    expect(odd.soils[0].name).toBe('Deep alluvium');
    expect(odd.findings.map(({ code }) => code)).toContain('texture-unknown');
  });
});
