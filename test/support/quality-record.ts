/** A faultless invented record of stations, into which tests put one fault each. */
import { dayNumber, dayOfYear } from '../../lib/base/civil-date.ts';
import { mulberry32, normalDeviate } from '../../lib/base/random.ts';
import { clearSkyRadiation } from '../../lib/energy/radiation.ts';
import { solarGeometry } from '../../lib/energy/sun.ts';
import type { SiteObservations, WeatherVariable } from '../../lib/weather/variable.ts';

const LATITUDE = 43.6;

/**
 * Three stations ten kilometres apart at 800 m: a year's course, weather that all share, and a little noise of their own. Air is 1.5 °C short
 * of saturation at night, so no surroundings are dry; every sixth day is clear to the last percent.
 */
export function soundRecord(dayCount: number, startDate = '2022-01-01', siteCount = 3): SiteObservations {
  const random = mulberry32(7);
  const geometry = solarGeometry(LATITUDE);
  const first = dayNumber(startDate);
  const values: Partial<Record<WeatherVariable, Float64Array>> = {};
  const put = (variable: WeatherVariable, at: number, value: number) => {
    values[variable] ??= new Float64Array(siteCount * dayCount).fill(Number.NaN);
    values[variable][at] = Math.fround(value);
  };
  for (let day = 0; day < dayCount; day++) {
    const julian = dayOfYear(first + day);
    const course = 11 - 13 * Math.cos((2 * Math.PI * (julian - 15)) / 365) + 2.5 * normalDeviate(random);
    const wind = 2.6 + 0.5 * normalDeviate(random) ** 2;
    const clear = day % 6 === 0 ? 1 : 0.5 + 0.4 * random();
    const rain = day % 6 !== 0 && random() < 0.3 ? 9 * random() : 0;
    for (let site = 0; site < siteCount; site++) {
      const at = site * dayCount + day;
      const minimum = course - 6 + 0.4 * normalDeviate(random);
      put('air_temperature_max_c', at, course + 7 + 0.4 * normalDeviate(random));
      put('air_temperature_min_c', at, minimum);
      put('dew_point_c', at, minimum - 1.5 + 0.3 * random());
      put('wind_speed_m_s', at, wind * (1 + 0.1 * normalDeviate(random)) * (1 + 0.1 * site));
      put('solar_radiation_mj_m2_d', at, clear * clearSkyRadiation(geometry.extraterrestrialRadiation[julian], 800) * 0.985);
      put('precipitation_mm', at, rain * (0.8 + 0.4 * random()));
    }
  }
  const sites = Array.from({ length: siteCount }, (_, site) => ({
    code: `S${site + 1}`,
    name: `Station ${site + 1}`,
    longitude: -116.2 + 0.12 * site,
    latitude: LATITUDE,
    elevation: 800,
    windHeight: 2,
  }));
  return { sites, startDate, dayCount, values };
}

/** The record with one series changed at one site; the record given stays as it was. */
export function withFault(
  record: SiteObservations,
  variable: WeatherVariable,
  site: number,
  fault: (value: number, day: number) => number,
): SiteObservations {
  const { dayCount } = record;
  const series = record.values[variable]?.slice() ?? new Float64Array(record.sites.length * dayCount).fill(Number.NaN);
  for (let day = 0; day < dayCount; day++) series[site * dayCount + day] = fault(series[site * dayCount + day], day);
  return { ...record, values: { ...record.values, [variable]: series } };
}
