import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { nullFromNaN } from '../../lib/base/missing.ts';
import { type ImportOptions, readImport } from '../../lib/files/read-import.ts';
import type { ImportReading } from '../../lib/files/reading.ts';
import { bytesFile, importContext, textFile } from '../support/import-context.ts';

const SITES = [
  { code: '04127', name: 'Murphy' },
  { code: 'B', name: 'North Field Station' },
];

async function weather(text: string | Uint8Array, options: ImportOptions = {}, sites = SITES): Promise<ImportReading> {
  const file = typeof text === 'string' ? textFile(text, 'w.csv') : bytesFile(text, 'w.csv');
  return readImport('weather', [file], options, importContext({ knownSites: sites }));
}

/** Value of a site and day in the staged blocks, to the six figures that single precision holds for certain. */
function value(reading: ImportReading, variable: string, site: string, date: string, hour = 0): number | null | undefined {
  if (reading.staged.kind !== 'weather') return undefined;
  const block = reading.staged.blocks.find((candidate) => candidate.variable === variable && candidate.month === `${date.slice(0, 8)}01`);
  const place = block ? block.siteCodes.indexOf(site) : -1;
  if (!block || place < 0) return undefined;
  const days = block.values.length / block.siteCodes.length / block.steps;
  return nullFromNaN(Number(block.values[(place * days + Number(date.slice(8)) - 1) * block.steps + hour].toPrecision(6)));
}

const codes = (reading: ImportReading, severity = 'error') =>
  reading.findings.filter((finding) => finding.severity === severity).map((finding) => finding.code);

describe('a table of weather', () => {
  test('ids keep their zeros, units are converted, rows come in any order', async () => {
    const reading = await weather(
      'DATE,Station,Tmax (°F),tmin_f,rain_in,wind mph\n2024-02-29,04127,77,50,1,10\n2024-02-28,04127,68,41,0,5\n',
    );
    expect(reading.findingCounts.error).toBe(0);
    expect(value(reading, 'air_temperature_max_c', '04127', '2024-02-29')).toBe(25);
    expect(value(reading, 'air_temperature_min_c', '04127', '2024-02-28')).toBe(5);
    expect(value(reading, 'precipitation_mm', '04127', '2024-02-29')).toBe(25.4);
    expect(value(reading, 'wind_speed_m_s', '04127', '2024-02-29')).toBeCloseTo(4.4704, 4);
    expect(reading.understood).toMatchObject({
      rowCount: 2,
      usableRows: 2,
      siteCount: 1,
      dateRange: { start: '2024-02-28', end: '2024-02-29' },
    });
    expect(reading.staged).toMatchObject({ source: 'w', rows: 2, sites: 1 });
  });

  test('a column headed "day" whose cells are full dates is the date', async () => {
    const reading = await weather('Station,Day,tmax_c\nB,2024-02-28,20\nB,2024-02-29,21\n');
    expect(reading.findingCounts.error).toBe(0);
    expect(value(reading, 'air_temperature_max_c', 'B', '2024-02-29')).toBe(21);
    expect(reading.understood.columns[1]).toMatchObject({ header: 'Day', role: 'date' });
    const american = await weather('site,day,tmax_c\nB,2/28/2024,20\nB,2/29/2024,21\n');
    expect(value(american, 'air_temperature_max_c', 'B', '2024-02-29')).toBe(21);
    const parts = await weather('site,year,month,day,tmax_c\nB,2024,2,28,20\n');
    expect(value(parts, 'air_temperature_max_c', 'B', '2024-02-28')).toBe(20);
  });

  test('blocks have a value per day of the month and sorted sites', async () => {
    const reading = await weather('site,date,tmax_c\nB,2024-02-03,9\n04127,2024-02-01,8\n');
    expect(reading.staged.kind === 'weather' && reading.staged.blocks).toEqual([
      {
        variable: 'air_temperature_max_c',
        month: '2024-02-01',
        siteCodes: ['04127', 'B'],
        steps: 1,
        values: Float32Array.from([8, ...Array(28).fill(NaN), NaN, NaN, 9, ...Array(26).fill(NaN)]),
      },
    ]);
  });

  test('a units row, decimal commas and semicolons', async () => {
    const reading = await weather('site;date;tmax;radiation\n;;K;W/m²\nB;01.06.2024;300,15;100\nB;13.06.2024;301,15;\n');
    expect(value(reading, 'air_temperature_max_c', 'B', '2024-06-01')).toBe(27);
    expect(value(reading, 'solar_radiation_mj_m2_d', 'B', '2024-06-01')).toBe(8.64);
    expect(reading.understood).toMatchObject({ delimiter: ';', decimalComma: true, dateOrder: 'dmy' });
  });

  test('codes for missing are counted, and only when out of range', async () => {
    const reading = await weather(
      'site,date,tmax_c,rain_mm\nB,2024-01-01,-9999,9\nB,2024-01-02,-99.9,999\nB,2024-01-03,NA,\nB,2024-01-04,7,0\n',
    );
    expect(reading.findingCounts.error).toBe(0);
    const notes = reading.findings.filter((finding) => finding.code === 'missing-value').map((finding) => finding.message);
    expect(notes).toContain('"-9999" treated as missing in column "tmax_c", 1 cell.');
    expect(notes).toContain('"999" treated as missing in column "rain_mm", 1 cell.');
    expect(notes).toContain('Empty cells treated as missing in column "rain_mm", 1 cell.');
    expect(value(reading, 'precipitation_mm', 'B', '2024-01-02')).toBeNull();
  });

  test('a value out of range is named and dropped, the rest of the row stays', async () => {
    const reading = await weather('site,date,tmax_c,rain_mm\nB,2024-01-01,71,4\n');
    expect(reading.findings).toContainEqual(
      expect.objectContaining({ code: 'value-out-of-range', row: 2, column: 'tmax_c', value: '71', limit: '-60 to 60 °C' }),
    );
    expect(value(reading, 'precipitation_mm', 'B', '2024-01-01')).toBe(4);
    expect(value(reading, 'air_temperature_max_c', 'B', '2024-01-01')).toBeUndefined();
    expect(reading.preview).toMatchObject({ kind: 'table', rows: [{ row: 2, status: 'bad' }] });
  });

  test('a minimum above the maximum drops both', async () => {
    const reading = await weather('site,date,tmax_c,tmin_c,rain_mm\nB,2024-01-01,5,9,1\n');
    expect(codes(reading)).toEqual(['tmin-above-tmax']);
    expect(reading.staged.kind === 'weather' && reading.staged.blocks.map((block) => block.variable)).toEqual(['precipitation_mm']);
  });

  test('repeated days: the same is a note, another is an error and the first stays', async () => {
    const reading = await weather('site,date,tmax_c\nB,2024-01-01,5\nB,2024-01-01,5\nB,2024-01-01,6\n');
    expect(codes(reading)).toEqual(['duplicate-differs']);
    expect(reading.findings[0].message).toContain('Row 4 and row 2');
    expect(codes(reading, 'note')).toContain('duplicate-row');
    expect(value(reading, 'air_temperature_max_c', 'B', '2024-01-01')).toBe(5);
  });

  test('unknown sites are listed with their rows and left out; a name or a number without zeros is joined', async () => {
    const reading = await weather(
      'site,date,tmax_c\nZ9,2024-01-01,5\nZ9,2024-01-02,5\n4127,2024-01-01,5\nnorth field station,2024-01-01,6\n',
    );
    expect(reading.findings).toContainEqual(
      expect.objectContaining({
        severity: 'error',
        code: 'unknown-site',
        row: 2,
        message: '2 rows name 1 unknown site and are left out: Z9 (2).',
      }),
    );
    expect(codes(reading, 'warning')).toEqual(['site-joined', 'site-joined']);
    expect(value(reading, 'air_temperature_max_c', '04127', '2024-01-01')).toBe(5);
    expect(value(reading, 'air_temperature_max_c', 'B', '2024-01-01')).toBe(6);
  });

  test('bad dates are named; ambiguous orders are a warning that the plan settles', async () => {
    const reading = await weather('site,date,tmax_c\nB,01/02/2024,5\nB,2024-02-30,6\n');
    expect(codes(reading)).toEqual(['not-a-date']);
    expect(codes(reading, 'warning')).toContain('date-order-ambiguous');
    const settled = await weather('site,date,tmax_c\nB,01/02/2024,5\n', { plan: { dateOrder: 'mdy' } });
    expect(value(settled, 'air_temperature_max_c', 'B', '2024-01-02')).toBe(5);
    expect(settled.findingCounts.warning).toBe(0);
  });

  test('year with day of year, and year, month, day', async () => {
    const doy = await weather('site,Year,DoY,tmax_c\nB,2024,60,5\nB,2023,366,5\n');
    expect(value(doy, 'air_temperature_max_c', 'B', '2024-02-29')).toBe(5);
    expect(codes(doy)).toEqual(['not-a-date']);
    const parts = await weather('site,year,month,day,tmax_c\nB,2024,2,29,5\n');
    expect(value(parts, 'air_temperature_max_c', 'B', '2024-02-29')).toBe(5);
  });

  test('a jump over years and absent days are told', async () => {
    const reading = await weather('site,date,tmax_c\nB,2018-01-01,5\nB,2021-01-01,5\n');
    expect(codes(reading, 'warning')).toContain('year-jump');
    expect(codes(reading, 'note')).toContain('missing-days');
  });

  test('readings at hours: mean wind, and vapour pressure by FAO-56 Eq. 54', async () => {
    // e°(20 °C) = 2.338 kPa and e°(30 °C) = 4.243 kPa are printed in FAO-56 Annex 2, Table 2.3
    const reading = await weather(
      'site,date,Temp9am,Temp3pm,Humidity9am,Humidity3pm,WindSpeed9am (m/s),WindSpeed3pm (m/s)\nB,2024-01-01,20,30,80,40,2,6\n',
    );
    expect(value(reading, 'vapour_pressure_kpa', 'B', '2024-01-01')).toBeCloseTo((0.8 * 2.338 + 0.4 * 4.243) / 2, 3);
    expect(value(reading, 'wind_speed_m_s', 'B', '2024-01-01')).toBe(4);
    expect(codes(reading, 'note')).toEqual(expect.arrayContaining(['wind-from-hours', 'vapour-pressure-from-hours']));
  });

  test('a plan overrides names, units and roles', async () => {
    const plan = {
      columns: { A: { role: 'site' }, B: { role: 'date' }, C: { role: 'air_temperature_max_c', unit: '°F' }, '3': { role: null } },
    };
    const reading = await weather('A,B,C,rain_mm\nB,2024-01-01,50,7\n', { plan });
    expect(value(reading, 'air_temperature_max_c', 'B', '2024-01-01')).toBe(10);
    expect(reading.understood.columns[3].role).toBeNull();
  });

  test('what cannot be read is refused with a reason and stages nothing', async () => {
    const refusals: [string, string][] = [
      ['site,tmax_c\nB,5\n', 'missing-column'],
      ['site,date,colour\nB,2024-01-01,red\n', 'no-weather-column'],
      ['site,date,tmax_c\n', 'no-rows'],
      ['date,tmax_c\n2024-01-01,5\n', 'missing-column'],
    ];
    for (const [text, code] of refusals) {
      const reading = await weather(text);
      expect(codes(reading)).toContain(code);
      expect(reading.staged).toMatchObject({ kind: 'weather', blocks: [], rows: 0 });
    }
  });

  test('bad options are named and left out', async () => {
    const reading = await weather('site,date,tmax_c\nB,2024-01-01,5\n', {
      windHeight: -3,
      colour: 'red',
      plan: { delimiter: 'x' },
    } as unknown as ImportOptions);
    expect(reading.findings.filter(({ code }) => code === 'bad-option')).toHaveLength(3);
    expect(reading.understood.usableRows).toBe(1);
  });
});

describe('open data', () => {
  const file = (name: string) => new Uint8Array(readFileSync(new URL(`../data/${name}`, import.meta.url)));

  test('US Climate Reference Network 2020 (public domain): ids, leap day, gaps', async () => {
    const stations = await readImport('stations', [bytesFile(file('uscrn-daily-2020.csv'))], {}, importContext());
    const sites = stations.staged.kind === 'stations' ? stations.staged.sites : [];
    expect(sites.map(({ code }) => code)).toContain('04127');
    const reading = await weather(file('uscrn-daily-2020.csv'), {}, [...sites]);
    expect(reading.findingCounts.error).toBe(0);
    expect(reading.understood).toMatchObject({ rowCount: 5124, usableRows: 5124, siteCount: 14 });
    // first line of the file: Tucson, 1 January 2020
    expect(value(reading, 'air_temperature_max_c', '53131', '2020-01-01')).toBe(14.6);
    expect(value(reading, 'solar_radiation_mj_m2_d', '53131', '2020-01-01')).toBe(12.26);
    const february = reading.staged.kind === 'weather' ? reading.staged.blocks.find((block) => block.month === '2020-02-01') : undefined;
    expect(february?.values).toHaveLength(29 * (february?.siteCodes.length ?? 0));
  });

  test('SILO 8137 (CC BY 4.0): padded cells, hPa told from values, source codes ignored', async () => {
    const reading = await weather(file('silo-8137-daily-2021-06.csv'), {}, [{ code: '8137', name: 'Wongan Hills' }]);
    expect(reading.findingCounts.error).toBe(0);
    expect(value(reading, 'vapour_pressure_kpa', '8137', '2021-06-01')).toBeCloseTo(1.16, 6);
    expect(value(reading, 'reference_et_given_mm', '8137', '2021-06-01')).toBe(1);
    expect(reading.understood.columns.filter(({ role, header }) => header.endsWith('_source') && role !== null)).toEqual([]);
  });

  test('FLUXNET2015 US-Ne1 (CC BY 4.0): −9999, W m⁻², deficit to vapour pressure', async () => {
    const reading = await weather(file('fluxnet-us-ne1-daily-2001-2006.csv'), { site: 'US-Ne1' }, [{ code: 'US-Ne1', name: 'Mead' }]);
    expect(reading.findingCounts.error).toBe(0);
    // first line: TA_F 13.546 °C, SW_IN_F 46.063 W m⁻², VPD_F 0.175 hPa
    expect(value(reading, 'solar_radiation_mj_m2_d', 'US-Ne1', '2001-05-30')).toBeCloseTo(46.063 * 0.0864, 4);
    expect(value(reading, 'vapour_pressure_kpa', 'US-Ne1', '2001-05-30')).toBeCloseTo(
      0.6108 * Math.exp((17.27 * 13.546) / (13.546 + 237.3)) - 0.0175,
      4,
    );
    expect(reading.findings.find(({ code }) => code === 'missing-value')?.message).toContain('"-9999" treated as missing');
  });
});

test('a table without a date column is refused with its columns described, so that a role can be chosen', async () => {
  const reading = await weather('Station,when,tmax_c\n04127,2024-02-29,20\n');
  expect(reading.findingCounts.error).toBeGreaterThan(0);
  expect(reading.understood.columns.map((column) => column.header)).toEqual(['Station', 'when', 'tmax_c']);
  const planned = await weather('Station,when,tmax_c\n04127,2024-02-29,20\n', { plan: { columns: { when: { role: 'date' } } } });
  expect(value(planned, 'air_temperature_max_c', '04127', '2024-02-29')).toBe(20);
});
