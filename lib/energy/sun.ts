/**
 * Where the sun stands and what reaches the top of the atmosphere, by day and by hour.
 *
 * `latitude` and `longitude` are degrees (north and east positive); Greek names (phi, delta, omega) are radians.
 */
import { SOLAR_CONSTANT } from '../base/constants.ts';

const DAY_FACTOR = ((24 * 60) / Math.PI) * SOLAR_CONSTANT;
const HOUR_FACTOR = ((12 * 60) / Math.PI) * SOLAR_CONSTANT;
/** Last day of the year that tables reach. */
export const LAST_DAY_OF_YEAR = 366;

/** Radians of an angle in degrees. @example radiansFromDegrees(180) // 3.141593 */
export function radiansFromDegrees(degrees: number): number {
  return (degrees * Math.PI) / 180;
}

/** Degrees of an angle in radians; the inverse of `radiansFromDegrees`. @example degreesFromRadians(0) // 0 */
export function degreesFromRadians(radians: number): number {
  return (radians * 180) / Math.PI;
}

/**
 * Inverse relative distance Earth–Sun.
 *   dr = 1 + 0.033 cos(2π J / 365)
 *
 * @param dayOfYear 1–366
 * @returns dr [1]; NaN in gives NaN out
 * @example inverseRelativeDistance(246) // 0.985
 * Source: FAO-56 Eq. 23.
 */
export function inverseRelativeDistance(dayOfYear: number): number {
  return 1 + 0.033 * Math.cos(((2 * Math.PI) / 365) * dayOfYear);
}

/**
 * Solar declination.
 *   δ = 0.409 sin(2π J / 365 − 1.39)
 *
 * @returns δ [rad]; NaN in gives NaN out
 * @example solarDeclination(246) // 0.120
 * Source: FAO-56 Eq. 24.
 */
export function solarDeclination(dayOfYear: number): number {
  return 0.409 * Math.sin(((2 * Math.PI) / 365) * dayOfYear - 1.39);
}

/**
 * Sunset hour angle from sin φ sin δ and cos φ cos δ; held in 0 … π, so that polar night gives 0 and polar day π.
 *   ωs = arccos(−tan φ tan δ)
 *
 * @returns ωs [rad]; NaN in gives NaN out
 * Source: FAO-56 Eq. 25.
 */
export function sunsetHourAngle(sinSin: number, cosCos: number): number {
  const x = -sinSin / cosCos;
  if (x >= 1) return 0;
  return x <= -1 ? Math.PI : Math.acos(x);
}

/**
 * Daily extraterrestrial radiation from the day's geometry.
 *   Ra = (24·60/π) Gsc dr [ωs sin φ sin δ + cos φ cos δ sin ωs]
 *
 * @param dr inverse relative distance [1]
 * @param omegaS sunset hour angle [rad]
 * @returns Ra [MJ m⁻² d⁻¹], not below 0; NaN in gives NaN out
 * Source: FAO-56 Eq. 21.
 */
export function extraterrestrialRadiation(dr: number, omegaS: number, sinSin: number, cosCos: number): number {
  // sin ωs = √(1 − cos² ωs) with cos ωs = −tan φ tan δ: a root costs a loop over parcels less than a sine
  const cosine = sinSin / cosCos;
  const ra = DAY_FACTOR * dr * (omegaS * sinSin + cosCos * Math.sqrt(Math.max(0, (1 - cosine) * (1 + cosine))));
  return Math.max(ra, 0);
}

/**
 * Daylight hours.
 *   N = 24 ωs / π
 *
 * @param omegaS sunset hour angle [rad]
 * @returns N [h]
 * @example daylightHours(1.527) // 11.7
 * Source: FAO-56 Eq. 34.
 */
export function daylightHours(omegaS: number): number {
  return (24 / Math.PI) * omegaS;
}

/** The sun over one latitude on every day of the year; arrays run over the day of the year, 0 (NaN) … 366. */
export interface SolarGeometry {
  /** degrees */
  latitude: number;
  /** δ [rad] */
  readonly declination: Float64Array;
  /** dr [1] */
  readonly inverseDistance: Float64Array;
  /** sin φ sin δ */
  readonly sinSin: Float64Array;
  /** cos φ cos δ */
  readonly cosCos: Float64Array;
  /** ωs [rad] */
  readonly sunsetAngle: Float64Array;
  /** Ra [MJ m⁻² d⁻¹] */
  readonly extraterrestrialRadiation: Float64Array;
}

function tableOf(quantity: (dayOfYear: number) => number): Float64Array {
  return Float64Array.from({ length: LAST_DAY_OF_YEAR + 1 }, (_, day) => (day === 0 ? Number.NaN : quantity(day)));
}

const DECLINATION = tableOf(solarDeclination);
const INVERSE_DISTANCE = tableOf(inverseRelativeDistance);
const SIN_DELTA = DECLINATION.map(Math.sin);
const COS_DELTA = DECLINATION.map(Math.cos);

/** An empty geometry to be filled; what does not depend on latitude is shared between all of them. */
function emptyGeometry(): SolarGeometry {
  const length = LAST_DAY_OF_YEAR + 1;
  return {
    latitude: Number.NaN,
    declination: DECLINATION,
    inverseDistance: INVERSE_DISTANCE,
    sinSin: new Float64Array(length),
    cosCos: new Float64Array(length),
    sunsetAngle: new Float64Array(length),
    extraterrestrialRadiation: new Float64Array(length),
  };
}

/**
 * The sun over one latitude for every day of the year, made once and read by day.
 *
 * @param latitude [degrees]
 * @param into a geometry to overwrite, so that a loop over parcels allocates nothing
 * @example solarGeometry(-20).extraterrestrialRadiation[246] // 32.19
 * Source: FAO-56 Eq. 21, 23, 24, 25.
 */
export function solarGeometry(latitude: number, into: SolarGeometry = emptyGeometry()): SolarGeometry {
  const phi = radiansFromDegrees(latitude);
  const [sinPhi, cosPhi] = [Math.sin(phi), Math.cos(phi)];
  into.latitude = latitude;
  for (let day = 0; day <= LAST_DAY_OF_YEAR; day++) {
    const sinSin = sinPhi * SIN_DELTA[day];
    const cosCos = cosPhi * COS_DELTA[day];
    const omegaS = sunsetHourAngle(sinSin, cosCos);
    into.sinSin[day] = sinSin;
    into.cosCos[day] = cosCos;
    into.sunsetAngle[day] = omegaS;
    into.extraterrestrialRadiation[day] = extraterrestrialRadiation(INVERSE_DISTANCE[day], omegaS, sinSin, cosCos);
  }
  return into;
}

/** The sun over one latitude on one day. */
export interface SunDay {
  /** dr [1] */
  inverseDistance: number;
  /** δ [rad] */
  declination: number;
  sinSin: number;
  cosCos: number;
  /** ωs [rad] */
  sunsetAngle: number;
  /** Ra [MJ m⁻² d⁻¹] */
  extraterrestrialRadiation: number;
}

/**
 * The sun over one latitude on one day; the same numbers to the last bit as the day's entries of `solarGeometry`.
 *
 * @param latitude [degrees]
 * @param dayOfYear whole number 1–366; anything else gives NaN throughout
 * @param into an object to overwrite
 * @example sunDay(-20, 246).sunsetAngle // 1.527
 * Source: FAO-56 Eq. 21, 23, 24, 25.
 */
export function sunDay(latitude: number, dayOfYear: number, into: SunDay = emptySunDay()): SunDay {
  const phi = radiansFromDegrees(latitude);
  into.inverseDistance = INVERSE_DISTANCE[dayOfYear] ?? Number.NaN;
  into.declination = DECLINATION[dayOfYear] ?? Number.NaN;
  into.sinSin = Math.sin(phi) * (SIN_DELTA[dayOfYear] ?? Number.NaN);
  into.cosCos = Math.cos(phi) * (COS_DELTA[dayOfYear] ?? Number.NaN);
  into.sunsetAngle = sunsetHourAngle(into.sinSin, into.cosCos);
  into.extraterrestrialRadiation = extraterrestrialRadiation(into.inverseDistance, into.sunsetAngle, into.sinSin, into.cosCos);
  return into;
}

function emptySunDay(): SunDay {
  return {
    inverseDistance: Number.NaN,
    declination: Number.NaN,
    sinSin: Number.NaN,
    cosCos: Number.NaN,
    sunsetAngle: Number.NaN,
    extraterrestrialRadiation: Number.NaN,
  };
}

/**
 * Seasonal correction of solar time.
 *   Sc = 0.1645 sin 2b − 0.1255 cos b − 0.025 sin b,  b = 2π (J − 81) / 364
 *
 * @returns Sc [h]
 * @example seasonalTimeCorrection(274) // 0.1889
 * Source: FAO-56 Eq. 32, 33.
 */
export function seasonalTimeCorrection(dayOfYear: number): number {
  const b = (2 * Math.PI * (dayOfYear - 81)) / 364;
  return 0.1645 * Math.sin(2 * b) - 0.1255 * Math.cos(b) - 0.025 * Math.sin(b);
}

/**
 * Hour angle of the sun at a clock time.
 *   ω = (π/12) {[t + 0.06667 (Lm − Lz) + Sc] − 12}, longitudes east
 *
 * @param clockHour standard clock time, middle of the period [h]
 * @param longitude of the place [degrees east]
 * @param zoneLongitude centre of the time zone [degrees east], 15 × the UTC offset in hours
 * @returns ω [rad], brought into −π … π
 * Source: FAO-56 Eq. 31, there with longitudes counted west.
 */
export function hourAngle(dayOfYear: number, clockHour: number, longitude: number, zoneLongitude: number): number {
  const solarHour = clockHour + 0.06667 * (longitude - zoneLongitude) + seasonalTimeCorrection(dayOfYear);
  const omega = (Math.PI / 12) * (solarHour - 12);
  return omega - 2 * Math.PI * Math.round(omega / (2 * Math.PI));
}

/**
 * Extraterrestrial radiation of a period within the day; the part of the period with the sun below the horizon counts nothing.
 *   Ra = (12·60/π) Gsc dr [(ω2 − ω1) sin φ sin δ + cos φ cos δ (sin ω2 − sin ω1)]
 *
 * @param sun the day, from `sunDay`
 * @param omega hour angle in the middle of the period [rad]
 * @param periodLength [h]
 * @returns Ra [MJ m⁻² per period]
 * Source: FAO-56 Eq. 28–30; ω1 and ω2 held within ±ωs as in ASCE 2005 (recalled, not re-read).
 */
export function extraterrestrialRadiationPeriod(sun: SunDay, omega: number, periodLength: number): number {
  const half = (Math.PI * periodLength) / 24;
  const [from, to] = [omega - half, omega + half];
  // A period across solar midnight is seen from both days, which matters when the sun does not set.
  const shift = 2 * Math.PI;
  const parts = clippedPart(sun, from, to) + clippedPart(sun, from - shift, to - shift) + clippedPart(sun, from + shift, to + shift);
  return HOUR_FACTOR * sun.inverseDistance * parts;
}

function clippedPart(sun: SunDay, from: number, to: number): number {
  const start = Math.max(from, -sun.sunsetAngle);
  const end = Math.min(to, sun.sunsetAngle);
  if (end <= start) return 0;
  return (end - start) * sun.sinSin + sun.cosCos * (Math.sin(end) - Math.sin(start));
}

/**
 * Angle of the sun above the horizon.
 *   sin β = sin φ sin δ + cos φ cos δ cos ω
 *
 * @returns β [rad], negative below the horizon
 * Source: ASCE 2005 Eq. 62 (recalled, not re-read); FAO-56 Annex 3 Eq. 3-15.
 */
export function sunElevation(sun: SunDay, omega: number): number {
  return Math.asin(Math.min(1, Math.max(-1, sun.sinSin + sun.cosCos * Math.cos(omega))));
}
