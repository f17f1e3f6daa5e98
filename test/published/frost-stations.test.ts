/**
 * Frost nights of real stations: fourteen of the United States Climate Reference Network in 2020 (test/data/ATTRIBUTION.md), evenings estimated from the day.
 * The measured minima of the mornings are the yardstick; for comparison stands the forecast a child would make, tonight as last night.
 */
import { readFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import { dayNumber } from '../../lib/base/civil-date.ts';
import { completeWeather } from '../../lib/energy/complete-weather.ts';
import { ASSUMED_ERROR } from '../../lib/energy/frost-night.ts';
import { saturationVapourPressure } from '../../lib/energy/humidity.ts';
import { morningMinimum } from '../../lib/jobs/frost-evening.ts';
import { stationNights } from '../../lib/jobs/frost-site.ts';
import type { FrostRecord } from '../../lib/jobs/frost-weather.ts';
import type { SiteObservations } from '../../lib/weather/variable.ts';
import { validation } from '../support/validation.ts';

const DAYS = 366;
const OPTIONS = { sky: 'fao56', ground: 'moist', method: 'auto' } as const;

/** One record per station; elevations of about 1000 m stand in where the file has none, they matter to the pressure alone. */
function records(): FrostRecord[] {
  const [head, ...lines] = readFileSync(new URL('../data/uscrn-daily-2020.csv', import.meta.url), 'utf8')
    .trim()
    .split('\n');
  const columns = head.split(',');
  const at = (name: string) => columns.indexOf(name);
  const byStation = new Map<string, string[][]>();
  for (const cells of lines.map((line) => line.split(','))) byStation.set(cells[0], [...(byStation.get(cells[0]) ?? []), cells]);
  return [...byStation].map(([code, rows]) => {
    const series = (name: string) => {
      const values = new Float64Array(DAYS).fill(Number.NaN);
      for (const cells of rows) if (cells[at(name)] !== '') values[dayNumber(cells[1]) - dayNumber('2020-01-01')] = Number(cells[at(name)]);
      return values;
    };
    const mean = series('t_daily_mean');
    const site = { code, name: code, longitude: Number(rows[0][2]), latitude: Number(rows[0][3]), elevation: 1000, windHeight: 2 };
    const observed: SiteObservations = {
      ...{ sites: [site], startDate: '2020-01-01', dayCount: DAYS },
      values: {
        air_temperature_max_c: series('t_daily_max'),
        air_temperature_min_c: series('t_daily_min'),
        // the mean humidity belongs to the mean temperature
        vapour_pressure_kpa: series('rh_daily_avg').map((humidity, day) => (humidity / 100) * saturationVapourPressure(mean[day])),
        solar_radiation_mj_m2_d: series('solarad_daily'),
        wind_speed_m_s: new Float64Array(DAYS).fill(2),
      },
    };
    const completed = completeWeather(observed, { defaultElevation: 1000, radiationCoefficient: 0.16 });
    return { source: code, role: 'observed', observed, completed, stations: [{ site, zoneHours: -7, elevation: 1000, hours: null }] };
  });
}

function median(values: readonly number[]): number {
  const sorted = values.toSorted((a, b) => a - b);
  return (sorted[Math.floor((sorted.length - 1) / 2)] + sorted[Math.ceil((sorted.length - 1) / 2)]) / 2;
}

/** Root mean squared change of the minimum from one morning to the next, 1 March to 30 May. */
function persistence(record: FrostRecord): number {
  const changes = Array.from({ length: 91 }, (_, i) => {
    const day = 60 + i;
    return morningMinimum({ record, station: 0, day }) - morningMinimum({ record, station: 0, day: day - 1 });
  }).filter((change) => !Number.isNaN(change));
  return Math.sqrt(changes.reduce((sum, change) => sum + change * change, 0) / changes.length);
}

const check = validation(import.meta.url, {
  title: 'Frost: minimum of the night at real stations',
  source: 'U.S. Climate Reference Network, 14 stations, clear nights of spring 2020, evenings estimated from the day',
  provenance: 'measured',
});

const found = records().map((record) => {
  const [night] = stationNights({ record, date: '2020-04-15', given: null, options: OPTIONS });
  const { line, brunt } = night.past;
  return { code: record.source, line: line?.error ?? Number.NaN, brunt, persistence: persistence(record) };
});

test('own line of the station, each night left out in turn, against tonight as last night', () => {
  for (const { code, line, persistence: simple } of found) {
    const text = `below ${simple.toFixed(2)}, that of tonight as last night`;
    check.figure(`station ${code}: RMSE of its own line`, line, { text, met: line < simple, unit: '°C' });
  }
  const typical = median(found.map(({ line }) => line));
  check.figure('median RMSE of own lines', typical, { text: 'at most 3.0', met: typical <= 3, unit: '°C' });
});

test('square-root law on moist ground: its error is what is assumed without a record', () => {
  const typical = median(found.map(({ brunt }) => brunt.error));
  const bias = median(found.map(({ brunt }) => brunt.bias));
  check.figure('median RMSE of the square-root law', typical, {
    text: `within 0.5 of the assumed ${ASSUMED_ERROR}`,
    met: Math.abs(typical - ASSUMED_ERROR) <= 0.5,
    unit: '°C',
  });
  check.figure('median bias of the square-root law', bias, { text: 'within 2 of none', met: Math.abs(bias) <= 2, unit: '°C' });
  expect(found).toHaveLength(14);
});
