/** Members of the frost answers: numbers rounded, names with their units. */
import { roundOrNull } from '../../base/missing.ts';
import { atmosphericPressure } from '../../energy/air.ts';
import { clockOf } from '../../energy/frost-evening.ts';
import { airTemperatureOfWetBulb } from '../../energy/frost-humidity.ts';
import { isClearNight } from '../../energy/frost-night.ts';
import { cloudShareOfFactor } from '../../energy/frost-sky.ts';
import { TENTH_DEVIATE } from '../../energy/frost-stage.ts';
import type { FrostPlanting } from '../../jobs/frost.ts';
import type { StationNight } from '../../jobs/frost-site.ts';
import type { FrostRow, FrostStationAnswer } from '../contract/frost.ts';

/** A station's night as the answer has it. */
export function stationMembers(night: StationNight): FrostStationAnswer {
  const { evening, estimate, past, times } = night;
  const half = TENTH_DEVIATE * estimate.error;
  const start = evening.dewPoint >= 0 ? 0 : airTemperatureOfWetBulb(0, evening.dewPoint, atmosphericPressure(night.elevation));
  return {
    ...{ site: night.code, name: night.name, longitude: night.longitude, latitude: night.latitude },
    elevation_m: roundOrNull(night.elevation, 1),
    evening_from: night.from,
    ...{ sunset: clockOf(times.sunset), sunrise: clockOf(times.sunrise), night_length_h: roundOrNull(times.nightLength, 2) },
    air_temperature_c: roundOrNull(evening.airTemperature, 2),
    dew_point_c: roundOrNull(evening.dewPoint, 2),
    wind_speed_2m_m_s: roundOrNull(evening.windSpeed, 2),
    cloud_share: roundOrNull(cloudShareOfFactor(evening.cloudFactor), 2),
    net_radiation_w_m2: roundOrNull(estimate.netRadiation, 1),
    square_root_minimum_c: roundOrNull(estimate.brunt, 2),
    regression_minimum_c: roundOrNull(estimate.regression, 2),
    regression: past.line
      ? {
          air_temperature_factor: past.line.ofAirTemperature,
          dew_point_factor: past.line.ofDewPoint,
          constant: past.line.constant,
          nights: past.line.nights,
          rmse_k: roundOrNull(past.line.error, 3) ?? 0,
        }
      : null,
    square_root_nights: past.brunt.nights,
    square_root_bias_k: roundOrNull(past.brunt.bias, 3),
    square_root_rmse_k: roundOrNull(past.brunt.error, 3),
    night_kind: isClearNight(evening) ? 'clear-calm' : 'cloudy-or-windy',
    method: estimate.method,
    minimum_c: roundOrNull(estimate.minimum, 2),
    minimum_low_c: roundOrNull(estimate.minimum - half, 2),
    minimum_high_c: roundOrNull(estimate.minimum + half, 2),
    error_k: roundOrNull(estimate.error, 3),
    error_from: estimate.errorFrom,
    observed_minimum_c: roundOrNull(night.observed, 2),
    start_air_temperature_c: roundOrNull(start, 2),
    estimated: [...night.estimated],
  };
}

/** A planting's night as the answer has it. */
export function rowMembers({ row, night, plant, thermalTime, stage, risk, protection, area }: FrostPlanting): FrostRow {
  return {
    ...{ parcel: row.parcel, name: row.parcelName, planting: row.sequence, crop: row.crop, crop_name: row.cropName },
    area_ha: roundOrNull(area / 1e4, 4) ?? 0,
    reach: row.reach,
    ...{ critical_table: stage.table, stage: stage.stage, stage_name: stage.stageName, stage_from: stage.from },
    thermal_time_c_d: roundOrNull(thermalTime, 1),
    minimum_c: roundOrNull(night.minimum, 2),
    minimum_low_c: roundOrNull(plant.low, 2),
    minimum_high_c: roundOrNull(plant.high, 2),
    leaf_minimum_c: roundOrNull(plant.leaf, 2),
    leaf_minimum_low_c: roundOrNull(plant.leafLow, 2),
    critical_10_c: roundOrNull(stage.tenthKilled, 2),
    critical_90_c: roundOrNull(stage.mostKilled, 2),
    risk,
    start_air_temperature_c: roundOrNull(plant.start, 2),
    sprinkling_rate_mm_h: roundOrNull(protection.rate, 2),
    sprinkling_heat_w_m2: roundOrNull(protection.heat, 0),
    sprinkling_flow_l_s: roundOrNull(protection.flow, 2),
    sprinkling_flow_m3_h: roundOrNull(protection.flow * 3.6, 2),
    sprinkling_hours_h: roundOrNull(protection.hours, 2),
    sprinkling_volume_m3: roundOrNull(protection.volume, 1),
  };
}
