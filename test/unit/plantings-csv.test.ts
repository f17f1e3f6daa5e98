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

  describe('how a planting is watered and covered', () => {
    const head = 'parcel,season,crop,planting_date';
    const one = async (columns: string, cells: string) => {
      const reading = await plantings(`${head},${columns}\n001,2023,maize-grain,2023-05-02,${cells}\n`);
      return { ...reading, practice: reading.rows[0]?.practice };
    };

    test.each([
      ['irrigation_rule', 'none', { irrigation: { kind: 'none' } }],
      ['irrigation_rule', 'Rain-fed', { irrigation: { kind: 'none' } }],
      ['irrigation_rule,irrigation_interval_d', 'interval,7', { irrigation: { kind: 'interval', days: 7 } }],
      ['interval days', '10', { irrigation: { kind: 'interval', days: 10 } }],
      ['irrigation depth (in)', '2', { irrigation: { kind: 'fixed-depth', depth: 50.8 } }],
      ['trigger,refill', '0.6,90', { irrigation: { kind: 'depletion', trigger: 0.6, refill: 0.9 } }],
      ['trigger', '150', { irrigation: { kind: 'depletion', trigger: 1.5 } }],
      [
        'irrigation_rule,irrigation_trigger,trigger_development,refill_late',
        'deficit,1,1.4,0.5',
        {
          irrigation: {
            kind: 'deficit',
            stages: {
              initial: { trigger: 1, refill: 1 },
              development: { trigger: 1.4, refill: 1 },
              mid: { trigger: 1, refill: 1 },
              late: { trigger: 1, refill: 0.5 },
            },
          },
        },
      ],
      ['mulch,mulch_cover', 'plastic,70', { mulch: { kind: 'plastic', cover: 0.7 } }],
      ['mulch', 'organic', { mulch: { kind: 'organic', cover: 1 } }],
      ['canopy_cover,canopy_height (ft)', '0.45,10', { canopy: { cover: 0.45, height: 3.048 } }],
      ['pre_irrigation_days,pre_irrigation_depth', '14,80', { preIrrigation: { daysBefore: 14, depth: 80 } }],
      ['pre_irrigation_days', '14', { preIrrigation: { daysBefore: 14 } }],
      [
        'germination',
        '2:20; 8:15.5',
        {
          germination: [
            { daysAfter: 2, depth: 20 },
            { daysAfter: 8, depth: 15.5 },
          ],
        },
      ],
      ['mulch', 'none', undefined],
      ['irrigation_rule', '', undefined],
    ])('%s: %s', async (columns, cells, expected) => {
      const { practice, findings } = await one(columns, cells);
      expect(findings.filter(({ severity }) => severity === 'error')).toEqual([]);
      if (expected === undefined) expect(practice).toBeUndefined();
      else expect(practice).toEqual(expected);
    });

    test.each([
      ['irrigation_rule', 'sometimes', 'unknown-irrigation-rule', /depletion, interval, fixed-depth, daily, deficit, none/],
      ['irrigation_rule', 'interval', 'irrigation-rule-incomplete', /days between/],
      ['irrigation_rule', 'fixed-depth', 'irrigation-rule-incomplete', /net depth in mm/],
      ['irrigation_rule', 'deficit', 'irrigation-rule-incomplete', /trigger for every stage/],
      ['irrigation_interval', '2.5', 'not-whole-days', /1 to 120 d/],
      ['irrigation_interval', '400', 'value-out-of-range', /1 to 120 d/],
      ['irrigation_depth', '0.2', 'value-out-of-range', /1 to 500 mm/],
      ['mulch', 'gravel', 'unknown-mulch', /plastic, organic, none/],
      ['mulch_cover', '0.5', 'unknown-mulch', /plastic, organic, none/],
      ['canopy_cover', '0.5', 'canopy-incomplete', /both cover and height/],
      ['canopy_cover,canopy_height', '0.5,90', 'value-out-of-range', /0.1 to 30 m/],
      ['germination', '20 mm', 'not-a-germination', /days 0 to 120/],
      ['germination', '2:900', 'not-a-germination', /1 to 500 mm/],
    ])('%s "%s" is refused: %s', async (columns, cells, code, limit) => {
      const reading = await one(columns, cells);
      expect(errors(reading)).toEqual([[2, code]]);
      const [finding] = reading.findings.filter(({ severity }) => severity === 'error');
      expect(finding.limit).toMatch(limit);
      expect(finding.advice).toBeTruthy();
      expect(reading.rows).toEqual([]);
    });
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
