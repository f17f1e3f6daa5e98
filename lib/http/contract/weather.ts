/** Weather sources, and the hours of a site's day. */
import { z } from 'zod';
import { isoDate, nullableNumber as n } from './common.ts';

export const weatherSourceAnswer = z
  .object({
    name: z.string(),
    kind: z.enum(['stations', 'grid']),
    role: z.enum(['observed', 'forecast']).meta({
      description: 'what its values are; a forecast never stands in for a measured day, and enters no normal, check or variogram',
    }),
    issued: isoDate.nullable().meta({ description: 'of a forecast: day on which it was last brought in; null where no import tells' }),
    sites: z.number().int().meta({ description: 'stations, or cells of the grid' }),
    first_month: isoDate.nullable().meta({ description: 'first day of the first month with weather' }),
    last_month: isoDate.nullable().meta({ description: 'first day of the last month with weather' }),
    variables: z.array(z.string()).meta({ description: 'what it brings; names beginning with hour_ come 24 times a day' }),
  })
  .meta({ id: 'WeatherSource' });
export type WeatherSourceAnswer = z.infer<typeof weatherSourceAnswer>;

export const siteHour = z
  .object({
    hour: z.number().int().min(0).max(23).meta({ description: 'the hour that begins at this hour of the site’s standard time' }),
    air_temperature_c: n,
    vapour_pressure_kpa: n,
    solar_radiation_mj_m2_h: n,
    wind_speed_2m_m_s: n,
    precipitation_mm: n,
    extraterrestrial_radiation_mj_m2_h: n,
    clear_sky_radiation_mj_m2_h: n,
    reference_et_fao56_short_mm: n,
    reference_et_asce2005_short_mm: n,
    reference_et_asce2005_tall_mm: n,
    net_shortwave_w_m2: n,
    net_longwave_w_m2: n,
    net_radiation_w_m2: n,
    soil_heat_w_m2: n,
    latent_heat_w_m2: n,
    sensible_heat_w_m2: n,
  })
  .meta({ id: 'SiteHour' });
export type SiteHour = z.infer<typeof siteHour>;

export const siteHoursAnswer = z
  .object({
    site: z.string(),
    source: z.string(),
    date: isoDate,
    zone: z.string().meta({ description: 'zone whose standard time the hours run by' }),
    utc_offset_h: z.number(),
    estimated: z
      .array(z.enum(['solar_radiation', 'wind_speed']))
      .meta({ description: 'what the station does not report by the hour: the completed day’s value stands in' }),
    items: z
      .array(siteHour)
      .meta({ description: '24 hours; none where the site has no hours that day. The budget is that of FAO-56, short surface' }),
  })
  .meta({ id: 'SiteHours' });
export type SiteHoursAnswer = z.infer<typeof siteHoursAnswer>;
