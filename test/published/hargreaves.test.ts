/**
 * Hargreaves–Samani beside Penman–Monteith at the station sets in this repository: bias and root mean square of the daily difference.
 *
 * The bar is the working range for an uncalibrated daily comparison, RMSE 0.6 to 1.2 mm/d and bias −20 to +30 % (recalled, not re-read; Fisher &
 * Pringle 2013 print 0.28 mm bias and 0.68 mm mean absolute error in a humid place). The stations have no wind: FAO-56 takes 2 m/s.
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { dayNumber, dayOfYear } from '../../lib/base/civil-date.ts';
import { completeWeather } from '../../lib/energy/complete-weather.ts';
import { hargreavesReferenceEt } from '../../lib/energy/hargreaves.ts';
import { referenceEtDay } from '../../lib/energy/reference-day.ts';
import { solarGeometry } from '../../lib/energy/sun.ts';
import { validation } from '../support/validation.ts';

const check = validation(import.meta.url, {
  title: 'Hargreaves–Samani beside Penman–Monteith, 14 stations of the western United States, 2020',
  source: 'NOAA U.S. Climate Reference Network; working range recalled',
  provenance: 'measured',
});

const [head, ...rows] = readFileSync(new URL('../data/uscrn-daily-2020.csv', import.meta.url), 'utf8')
  .trim()
  .split(/\r?\n/)
  .map((line) => line.split(','));
const stations = [...new Set(rows.map((row) => row[head.indexOf('wban')]))];

function differences(station: string) {
  const days = rows.filter((row) => row[head.indexOf('wban')] === station);
  const column = (name: string) => {
    const index = head.indexOf(name);
    return Float64Array.from(days, (row) => (row[index] === '' ? Number.NaN : Number(row[index])));
  };
  const latitude = Number(days[0][head.indexOf('latitude')]);
  const startDate = days[0][head.indexOf('lst_date')];
  const maximum = column('t_daily_max');
  const weather = completeWeather(
    {
      sites: [{ code: station, name: station, longitude: 0, latitude, elevation: 1000, windHeight: 2 }],
      startDate,
      dayCount: days.length,
      values: {
        air_temperature_max_c: maximum,
        air_temperature_min_c: column('t_daily_min'),
        relative_humidity_max_pct: column('rh_daily_max'),
        relative_humidity_min_pct: column('rh_daily_min'),
        solar_radiation_mj_m2_d: column('solarad_daily'),
      },
    },
    { defaultElevation: 1000, radiationCoefficient: 0.16 },
  );
  const radiation = column('solarad_daily');
  const { extraterrestrialRadiation } = solarGeometry(latitude);
  const pairs: [number, number][] = [];
  for (let day = 0; day < days.length; day++) {
    if (Number.isNaN(maximum[day] + radiation[day] + weather.airTemperatureMin[day])) continue;
    const ofYear = dayOfYear(dayNumber(startDate) + day);
    const { airTemperatureMax, airTemperatureMin, actualVapourPressure, solarRadiation, windSpeed2m } = weather;
    const given = {
      airTemperatureMax: airTemperatureMax[day],
      airTemperatureMin: airTemperatureMin[day],
      actualVapourPressure: actualVapourPressure[day],
      solarRadiation: solarRadiation[day],
      windSpeed2m: windSpeed2m[day],
    };
    const full = referenceEtDay({ method: 'fao56', surface: 'short', latitude, elevation: 1000, dayOfYear: ofYear, ...given }, null);
    pairs.push([hargreavesReferenceEt(given.airTemperatureMax, given.airTemperatureMin, extraterrestrialRadiation[ofYear]), full]);
  }
  const mean = pairs.reduce((sum, [, full]) => sum + full, 0) / pairs.length;
  const bias = pairs.reduce((sum, [short, full]) => sum + short - full, 0) / pairs.length;
  const rmse = Math.sqrt(pairs.reduce((sum, [short, full]) => sum + (short - full) ** 2, 0) / pairs.length);
  return { days: pairs.length, biasShare: bias / mean, rmse };
}

describe.each(stations)('station %s', (station) => {
  const { days, biasShare, rmse } = differences(station);

  it('has a year of days to compare', () => expect(days).toBeGreaterThan(340));
  it('lies within −20 to +30 % in the mean', () => {
    check.figure(`station ${station}: bias`, 100 * biasShare, { text: '−20 … +30 %', met: biasShare > -0.2 && biasShare < 0.3, unit: '%' });
  });
  it('is at most 1.2 mm/d off, root mean square', () => {
    check.figure(`station ${station}: RMSE`, rmse, { text: 'at most 1.2 mm d⁻¹', met: rmse <= 1.2, unit: 'mm d⁻¹' });
  });
});
