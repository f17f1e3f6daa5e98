/**
 * Soil temperature near the surface, estimated from the air.
 */

/** Days of air temperature that the soil at sowing depth follows. Common practice, no source. */
export const SOIL_TEMPERATURE_DAYS = 7;

/**
 * Fills a row with the estimated soil temperature at about 5 to 10 cm: the mean air temperature of the day and the days before it.
 *
 *   Ts = mean of T over the last `days` days, the day itself with them; fewer at the start of the record
 *
 * The soil's day-to-day temperature follows the air damped and late, by about half of `days`. It knows nothing of snow, shade or wetness: bare, moist soil in
 * spring sun is often 1 to 3 °C warmer.
 * Missing: days without air temperature are left out of the mean; NaN where none of them has any.
 *
 * @param airTemperatureMean [day] [°C]
 * @param into [day], overwritten [°C]; not the same array
 * @param days length of the mean, 1 or more
 * @example fillSoilTemperature([2, 4, 6], [0, 0, 0], 2).join(' ') // '2 3 5'
 * Source: common practice, no source.
 */
export function fillSoilTemperature<Row extends Float64Array | number[]>(
  airTemperatureMean: ArrayLike<number>,
  into: Row,
  days: number = SOIL_TEMPERATURE_DAYS,
): Row {
  let sum = 0;
  let count = 0;
  for (let d = 0; d < airTemperatureMean.length; d++) {
    const comes = airTemperatureMean[d];
    if (!Number.isNaN(comes)) {
      sum += comes;
      count++;
    }
    const goes = d >= days ? airTemperatureMean[d - days] : Number.NaN;
    if (!Number.isNaN(goes)) {
      sum -= goes;
      count--;
    }
    into[d] = count > 0 ? sum / count : Number.NaN;
  }
  return into;
}
