import { describe, expect, test } from 'vitest';
import { plantingDateIn } from '../../lib/files/planting-defaults.ts';
import { type ImportOptions, readImport } from '../../lib/files/read-import.ts';
import { importContext, textFile } from '../support/import-context.ts';

async function plantings(text: string, options: ImportOptions = {}) {
  const reading = await readImport('plantings', [textFile(text)], options, importContext({ knownParcels: ['001', '002', '003'] }));
  return { ...reading, rows: reading.staged.kind === 'plantings' ? reading.staged.plantings : [] };
}

const errors = (reading: { findings: readonly { severity: string; row?: number; code: string }[] }) =>
  reading.findings.filter(({ severity }) => severity === 'error').map(({ row, code }) => [row, code]);

describe('a table of plantings', () => {
  test('everything given', async () => {
    const { rows, findings } = await plantings(
      'parcel,season,crop,calendar,planting_date,harvest_date,cut_dates,area_share\n001,2023,maize-grain,maize-late,2023-05-02,2023-09-30,2023-07-01;2023-06-01,0.5\n',
    );
    expect(rows).toEqual([
      {
        parcelCode: '001',
        seasonCode: '2023',
        sequence: 1,
        cropCode: 'maize-grain',
        calendarCode: 'maize-late',
        plantingDate: '2023-05-02',
        harvestDate: '2023-09-30',
        cutDates: ['2023-06-01', '2023-07-01'],
        areaShare: 0.5,
      },
    ]);
    expect(findings).toEqual([]);
  });

  test('the first calendar of the crop and its customary day stand in, with a note', async () => {
    const { rows, findings } = await plantings('parcel,crop\n001,"Maize, grain"\n', { season: '2023' });
    expect(rows[0]).toMatchObject({ calendarCode: 'maize-early', plantingDate: '2023-04-15', areaShare: 1 });
    expect(findings.map(({ code }) => code)).toEqual(['calendar-assumed', 'planting-date-assumed']);
  });

  test('the customary day is looked for in both years of a season over New Year', () => {
    const season = { code: 'w', startDate: '2023-10-01', endDate: '2024-05-31' };
    expect(plantingDateIn(season, '11-10')).toEqual({ date: '2023-11-10', customary: true });
    expect(plantingDateIn(season, '03-01')).toEqual({ date: '2024-03-01', customary: true });
    expect(plantingDateIn(season, '07-01')).toEqual({ date: '2023-10-01', customary: false });
  });

  test('bad rows are named', async () => {
    const reading = await plantings(
      'parcel,season,crop,planting_date,harvest_date\n009,2023,almond,,\n001,1999,almond,,\n001,2023,spelt,,\n001,2023,maize-grain,2024-05-01,\n001,2023,maize-grain,2023-05-01,2023-04-01\n001,2023,alfalfa-hay,2023-05-01,\n001,2023,maize-grain,soon,\n',
    );
    expect(errors(reading)).toEqual([
      [2, 'unknown-parcel'],
      [3, 'unknown-season'],
      [4, 'unmapped-crop'],
      [5, 'date-outside-season'],
      [6, 'harvest-before-planting'],
      [7, 'unknown-calendar'],
      [8, 'not-a-date'],
    ]);
    expect(reading.rows).toEqual([]);
  });

  test('shares that overlap to more than the parcel are refused; a second crop after harvest is not', async () => {
    const reading = await plantings(
      'parcel,season,crop,planting_date,harvest_date,area_share\n001,2023,maize-grain,2023-04-10,2023-08-01,60\n001,2023,almond,2023-04-20,,0.5\n002,2023,maize-grain,2023-08-02,,1\n002,2023,maize-grain,2023-04-10,2023-08-01,1\n',
    );
    expect(errors(reading)).toEqual([[3, 'area-share-above-one']]);
    expect(reading.rows.map(({ parcelCode, sequence, plantingDate }) => [parcelCode, sequence, plantingDate])).toEqual([
      ['001', 1, '2023-04-10'],
      ['002', 1, '2023-04-10'],
      ['002', 2, '2023-08-02'],
    ]);
  });
});
