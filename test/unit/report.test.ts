import { type StyleSpecification, validateStyleMin } from '@maplibre/maplibre-gl-style-spec';
import { beforeAll, describe, expect, test } from 'vitest';
import { pdfReport } from '../../lib/files/pdf-report.ts';
import { CAUTIONS, INVENTED_CAUTION } from '../../lib/report/cautions.ts';
import { classColours } from '../../lib/report/colour-scale.ts';
import { districtReport } from '../../lib/report/district-report.ts';
import { mapStyle } from '../../lib/report/map-style.ts';
import type { ParcelPeriodRow } from '../../lib/report/parcel-period-row.ts';
import { formatArea, formatDepth, formatFlow, formatShare, formatVolume, numberText } from '../../lib/report/quantity-text.ts';
import type { ReachPeriodRow } from '../../lib/report/reach-period-row.ts';
import { summarise } from '../../lib/report/summary.ts';
import { type ColumnPlan, tableOf } from '../../lib/report/table.ts';
import { weeklyBars } from '../../lib/report/weekly-bars.ts';
import { parcelRows, reachRows, reportInput } from '../support/report-district.ts';

describe('numbers for people', () => {
  // NIST SP 811: 1 in = 25.4 mm, 1 ac-ft = 1233.48183754752 m³, 1 ft³ = 0.028316846592 m³, 1 ac = 4046.8564224 m².
  test.each([
    [formatDepth(12.34, 'metric'), '12.3 mm'],
    [formatDepth(1234.5, 'metric'), '1\u202f235 mm'],
    [formatDepth(25.4, 'us'), '1.00 in'],
    [formatDepth(-0.01, 'metric'), '0.0 mm'],
    [formatDepth(Number.NaN, 'metric'), '–'],
    [formatVolume(9999, 'metric'), '9\u202f999 m³'],
    [formatVolume(12_345, 'metric'), '12.3 thousand m³'],
    [formatVolume(123_456_789, 'metric'), '123 million m³'],
    [formatVolume(1233.48183754752, 'us'), '1.0 ac-ft'],
    [formatVolume(1233481.83754752, 'us'), '1,000 ac-ft'],
    [formatFlow(0.0456, 'metric'), '45.6 L/s'],
    [formatFlow(12.345, 'metric'), '12.3 m³/s'],
    [formatFlow(0.028316846592, 'us'), '1.00 cfs'],
    [formatArea(123_456, 'metric'), '12.3 ha'],
    [formatArea(4046.8564224 * 640, 'us'), '640 ac'],
    [formatShare(0.754), '75 %'],
    [formatShare(Number.NaN), '–'],
    [numberText(-1234567.5, 1, 'us'), '−1,234,567.5'],
  ])('%s', (text, expected) => {
    expect(text).toBe(expected);
  });
});

describe('tables', () => {
  const parcelPlans: readonly ColumnPlan<ParcelPeriodRow>[] = [
    { name: 'crops', header: 'Crops', quantity: 'text', value: (row) => row.crops.join('; ') },
    { name: 'area', header: 'Area', quantity: 'm2', value: (row) => row.area },
    { name: 'crop_et', header: 'Crop ET', quantity: 'mm', value: (row) => row.cropEt },
    { name: 'gross_requirement', header: 'Gross requirement', quantity: 'mm', value: (row) => row.grossRequirement },
    { name: 'stress_coefficient', header: 'Stress coefficient', quantity: 'plain', value: (row) => row.stressCoefficient },
    { name: 'gross_requirement_volume', header: 'Gross volume', quantity: 'm3', value: (row) => row.grossVolume },
  ];
  const reachPlans: readonly ColumnPlan<ReachPeriodRow>[] = [
    { name: 'head_inflow', header: 'Head inflow', quantity: 'm3', value: (row) => row.headInflow },
    { name: 'peak_flow', header: 'Peak flow', quantity: 'm3_s', value: (row) => row.peakFlow },
    { name: 'capacity', header: 'Capacity', quantity: 'm3_s', value: (row) => row.capacity },
    { name: 'capacity_share', header: 'Busiest week of capacity', quantity: 'percent', value: (row) => row.capacityShare },
  ];

  test('columns carry the unit of the system in their key', () => {
    const metric = tableOf('Parcels', parcelPlans, parcelRows(), 'metric');
    const us = tableOf('Parcels', parcelPlans, parcelRows(), 'us');
    const keys = (table: typeof metric) => table.columns.map((column) => column.key);
    expect(keys(metric)).toEqual(expect.arrayContaining(['area_ha', 'crop_et_mm', 'gross_requirement_volume_m3', 'stress_coefficient']));
    expect(keys(us)).toEqual(expect.arrayContaining(['area_ac', 'crop_et_in', 'gross_requirement_volume_acft', 'stress_coefficient']));
    expect(keys(tableOf('Canals', reachPlans, reachRows(), 'us'))).toEqual(
      expect.arrayContaining(['head_inflow_acft', 'peak_flow_cfs', 'capacity_cfs', 'capacity_share_pct']),
    );
    expect(new Set(keys(metric)).size).toBe(keys(metric).length);
  });

  test('values are converted, missing is null', () => {
    const us = tableOf('Parcels', parcelPlans, parcelRows(), 'us');
    const cell = (row: number, key: string) => us.rows[row][us.columns.findIndex((column) => column.key === key)];
    // parcel 1: 100 mm on 10 ha = 10 000 m³ = 8.107 ac-ft; 10 ha = 24.711 ac
    expect(cell(0, 'gross_requirement_in')).toBe(3.937);
    expect(cell(0, 'gross_requirement_volume_acft')).toBe(8.107);
    expect(cell(0, 'area_ac')).toBe(24.711);
    expect(cell(11, 'crop_et_in')).toBeNull();
    expect(cell(1, 'crops')).toBe('Winter wheat; Maize, sweet');
  });

  test('a summary weighs depth by area and keeps a missing parcel in its own group', () => {
    const rows = summarise(parcelRows(), (row) => row.reach ?? '');
    const one = rows.find((row) => row.name === 'L1');
    // parcels 1–6: Σ (10 + i)(100 + 50 i) = 60·100 + 15·100 + 50·(10·15 + 55) = 17 750 ha mm over 75 ha
    expect(one?.grossVolume).toBeCloseTo(177_500, 6);
    expect(one?.grossRequirement).toBeCloseTo(17_750 / 75, 9);
    expect(one?.parcelCount).toBe(6);
    expect(rows.find((row) => row.name === 'L2')?.grossVolume).toBeNaN();
  });
});

describe('charts', () => {
  const weeks = reportInput('metric').weeks;
  const chart = weeklyBars({ weeks, width: 600, height: 200, units: 'metric' });

  test('bar heights stand in the ratio of the volumes', () => {
    expect(chart.bars[1].height / chart.bars[0].height).toBeCloseTo(2, 9);
    expect(chart.bars[2].height).toBe(0);
    expect(chart.bars[3].forecast).toBe(true);
    expect(chart.bars[3].width / chart.bars[0].width).toBeCloseTo(9 / 7, 9);
  });

  test('bars and bands stay inside the plot and stand on its base', () => {
    const { plot } = chart;
    for (const bar of chart.bars) {
      expect(bar.x).toBeGreaterThanOrEqual(plot.x);
      expect(bar.x + bar.width).toBeLessThanOrEqual(plot.x + plot.width + 1e-9);
      expect(bar.y).toBeGreaterThanOrEqual(plot.y - 1e-9);
      expect(bar.y + bar.height).toBeCloseTo(plot.y + plot.height, 9);
    }
    expect(chart.bars[0].band?.top).toBeLessThan(chart.bars[0].y);
    expect(chart.bars[0].band?.bottom).toBeGreaterThan(chart.bars[0].y);
  });

  test('the axis says its unit and starts at zero', () => {
    expect(chart.yTitle).toBe('Volume, thousand m³');
    expect(chart.yTicks[0].label).toBe('0');
    expect(weeklyBars({ weeks, width: 600, height: 200, units: 'us' }).yTitle).toBe('Volume, ac-ft');
    expect(chart.description).toContain('350 thousand m³');
  });

  test('no weeks, or nothing computed, is an empty chart', () => {
    expect(weeklyBars({ weeks: [], width: 600, height: 200, units: 'metric' }).bars).toEqual([]);
    const empty = weeklyBars({
      weeks: [{ start: '2024-01-01', end: '2024-01-07', volume: Number.NaN }],
      width: 600,
      height: 200,
      units: 'metric',
    });
    expect(empty.bars[0].height).toBe(0);
    expect(empty.description).toBe('No volume has been computed.');
  });
});

describe('map style', () => {
  const empty = { type: 'FeatureCollection' as const, features: [] };
  const request = {
    parcelTiles: 'http://127.0.0.1/p/{z}/{x}/{y}.mvt',
    canalTiles: 'http://127.0.0.1/c/{z}/{x}/{y}.mvt',
    maxZoom: 14,
    sites: empty,
    outline: empty,
  };

  test.each(['light', 'dark'] as const)('is valid against the style specification, %s', (theme) => {
    for (let count = 0; count <= 9; count++) {
      const style = mapStyle({
        ...request,
        theme,
        colours: count === 0 ? [] : classColours(count, 'amount', theme),
        bounds: [-116, 38, -115, 39],
      });
      expect(validateStyleMin(style as unknown as StyleSpecification)).toEqual([]);
    }
  });

  test('asks for nothing but the tiles', () => {
    const style = mapStyle({ ...request, theme: 'light', colours: [] });
    expect(style.glyphs).toBeUndefined();
    expect(style.sprite).toBeUndefined();
    expect(JSON.stringify(style).match(/https?:\/\/[^"]+/g)).toEqual([request.parcelTiles, request.canalTiles]);
    expect(style.layers.some((layer) => layer.type === 'symbol')).toBe(false);
  });
});

describe('district report', () => {
  test('says what is invented, and what the figures do not replace', () => {
    const report = districtReport(reportInput('metric'));
    expect(report.notice).toBe(INVENTED_CAUTION);
    expect(JSON.stringify(report.blocks)).toContain(CAUTIONS.decisions);
    expect(districtReport({ ...reportInput('metric'), district: { name: 'x', invented: false } }).notice).toBeNull();
  });

  test('key figures come from the canal at the headworks', () => {
    const [figures] = districtReport(reportInput('metric')).blocks;
    if (figures.kind !== 'figures') throw new Error('the report opens with its key figures');
    const of = (label: string) => figures.items.find((item) => item.label === label)?.value;
    expect(of('Inflow at headworks')).toBe('750 thousand m³');
    expect(of('Delivered of inflow')).toBe('80 %');
    expect(of('Busiest week at headworks')).toBe('1.10 m³/s');
    expect(of('Reaches over capacity')).toBe('1 of 3');
  });

  test('the map is drawn to scale: 0.009° of latitude is 1000.8 m on the mean sphere', () => {
    const block = districtReport(reportInput('metric')).blocks.find((each) => each.kind === 'map');
    if (block?.kind !== 'map') throw new Error('the report has a map');
    const ys = block.map.parcels[0].rings[0].map(([, y]) => y);
    // IUGG mean radius 6 371 008.8 m
    expect((Math.max(...ys) - Math.min(...ys)) * block.map.metresPerUnit).toBeCloseTo((0.009 * Math.PI * 6371008.8) / 180, 1);
    expect(block.map.parcels.at(-1)?.classIndex).toBe(-1);
  });
});

describe('PDF', () => {
  const write = async (units: 'metric' | 'us', rows: number) =>
    Buffer.from(await pdfReport(districtReport(reportInput(units, rows)))).toString('latin1');
  const count = (text: string, pattern: RegExp) => text.match(pattern)?.length ?? 0;
  let short = '';
  let long = '';
  beforeAll(async () => {
    short = await write('metric', 1);
    long = await write('metric', 40);
  });

  test('is whole: title, language, tags, embedded fonts', () => {
    expect(short.startsWith('%PDF-1.7')).toBe(true);
    expect(short.trimEnd().endsWith('%%EOF')).toBe(true);
    for (const part of ['/StructTreeRoot', '/Lang (en)', '/DisplayDocTitle true', '/FontFile2', '/S /Figure', '/S /H1'])
      expect(short).toContain(part);
    expect(short).not.toContain('/Helvetica');
  });

  test('carries the day it was made, not the clock: written again it is the same', async () => {
    expect(short).toContain('(D:20240502000000Z)');
    expect((await write('metric', 1)) === short).toBe(true);
  });

  test('tables go over pages with their header repeated', () => {
    // 120 canal rows instead of 3, nine columns, at most 60 rows to a page
    expect(count(long, /\/S \/TD\b/g) - count(short, /\/S \/TD\b/g)).toBe(9 * 117);
    const more = count(long, /\/S \/TH\b/g) - count(short, /\/S \/TH\b/g);
    expect(more).toBeGreaterThanOrEqual(9 * 2);
    expect(more % 9).toBe(0);
    expect(count(long, /\/Type \/Page\b/g)).toBeGreaterThan(count(short, /\/Type \/Page\b/g));
  });

  test('paper follows the units: ISO 216 A4, or US Letter', async () => {
    expect(short).toContain('/MediaBox [0 0 595.28 841.89]');
    expect(await write('us', 1)).toContain('/MediaBox [0 0 612 792]');
  });
});
