import { describe, expect, test } from 'vitest';
import { readImport } from '../../lib/files/read-import.ts';
import { defaultReadilyEvaporableWater, totalEvaporableWater } from '../../lib/files/soils-csv.ts';
import { importContext, textFile } from '../support/import-context.ts';

async function soils(text: string) {
  const reading = await readImport('soils', [textFile(text)], {}, importContext());
  return { ...reading, soils: reading.staged.kind === 'soils' ? reading.staged.soils : [] };
}

describe('a table of soils', () => {
  test('percent, TEW by FAO-56 Eq. 73, REW by texture', async () => {
    // FAO-56 Example 35: sandy loam θFC 0.23, θWP 0.10, Ze 0.1 m has TEW 18 mm and REW 8 mm
    const { soils: rows, findings } = await soils(
      'code,name,field_capacity,wilting_point,rew,tew,ze_m,curve_number,root_limit_m\nsl,Sandy loam,23,10,,,0.1,70,\nlo,Loam,25,12,9,20,,,1.2\n',
    );
    expect(rows[0]).toMatchObject({
      code: 'sl',
      fieldCapacity: 0.23,
      wiltingPoint: 0.1,
      totalEvaporableWater: 18,
      readilyEvaporableWater: 8,
      curveNumber: 70,
      rootLimit: null,
    });
    expect(rows[1]).toMatchObject({
      fieldCapacity: 0.25,
      readilyEvaporableWater: 9,
      totalEvaporableWater: 20,
      evaporationDepth: 0.1,
      rootLimit: 1.2,
    });
    expect(findings.map(({ code }) => code)).toEqual(['water-content-unit', 'water-content-unit', 'tew-derived', 'rew-derived']);
  });

  test('the unit of water contents is that of the column; a cell of the other is refused', async () => {
    const percent = await soils('code,fc,wp\na,23,10\nb,0.25,12\nc,36,0.2\nd,30,15\n');
    expect(percent.soils.map(({ code, fieldCapacity, wiltingPoint }) => [code, fieldCapacity, wiltingPoint])).toEqual([
      ['a', 0.23, 0.1],
      ['d', 0.3, 0.15],
    ]);
    expect(percent.findings.filter(({ severity }) => severity === 'error')).toMatchObject([
      { code: 'value-out-of-range', row: 3, column: 'fc', value: '0.25' },
      { code: 'value-out-of-range', row: 4, column: 'wp', value: '0.2' },
    ]);
    expect(percent.findings.find(({ code }) => code === 'water-content-unit')).toMatchObject({
      severity: 'note',
      message: 'Column "fc" is read in percent by volume: its median is above 1.',
    });
    const fraction = await soils('code,fc,wp\na,0.23,0.1\nb,25,0.12\nc,0.36,0.2\n');
    expect(fraction.soils.map(({ code, fieldCapacity }) => [code, fieldCapacity])).toEqual([
      ['a', 0.23],
      ['c', 0.36],
    ]);
    expect(fraction.findings.filter(({ severity }) => severity === 'error')).toMatchObject([{ row: 3, column: 'fc', value: '25' }]);
  });

  test('codes that are too long or read as a folder are refused', async () => {
    const reading = await soils(`code,fc,wp\n..,0.3,0.1\n${'x'.repeat(101)},0.3,0.1\n${'y'.repeat(100)},0.3,0.1\n`);
    expect(reading.soils.map(({ code }) => code)).toEqual(['y'.repeat(100)]);
    expect(reading.findings.filter(({ severity }) => severity === 'error')).toMatchObject([
      { code: 'bad-code', row: 2 },
      { code: 'code-too-long', row: 3, limit: 'at most 100 characters' },
    ]);
  });

  test('defaults lie in the ranges of FAO-56 Table 19', () => {
    // texture, middle field capacity, REW low, REW high [mm], as printed in Table 19
    const rows: [string, number, number, number][] = [
      ['sand', 0.12, 2, 7],
      ['loamy sand', 0.15, 4, 8],
      ['sandy loam', 0.23, 6, 10],
      ['loam', 0.25, 8, 10],
      ['silt loam', 0.29, 8, 11],
      ['silt', 0.32, 8, 11],
      ['clay', 0.36, 8, 12],
    ];
    for (const [, fieldCapacity, low, high] of rows) {
      expect(defaultReadilyEvaporableWater(fieldCapacity)).toBeGreaterThanOrEqual(low);
      expect(defaultReadilyEvaporableWater(fieldCapacity)).toBeLessThanOrEqual(high);
    }
    expect(totalEvaporableWater(0.23, 0.1, 0.1)).toBeCloseTo(18, 9);
  });

  test('what cannot be is refused by row', async () => {
    const reading = await soils(
      'code,fc,wp,rew,tew,cn\na,0.1,0.2,,,\nb,,0.1,,,\nc,0.3,0.1,40,,\nd,0.3,0.1,25,20,\ne,0.3,0.1,,,20\nf,0.3,0.1,,,\nf,0.3,0.1,,,\n',
    );
    expect(reading.findings.filter(({ severity }) => severity === 'error').map(({ row, code }) => [row, code])).toEqual([
      [2, 'wilting-above-field-capacity'],
      [3, 'missing-value'],
      [4, 'value-out-of-range'],
      [5, 'rew-above-tew'],
      [6, 'value-out-of-range'],
      [8, 'duplicate-code'],
    ]);
    expect(reading.soils.map(({ code }) => code)).toEqual(['f']);
  });
});
