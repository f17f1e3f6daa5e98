import { describe, expect, test } from 'vitest';
import { type ImportOptions, readImport } from '../../lib/files/read-import.ts';
import type { ImportContext } from '../../lib/files/reading.ts';
import { importContext, textFile } from '../support/import-context.ts';

async function stations(text: string, options: ImportOptions = {}, over: Partial<ImportContext> = {}) {
  const reading = await readImport('stations', [textFile(text)], options, importContext(over));
  return { ...reading, sites: reading.staged.kind === 'stations' ? reading.staged.sites : [] };
}

const codes = (reading: { findings: readonly { code: string }[] }) => reading.findings.map(({ code }) => code);

describe('a table of stations', () => {
  test('columns in any order and case, feet to metres, empty height stays unknown', async () => {
    const { sites, findings } = await stations(
      'LONGITUDE,Latitude,Elevation (ft),Site,Name,wind_height\n-120.5,37.25,1000,007,"Mill, east",\n-120.6,37.3,0,008,,10\n',
    );
    expect(sites).toEqual([
      { code: '007', name: 'Mill, east', longitude: -120.5, latitude: 37.25, elevation: 304.8, windHeight: null, zone: null },
      { code: '008', name: '008', longitude: -120.6, latitude: 37.3, elevation: 0, windHeight: 10, zone: null },
    ]);
    expect(findings).toMatchObject([{ severity: 'warning', code: 'no-wind-height' }]);
  });

  test('a wind height in the options fills the empty ones', async () => {
    const { sites, findingCounts } = await stations('site,lat,lon,elevation_m\na,37,-120,5\n', { windHeight: 3 });
    expect(sites[0].windHeight).toBe(3);
    expect(findingCounts.warning).toBe(0);
  });

  test('bad rows are named and left out', async () => {
    const reading = await stations(
      'site,latitude,longitude,elevation_m,wind_height_m\na,97,-120,5,2\nb,37,,5,2\n,37,-120,5,2\nc,37,-120,high,2\nd,37,-120,5,2\nd,38,-120,5,2\n',
    );
    expect(reading.sites.map(({ code }) => code)).toEqual(['d']);
    expect(reading.findings.filter(({ severity }) => severity === 'error')).toMatchObject([
      { row: 2, column: 'latitude', value: '97', limit: '-90 to 90 °' },
      { row: 3, code: 'missing-coordinates' },
      { row: 4, code: 'missing-code' },
      { row: 5, code: 'not-a-number', value: 'high' },
      { row: 7, code: 'duplicate-code' },
    ]);
    expect(reading.understood).toMatchObject({ rowCount: 6, usableRows: 1 });
  });

  test('west counted positive is found when the district is known', async () => {
    const box: [number, number, number, number] = [-121, 37, -120, 38];
    const reading = await stations('site,lat,lon,elevation_m,wind_height_m\na,37.5,120.5,5,2\n', {}, { districtBox: box });
    expect(reading.findings).toMatchObject([{ code: 'station-far-away', advice: 'West longitudes are negative: change the sign.' }]);
  });

  test('codes for missing in elevation and wind height leave them empty, with a note', async () => {
    const reading = await stations(
      'site,lat,lon,elevation_m,wind_height_m\na,37,-120,-9999,-999\nb,37,-120,-9999.0,2\nc,37,-120,-30,999\n',
    );
    expect(reading.sites.map(({ code, elevation, windHeight }) => [code, elevation, windHeight])).toEqual([
      ['a', null, null],
      ['b', null, 2],
      ['c', -30, null],
    ]);
    expect(reading.findingCounts.error).toBe(0);
    expect(reading.findings.filter(({ code }) => code === 'missing-value')).toMatchObject([
      { severity: 'note', message: '"-9999" treated as missing in column "elevation_m", 1 cell.' },
      { severity: 'note', message: '"-9999.0" treated as missing in column "elevation_m", 1 cell.' },
      { severity: 'note', message: '"-999" treated as missing in column "wind_height_m", 1 cell.' },
      { severity: 'note', message: '"999" treated as missing in column "wind_height_m", 1 cell.' },
    ]);
    const one = await stations('site,lat,lon\na,37,-120\n');
    expect(one.findings.map(({ message }) => message.slice(0, 14))).toEqual(['1 station has ', '1 station has ']);
    // -999 ft would be a place 304 m below the sea, but is the code
    expect((await stations('site,lat,lon,elevation_ft\na,37,-120,-999\n')).sites[0].elevation).toBeNull();
  });

  test('codes that are too long or read as a folder are refused', async () => {
    const reading = await stations(`site,lat,lon\n.,37,-120\n${'x'.repeat(101)},37,-120\n${'y'.repeat(100)},37,-120\n`);
    expect(reading.sites.map(({ code }) => code)).toEqual(['y'.repeat(100)]);
    expect(reading.findings.filter(({ severity }) => severity === 'error')).toMatchObject([
      { code: 'bad-code', row: 2, value: '.' },
      { code: 'code-too-long', row: 3, limit: 'at most 100 characters' },
    ]);
  });

  test('without coordinates the file is refused', async () => {
    const reading = await stations('site,name\na,b\n');
    expect(codes(reading)).toEqual(['missing-column', 'missing-column']);
    expect(reading.sites).toEqual([]);
  });
});
