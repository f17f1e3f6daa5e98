/**
 * Water for protection by sprinkling over the plants: application rates as printed, the heat they give, the flow they ask for.
 *
 * Every table here is recalled: open the source before a system is laid out or run by it.
 */
import { celsiusFromFahrenheit, MILLIMETRES_PER_INCH } from '../base/units.ts';

/** Heat given off when water freezes [kJ kg⁻¹]. Source: Snyder & de Melo-Abreu (2005), Frost Protection, FAO (recalled: 334.5). */
export const HEAT_OF_FUSION = 334.5;

/**
 * Heat that freezing water gives to the plant.
 *   q = Lf r / 3.6
 *
 * @param rate of application, all of it freezing [mm h⁻¹]
 * @returns q [W m⁻²]
 * @example heatOfFreezing(1) // 92.9
 * Source: latent heat of fusion 334.5 kJ kg⁻¹; 1 mm on 1 m² is 1 kg.
 */
export function heatOfFreezing(rate: number): number {
  return (HEAT_OF_FUSION * rate) / 3.6;
}

export type CropHeight = 'tall' | 'short';
/** Time in which a sprinkler turns once [s]. */
export type Rotation = 30 | 60;

/** Printed temperatures of the rate table [°C] and the wind up to which it holds [m s⁻¹]. */
export const RATE_TEMPERATURES = [-2, -4, -6] as const;
export const RATE_MOST_WIND = 2.5;
/** Rates [mm h⁻¹] at `RATE_TEMPERATURES`. Source: Snyder & de Melo-Abreu (2005), Frost Protection, FAO, volume 1 (recalled). */
export const RATES: Readonly<Record<CropHeight, Readonly<Record<Rotation, readonly number[]>>>> = {
  tall: { 30: [2.5, 3.8, 5.1], 60: [3.2, 4.5, 5.8] },
  short: { 30: [1.8, 3.0, 4.2], 60: [2.3, 3.5, 4.7] },
};
export const RATE_SOURCE = 'Snyder & de Melo-Abreu (2005), Frost Protection, FAO, volume 1 (recalled: open the source before use)';

/** Rates for grapevine leaves [mm h⁻¹] by wind. Source: Schultz & Lider (1968) as in Snyder & de Melo-Abreu (2005) (recalled). */
export const VINE_TEMPERATURES = [-1.7, -3.3, -5.0] as const;
export const VINE_RATES = [
  { wind: '0–0.5', rotation: 30, rates: [2.0, 2.8, 3.8] },
  { wind: '0–0.5', rotation: 60, rates: [2.5, 3.3, 4.3] },
  { wind: '0.9–1.4', rotation: 30, rates: [2.5, 3.3, 4.6] },
  { wind: '0.9–1.4', rotation: 60, rates: [3.0, 3.8, 5.1] },
] as const;

/** Rates by the temperature of a dry leaf [°F] and wind [mph: 0–1, 2–4, 5–8], inches an hour, as printed. Source: Gerber & Martsolf (1979) (recalled). */
export const WIND_RATES_PRINTED = [
  { fahrenheit: 27, rates: [0.1, 0.1, 0.1] },
  { fahrenheit: 26, rates: [0.1, 0.1, 0.14] },
  { fahrenheit: 24, rates: [0.1, 0.16, 0.3] },
  { fahrenheit: 22, rates: [0.12, 0.24, 0.5] },
  { fahrenheit: 20, rates: [0.16, 0.3, 0.6] },
  { fahrenheit: 18, rates: [0.2, 0.4, 0.7] },
  { fahrenheit: 15, rates: [0.26, 0.5, 0.9] },
] as const;

/** The table by wind in °C and mm h⁻¹. */
export function windRates(): { leafTemperature: number; rates: number[] }[] {
  return WIND_RATES_PRINTED.map(({ fahrenheit, rates }) => ({
    leafTemperature: celsiusFromFahrenheit(fahrenheit),
    rates: rates.map((inches) => inches * MILLIMETRES_PER_INCH),
  }));
}

/** What a rate is read off for. */
export interface RateWanted {
  /** lowest air temperature of the night [°C] */
  readonly minimum: number;
  /** [m s⁻¹] */
  readonly windSpeed: number;
  readonly height: CropHeight;
  readonly rotation: Rotation;
}

/**
 * Application rate by the printed table, straight lines between its temperatures. Warmer than its first, the first.
 *
 * @returns rate [mm h⁻¹]; NaN beyond the table: colder than −6 °C or wind above 2.5 m s⁻¹, where sprinkling may do more harm than good
 * @example applicationRate({ minimum: -3, windSpeed: 1, height: 'tall', rotation: 30 }) // 3.15
 * Source: as `RATES`.
 */
export function applicationRate({ minimum, windSpeed, height, rotation }: RateWanted): number {
  const rates = RATES[height][rotation];
  const last = RATE_TEMPERATURES.length - 1;
  if (!(minimum >= RATE_TEMPERATURES[last] && windSpeed <= RATE_MOST_WIND)) return Number.NaN;
  if (minimum >= RATE_TEMPERATURES[0]) return rates[0];
  const at = RATE_TEMPERATURES.findIndex((temperature) => minimum >= temperature);
  const [warm, cold] = [RATE_TEMPERATURES[at - 1], RATE_TEMPERATURES[at]];
  return rates[at - 1] + ((warm - minimum) / (warm - cold)) * (rates[at] - rates[at - 1]);
}

/**
 * Flow of a rate over an area.
 *   Q = r A / 3600
 *
 * @param rate r [mm h⁻¹]
 * @param area A [m²]
 * @returns Q [L s⁻¹]: 1 mm on 1 m² is 1 L
 * @example flowOfRate(3.6, 10000) // 10
 * Source: definition.
 */
export function flowOfRate(rate: number, area: number): number {
  return (rate * area) / 3600;
}

/** Time after sunrise for which sprinkling is reckoned to go on until the ice melts by itself [h]. Common practice, no source. */
export const MELTING_HOURS = 2;

/**
 * Hours of sprinkling: from when the air falls to the start temperature until two hours after sunrise.
 *
 * @param startHours when the start temperature is reached [h after sunset]; Infinity when it is not
 * @param nightLength [h]
 * @returns [h]; 0 where it is not reached
 * @example sprinklingHours(6, 11) // 7
 * Source: common practice, no source; stopping is by the wet bulb, not by the clock.
 */
export function sprinklingHours(startHours: number, nightLength: number): number {
  if (Number.isNaN(startHours + nightLength)) return Number.NaN;
  return startHours > nightLength ? 0 : nightLength - startHours + MELTING_HOURS;
}
