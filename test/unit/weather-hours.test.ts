/** Tables with several readings a day: stamps, clocks, hours and days. Expected values are reckoned by hand in the comments. */
import { describe, expect, test } from 'vitest';
import { nullFromNaN } from '../../lib/base/missing.ts';
import { type ImportOptions, readImport } from '../../lib/files/read-import.ts';
import type { ImportContext, ImportReading } from '../../lib/files/reading.ts';
import { importContext, textFile } from '../support/import-context.ts';

const SITE = { code: 'S', name: 'South' };

function read(text: string, options: ImportOptions = {}, over: Partial<ImportContext> = {}): Promise<ImportReading> {
  return readImport(
    'weather',
    [textFile(text, 'h.csv')],
    options,
    importContext({ knownSites: [SITE], timeZone: 'Europe/Madrid', ...over }),
  );
}

function value(reading: ImportReading, variable: string, date: string, hour = 0): number | null {
  if (reading.staged.kind !== 'weather') return null;
  const block = reading.staged.blocks.find((each) => each.variable === variable && each.month === `${date.slice(0, 8)}01`);
  return block ? nullFromNaN(Number(block.values[(Number(date.slice(8)) - 1) * block.steps + hour].toPrecision(6))) : null;
}

const codes = (reading: ImportReading) => reading.findings.map(({ severity, code }) => `${severity} ${code}`);
const two = (n: number) => String(n).padStart(2, '0');
/** Rows of a day, one each `step` minutes from midnight: stamp and what `cells` makes of the minute. */
function rows(
  date: string,
  step: number,
  cells: (minute: number) => string,
  write = (d: string, m: number) => `${d}T${two(Math.floor(m / 60))}:${two(m % 60)}`,
) {
  return Array.from({ length: 1440 / step }, (_, i) => `${write(date, i * step)},${cells(i * step)}`).join('\n');
}

describe('hours and days', () => {
  test('hourly readings: extremes, means, sums; W m⁻² and hPa; hours kept beside', async () => {
    // temperature = hour, radiation 100 W m⁻² from 6 to 18 h: 12 h × 0.36 MJ = 4.32 MJ m⁻²
    const text = `date,temp_c,rh_pct,solar_w_m2,rain_mm,pressure_hpa\n${rows('2024-06-01', 60, (m) => `${m / 60},50,${m >= 360 && m < 1080 ? 100 : 0},0.5,1000`)}`;
    const reading = await read(text, { stamp: 'start' });
    expect(reading.findingCounts.error).toBe(0);
    expect(reading.understood).toMatchObject({ stamp: 'start', stepMinutes: 60, rowCount: 24, usableRows: 24, siteCount: 1 });
    expect(value(reading, 'air_temperature_max_c', '2024-06-01')).toBe(23);
    expect(value(reading, 'air_temperature_min_c', '2024-06-01')).toBe(0);
    expect(value(reading, 'air_temperature_mean_c', '2024-06-01')).toBe(11.5);
    expect(value(reading, 'solar_radiation_mj_m2_d', '2024-06-01')).toBe(4.32);
    expect(value(reading, 'precipitation_mm', '2024-06-01')).toBe(12);
    expect(value(reading, 'pressure_kpa', '2024-06-01')).toBe(100);
    expect(value(reading, 'hour_air_temperature_c', '2024-06-01', 7)).toBe(7);
    expect(value(reading, 'hour_solar_radiation_mj_m2', '2024-06-01', 6)).toBe(0.36);
    // e°(0 °C) = 0.6108 kPa (FAO-56 Eq. 11): the coldest hour holds 0.3054 kPa at 50 %
    expect(value(reading, 'relative_humidity_max_pct', '2024-06-01')).toBe(50);
  });

  test('an end stamp belongs to the hour before it, across midnight', async () => {
    const text = `date,rain_mm\n${rows('2024-06-01', 60, () => '1')}\n2024-06-02T00:00,5`;
    const ends = await read(text, { stamp: 'end', minimumHours: 1 });
    expect(value(ends, 'precipitation_mm', '2024-06-01')).toBe(23 + 5);
    expect(value(ends, 'hour_precipitation_mm', '2024-06-01', 23)).toBe(5);
    const starts = await read(text, { stamp: 'start', minimumHours: 1 });
    expect(value(starts, 'precipitation_mm', '2024-06-01')).toBe(24);
    expect(value(starts, 'precipitation_mm', '2024-06-02')).toBe(5);
  });

  test('one-minute and ten-minute readings make hours; an hour needs two thirds of its minutes', async () => {
    const minutes = await read(`date,temp_c\n${rows('2024-06-01', 1, (m) => String(m % 60 < 30 ? 10 : 20))}`, { stamp: 'start' });
    expect(value(minutes, 'hour_air_temperature_c', '2024-06-01', 3)).toBe(15);
    expect(value(minutes, 'air_temperature_max_c', '2024-06-01')).toBe(20);
    const tens = await read(`date,temp_c\n${rows('2024-06-01', 10, (m) => (m >= 240 && m < 270 ? '' : '10'))}`, { stamp: 'start' });
    expect(value(tens, 'hour_air_temperature_c', '2024-06-01', 4)).toBeNull();
    expect(value(tens, 'air_temperature_mean_c', '2024-06-01')).toBe(10);
  });

  test('too few hours leave the day out, counted; missing hours of radiation are bridged by their neighbours', async () => {
    const gap = (from: number, to: number) => (m: number) => (m >= from * 60 && m < to * 60 ? ',' : `10,${m === 720 ? 300 : 200}`);
    const bridged = await read(`date,temp_c,solar_w_m2\n${rows('2024-06-01', 60, gap(5, 7))}`, { stamp: 'start' });
    // 22 hours of 200 W m⁻² (one of 300) and two bridged at 200: (23 × 200 + 300) × 0.0036
    expect(value(bridged, 'solar_radiation_mj_m2_d', '2024-06-01')).toBeCloseTo(17.64, 4);
    expect(codes(bridged)).toContain('note hours-bridged');
    const short = await read(`date,temp_c,solar_w_m2\n${rows('2024-06-01', 60, gap(5, 8))}\n${rows('2024-06-02', 60, gap(0, 0))}`, {
      stamp: 'start',
    });
    expect(value(short, 'solar_radiation_mj_m2_d', '2024-06-01')).toBeNull();
    expect(value(short, 'solar_radiation_mj_m2_d', '2024-06-02')).not.toBeNull();
    expect(short.findings.find(({ code }) => code === 'day-incomplete')?.message).toContain('2024-06-01 at S with 21 hours');
  });

  test('energy of each reading in MJ, small negative radiation, flags that say missing', async () => {
    const text = `date,solar_mj_m2,temp_c,temp_qc\n${rows('2024-06-01', 30, (m) => `${m >= 720 ? 0.5 : -0.01},${m === 60 ? 55 : 10},${m === 60 ? 3 : 0}`)}`;
    const reading = await read(text, { stamp: 'start' });
    expect(value(reading, 'solar_radiation_mj_m2_d', '2024-06-01')).toBe(12);
    expect(value(reading, 'hour_solar_radiation_mj_m2', '2024-06-01', 13)).toBe(1);
    expect(value(reading, 'hour_solar_radiation_mj_m2', '2024-06-01', 2)).toBe(0);
    expect(value(reading, 'air_temperature_max_c', '2024-06-01')).toBe(10);
    expect(codes(reading)).toEqual(expect.arrayContaining(['note negative-radiation', 'note flagged-value']));
  });
});

describe('how stamps are written', () => {
  const header = 'date,temp_c';
  const wanted = (reading: ImportReading) => [3, 17].map((hour) => value(reading, 'hour_air_temperature_c', '2024-06-01', hour));
  const forms: [string, string, ImportOptions][] = [
    ['ISO', `${header}\n${rows('2024-06-01', 60, (m) => String(m / 60))}`, {}],
    [
      'YYYYMMDDhhmm',
      `${header}\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (_, m) => `20240601${two(m / 60)}00`,
      )}`,
      {},
    ],
    [
      'YYYYMMDD:hhmm',
      `${header}\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (_, m) => `20240601:${two(m / 60)}00`,
      )}`,
      {},
    ],
    [
      'd/m/y with pm',
      `${header}\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (_, m) => `01/06/2024 ${(m / 60) % 12 || 12}:00 ${m < 720 ? 'am' : 'PM'}`,
      )}`,
      { dateOrder: 'dmy' },
    ],
    [
      'date and hour 0–23',
      `date,hour,temp_c\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (d, m) => `${d},${m / 60}`,
      )}`,
      {},
    ],
    [
      'date and clock',
      `date,time,temp_c\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (d, m) => `${d},${m / 60}:00`,
      )}`,
      {},
    ],
    [
      'date and hhmm',
      `date,hour,temp_c\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (d, m) => `${d},${m === 0 ? '0' : `${m / 60}00`}`,
      )}`,
      {},
    ],
    [
      'year, day of year, hour',
      `year,doy,hour,temp_c\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (_, m) => `2024,153,${m / 60}`,
      )}`,
      {},
    ],
    [
      'parts with minutes',
      `year,month,day,hour,minute,temp_c\n${rows(
        '2024-06-01',
        30,
        (m) => String(Math.floor(m / 60)),
        (_, m) => `2024,6,1,${Math.floor(m / 60)},${m % 60}`,
      )}`,
      {},
    ],
  ];
  test.each(forms)('%s', async (_, text, options) => {
    const reading = await read(text, { stamp: 'start', ...options });
    expect(reading.findingCounts.error).toBe(0);
    expect(wanted(reading)).toEqual([3, 17]);
  });

  test('hours that count to 24, headers and half-hours tell what a stamp names', async () => {
    const to24 = await read(
      `date,hour,temp_c\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (d, m) => `${d},${m / 60 + 1}`,
      )}`,
    );
    expect(to24.understood.stamp).toBe('end');
    expect(wanted(to24)).toEqual([3, 17]);
    const start = await read(
      `TIMESTAMP_START,TIMESTAMP_END,TA\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (_, m) => `20240601${two(m / 60)}00,20240601${two(m / 60)}59`,
      )}`,
    );
    expect(start.understood.stamp).toBe('start');
    expect(wanted(start)).toEqual([3, 17]);
    const centred = await read(
      `date,temp_c\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (d, m) => `${d}T${two(m / 60)}:30`,
      )}`,
    );
    expect(centred.understood.stamp).toBe('centre');
    expect(wanted(centred)).toEqual([3, 17]);
    const assumed = await read(`date,temp_c\n${rows('2024-06-01', 60, (m) => String(m / 60))}`);
    expect(codes(assumed)).toContain('warning stamp-assumed');
  });

  test('half-hours of a year: day 366 of a common year at hour 0 is the end of its last day', async () => {
    const lines = Array.from({ length: 48 }, (_, i) => (i === 47 ? '1998,366,0,7' : `1998,365,${(i + 1) / 2},5`));
    const reading = await read(`Year,DoY,Hour,Tair\n-,-,-,degC\n${lines.join('\n')}`);
    expect(reading.findingCounts.error).toBe(0);
    expect(reading.understood.stamp).toBe('end');
    expect(value(reading, 'hour_air_temperature_c', '1998-12-31', 23)).toBe(6);
  });

  test('the sun tells: energy half an hour before noon means that stamps name the start', async () => {
    // at 15° E in UTC+1 the sun stands highest near 12 h, give or take the season: here day 105, when the correction is nil
    const shape = (m: number) => Math.max(0, Math.cos(((m + 30 - 720) / 720) * Math.PI)) * 800;
    const days = Array.from({ length: 12 }, (_, d) => rows(`2024-04-${two(d + 9)}`, 60, (m) => shape(m).toFixed(1)));
    const sites = [{ ...SITE, longitude: 15, latitude: 45 }];
    const reading = await read(`date,solar_w_m2\n${days.join('\n')}`, { stampZone: 'UTC+01:00' }, { knownSites: sites });
    expect(reading.understood.stamp).toBe('start');
    const shifted = await read(`date,solar_w_m2\n${days.join('\n')}`, { stampZone: 'UTC-03:00' }, { knownSites: sites });
    expect(codes(shifted)).toContain('warning sun-off-noon');
  });
});

describe('clocks', () => {
  const hourly = (dates: readonly string[], skip: readonly string[] = []) =>
    dates
      .flatMap((date) => rows(date, 60, (m) => String(m / 60)).split('\n'))
      .filter((line) => !skip.some((stamp) => line.startsWith(stamp)));

  test('UTC is moved to the standard day of the site’s zone', async () => {
    const reading = await read(`time(UTC),temp_c\n${hourly(['2024-06-01', '2024-06-02']).join('\n')}`, { stamp: 'start' });
    // Madrid’s standard time is UTC+1 all year: 23 UTC is hour 0 of the next day
    expect(value(reading, 'hour_air_temperature_c', '2024-06-02', 0)).toBe(23);
    expect(value(reading, 'hour_air_temperature_c', '2024-06-02', 1)).toBe(0);
    const offsets = await read(
      `date,temp_c\n${rows(
        '2024-06-01',
        60,
        (m) => String(m / 60),
        (d, m) => `${d}T${two(m / 60)}:00+02:00`,
      )}`,
      { stamp: 'start' },
    );
    expect(value(offsets, 'hour_air_temperature_c', '2024-06-01', 10)).toBe(11);
    const own = await read(
      `time(UTC),temp_c\n${hourly(['2024-06-01']).join('\n')}`,
      { stamp: 'start' },
      { knownSites: [{ ...SITE, zone: 'UTC-02:00' }] },
    );
    expect(value(own, 'hour_air_temperature_c', '2024-06-01', 10)).toBe(12);
  });

  test('a wall clock: the skipped hour is refused with advice, the double hour taken in file order', async () => {
    const spring = hourly(['2024-03-31']);
    const refused = await read(`date,temp_c\n${spring.join('\n')}`, { stamp: 'start', stampZone: 'Europe/Madrid' });
    expect(refused.findings.find(({ code }) => code === 'clock-skipped')).toMatchObject({
      severity: 'error',
      row: 4,
      value: '2024-03-31 02:00',
    });
    const autumn = hourly(['2024-10-27']);
    autumn.splice(3, 0, '2024-10-27T02:00,99'.replace('99', '2.5'));
    const doubled = await read(`date,temp_c\n${autumn.join('\n')}`, { stamp: 'start', stampZone: 'Europe/Madrid' });
    expect(doubled.findingCounts.error).toBe(0);
    // 2:00 daylight time is 1:00 standard; the second 2:00 is 2:00 standard
    expect([1, 2, 3].map((hour) => value(doubled, 'hour_air_temperature_c', '2024-10-27', hour))).toEqual([2, 2.5, 3]);
    expect(codes(doubled)).toContain('note daylight-saving');
  });

  test('unsaid, the record itself tells whether it follows daylight saving', async () => {
    const standard = await read(`date,temp_c\n${hourly(['2024-03-31', '2024-04-01']).join('\n')}`, { stamp: 'start' });
    expect(codes(standard)).toContain('note clock');
    expect(value(standard, 'hour_air_temperature_c', '2024-04-01', 10)).toBe(10);
    const wall = await read(`date,temp_c\n${hourly(['2024-03-31', '2024-04-01'], ['2024-03-31T02']).join('\n')}`, { stamp: 'start' });
    expect(codes(wall)).toContain('note daylight-saving');
    expect(value(wall, 'hour_air_temperature_c', '2024-04-01', 10)).toBe(11);
    const summer = await read(`date,temp_c\n${hourly(['2024-06-01']).join('\n')}`, { stamp: 'start' });
    expect(codes(summer)).toContain('warning clock-assumed');
    const none = await read(`date,temp_c\n${hourly(['2024-06-01']).join('\n')}`, { stamp: 'start' }, { timeZone: undefined });
    expect(codes(none)).toContain('warning clock-assumed');
  });

  test('months of different years are reported, repeated and differing readings too', async () => {
    const text = `date,temp_c\n${hourly(['2018-01-31', '2007-02-01']).join('\n')}\n2007-02-01T05:00,5\n2007-02-01T06:00,7`;
    const reading = await read(text, { stamp: 'start' });
    expect(reading.findings.find(({ code }) => code === 'year-jump')?.message).toContain('from 2018-01-31 23:00 to 2007-02-01 00:00');
    expect(codes(reading)).toEqual(expect.arrayContaining(['error duplicate-differs', 'note duplicate-row']));
    expect(value(reading, 'hour_air_temperature_c', '2007-02-01', 6)).toBe(6);
  });
});

describe('files that say more than their table', () => {
  const body = rows('2024-06-01', 60, (m) => `${m / 60},0.0`);

  test('place above the header, legend below the rows: a station of its own', async () => {
    const text = `Latitude (decimal degrees): 45.000\nLongitude (decimal degrees): 8.000\nElevation (m): 250.0\nmonth,year\n1,2018\ntime(UTC),T2m,G(h)\n${body}\n\nT2m: 2-m air temperature (degree Celsius)\nG(h): Global irradiance on the horizontal plane (W/m2)\n\nMade by hand, 2024\n`;
    const reading = await read(text, {}, { knownSites: [] });
    expect(reading.findingCounts.error).toBe(0);
    expect(reading.staged).toMatchObject({ stations: [{ code: 'h', longitude: 8, latitude: 45, elevation: 250, windHeight: null }] });
    expect(reading.understood.columns[2]).toMatchObject({ role: 'solar_radiation_mj_m2_d', unit: 'W/m²' });
    expect(codes(reading)).toEqual(expect.arrayContaining(['note text-after-table', 'note station-of-file']));
    const known = await read(
      text,
      {},
      {
        knownSites: [
          { code: 'A', name: 'a', longitude: 1, latitude: 2 },
          { code: 'B', name: 'b', longitude: 8.001, latitude: 45 },
        ],
      },
    );
    expect(known.staged.kind === 'weather' && known.staged.stations).toBeFalsy();
    expect(known.findings.find(({ code }) => code === 'site-of-file')?.message).toContain('site B');
  });

  test('pressure at sea level is not the station’s; a knots column is told by its name', async () => {
    const reading = await read(`date,msl,wdsp\n${rows('2024-06-01', 60, () => '1013,10')}`, { stamp: 'start' });
    expect(value(reading, 'pressure_kpa', '2024-06-01')).toBeNull();
    expect(codes(reading)).toContain('note sea-level-pressure');
    // 10 knots = 5.14444 m/s (1852 m an hour)
    expect(value(reading, 'wind_speed_m_s', '2024-06-01')).toBeCloseTo(5.14444, 4);
  });
});
