/**
 * What the fields of open weather archives are called: standard names of the CF conventions, and plain variable names.
 *
 * Source: CF Standard Name Table; the variable names are common practice of the archives, no source. Names are lower case, letters and digits.
 */
import type { WeatherVariable } from '../weather/variable.ts';

/** Roles of fields beside the weather variables. */
export const GRID_EXTRA_ROLES = ['vapour_pressure_deficit_kpa', 'eastward_wind_m_s', 'northward_wind_m_s', 'elevation_m'] as const;

/** What a field of an array file can be. */
export type GridRole = WeatherVariable | (typeof GRID_EXTRA_ROLES)[number];

/** A quantity before the statistic of the day is known. */
export type Quantity = 'temperature' | 'humidity' | Exclude<GridRole, `air_temperature${string}` | `relative_humidity${string}`>;

export const STANDARD_NAMES: Record<string, Quantity> = {
  air_temperature: 'temperature',
  dew_point_temperature: 'dew_point_c',
  relative_humidity: 'humidity',
  specific_humidity: 'specific_humidity_kg_kg',
  surface_specific_humidity: 'specific_humidity_kg_kg',
  water_vapor_partial_pressure_in_air: 'vapour_pressure_kpa',
  water_vapor_saturation_deficit_in_air: 'vapour_pressure_deficit_kpa',
  wind_speed: 'wind_speed_m_s',
  eastward_wind: 'eastward_wind_m_s',
  northward_wind: 'northward_wind_m_s',
  surface_downwelling_shortwave_flux_in_air: 'solar_radiation_mj_m2_d',
  surface_downwelling_shortwave_flux: 'solar_radiation_mj_m2_d',
  surface_incoming_shortwave_flux: 'solar_radiation_mj_m2_d',
  integral_wrt_time_of_surface_downwelling_shortwave_flux_in_air: 'solar_radiation_mj_m2_d',
  surface_net_downward_radiative_flux: 'net_radiation_mj_m2_d',
  surface_net_downward_radiative_flux_in_air: 'net_radiation_mj_m2_d',
  duration_of_sunshine: 'sunshine_duration_h',
  precipitation_flux: 'precipitation_mm',
  precipitation_amount: 'precipitation_mm',
  lwe_precipitation_rate: 'precipitation_mm',
  lwe_thickness_of_precipitation_amount: 'precipitation_mm',
  thickness_of_precipitation_amount: 'precipitation_mm',
  surface_air_pressure: 'pressure_kpa',
  surface_altitude: 'elevation_m',
  height_above_mean_sea_level: 'elevation_m',
  altitude: 'elevation_m',
  geopotential: 'elevation_m',
  surface_geopotential: 'elevation_m',
};

export const VARIABLE_NAMES: Record<string, Quantity> = {
  ...named('temperature', 'tas t2m 2t t2 tmean tavg tmp temp tair ta tmp2m t2mmean tg temp2m airtemp airtemperature tasmean'),
  ...named('temperature', 'tasmax tmax tmmx tx t2mmax mx2t tmpmax tempmax maxtemp tmaximum t2max'),
  ...named('temperature', 'tasmin tmin tmmn tn t2mmin mn2t tmpmin tempmin mintemp tminimum t2min'),
  ...named('dew_point_c', 'tdps d2m 2d tdew dewpoint td dew2m tdmean dewpt dpt'),
  ...named('humidity', 'hurs rh rhum r2 rh2m relhum hursmean rhmean rmean hursmax rhmax rmax hursmin rhmin rmin'),
  ...named('specific_humidity_kg_kg', 'huss q2m sph qv2m q2 shum qair sh2 2sh specifichumidity spfh'),
  ...named('vapour_pressure_kpa', 'vp vap vapr ea e vappress vapourpressure vaporpressure'),
  ...named('vapour_pressure_deficit_kpa', 'vpd vpdmean'),
  ...named('wind_speed_m_s', 'sfcwind windspeed ws ws10m ws10 wind ws2m si10 10si vs wspd wspd10m windspeed10m windspeed2m wind10m wind2m'),
  ...named('eastward_wind_m_s', 'u10 u10m uas 10u ugrd10m ugrd'),
  ...named('northward_wind_m_s', 'v10 v10m vas 10v vgrd10m vgrd'),
  ...named('solar_radiation_mj_m2_d', 'rsds ssrd swgdn srad swdown dswrf msdwswrf avgsdswrf swin rg rs glorad fsds ghi solarradiation'),
  ...named('solar_radiation_mj_m2_d', 'surfacesolarradiationdownwards shortwaveradiation solar globalradiation'),
  ...named('net_radiation_mj_m2_d', 'rn netrad rnet netradiation'),
  ...named('sunshine_duration_h', 'sund sundur sunshineduration sunshine'),
  ...named(
    'precipitation_mm',
    'pr tp precip precipitation prcp ppt rain rainfall prectot prectotcorr prectotland rr mtpr avgtprate apcp rainf',
  ),
  ...named('precipitation_mm', 'precipitationamount totalprecipitation pcp'),
  ...named('pressure_kpa', 'ps sp pres surfacepressure psurf pressfc presssfc pressure'),
  ...named('reference_et_given_mm', 'eto et0 et0fao56 etos referenceet referenceevapotranspiration etref etoshort'),
  ...named('elevation_m', 'orog elevation elev dem topo hgt altitude alt hsurf phis zsurf surfacealtitude geopotential z orography'),
};

/** Fields that look like reference ET and are another quantity: offered, and taken only when the plan says so. */
export const POTENTIAL_EVAPORATION: Record<string, string> = {
  ...reasons('potential evaporation of the model that made the file, over its own vegetation or water', [
    ...['evspsblpot', 'pev', 'pet', 'potevap', 'potentialevaporation', 'potentialevapotranspiration', 'pevap'],
    ...['water_potential_evaporation_flux', 'water_potential_evaporation_amount', 'lwe_water_potential_evaporation_rate'],
  ]),
  ...reasons('reference ET of a tall crop in most files, which is not the short reference', ['etr', 'etrs', 'etrtall', 'ettallcrop']),
};

/** Standard names that must not be read as one of the roles, with the reason shown. */
export const NOT_WANTED: Record<string, string> = {
  air_pressure_at_mean_sea_level: 'pressure reduced to sea level, not that of the place',
  air_pressure_at_sea_level: 'pressure reduced to sea level, not that of the place',
  wind_speed_of_gust: 'gusts, not the mean wind of the day',
  surface_net_downward_shortwave_flux: 'net of what the surface of the model reflects; incoming radiation is wanted',
  surface_albedo: 'not weather that is used here',
};

function named(quantity: Quantity, names: string): Record<string, Quantity> {
  return Object.fromEntries(names.split(' ').map((name) => [name, quantity]));
}

function reasons(reason: string, names: readonly string[]): Record<string, string> {
  return Object.fromEntries(names.map((name) => [name, reason]));
}
