/**
 * The fall of temperature through a clear, calm night. Temperatures [°C], fluxes [W m⁻²], times [h after sunset]. NaN in gives NaN out.
 */
import { psychrometricConstant } from './air.ts';
import { saturationPoint } from './frost-humidity.ts';
import { vapourPressureSlope } from './humidity.ts';

/** A ground that gives its heat to the night: volumetric heat capacity [MJ m⁻³ °C⁻¹] and thermal diffusivity [m² s⁻¹]. */
export interface FrostGround {
  readonly name: string;
  readonly heatCapacity: number;
  readonly diffusivity: number;
  readonly source: string;
}

/** Grounds to choose from; the wetter and barer the ground, the more heat it gives. */
export const FROST_GROUNDS = {
  dry: {
    name: 'dry, or under grass or litter',
    heatCapacity: 1.35,
    diffusivity: 0.21e-6,
    source: 'mean of dry sand and dry clay, Oke (1987), Boundary Layer Climates, Table 2.1 (recalled)',
  },
  moist: {
    name: 'moist and bare',
    heatCapacity: 2.1,
    diffusivity: 0.5e-6,
    source: 'heat capacity FAO-56 Eq. 42; diffusivity between dry and wet, Oke (1987), Table 2.1 (recalled)',
  },
  wet: {
    name: 'wet and bare',
    heatCapacity: 3.03,
    diffusivity: 0.62e-6,
    source: 'mean of saturated sand and saturated clay, Oke (1987), Table 2.1 (recalled)',
  },
} as const satisfies Record<string, FrostGround>;
export type FrostGroundName = keyof typeof FROST_GROUNDS;
export const GROUND_NAMES = Object.keys(FROST_GROUNDS) as [FrostGroundName, ...FrostGroundName[]];

const SECONDS_PER_HOUR = 3600;
const JOULES_PER_MEGAJOULE = 1e6;

/**
 * Thermal admittance of the ground.
 *   μ = C √κ
 *
 * @returns μ [J m⁻² °C⁻¹ s⁻⁰·⁵]
 * @example thermalAdmittance({ name: '', heatCapacity: 2.1, diffusivity: 5e-7, source: '' }) // 1484.9
 * Source: Brunt (1941), Physical and Dynamical Meteorology (recalled).
 */
export function thermalAdmittance({ heatCapacity, diffusivity }: FrostGround): number {
  return heatCapacity * JOULES_PER_MEGAJOULE * Math.sqrt(diffusivity);
}

/**
 * Fall of temperature after sunset when the whole net loss of radiation is drawn from the ground (Brunt's square-root law).
 *   ΔT = (2 / √π) |Rn| √t / μ
 *
 * Assumes that net radiation stays as at sunset, no wind, and ground of one kind; where air gives heat too, it falls less.
 *
 * @param netRadiation Rn at sunset [W m⁻²], negative; a gain gives no fall
 * @param hours t [h]
 * @param admittance μ [J m⁻² °C⁻¹ s⁻⁰·⁵]
 * @returns ΔT [°C], ≥ 0
 * @example bruntFall(-80, 12, 1484.9) // 12.635
 * Source: Brunt (1941), Physical and Dynamical Meteorology, as in Snyder & de Melo-Abreu (2005), Frost Protection, FAO, volume 1 (recalled).
 */
export function bruntFall(netRadiation: number, hours: number, admittance: number): number {
  return ((2 / Math.sqrt(Math.PI)) * Math.max(0, -netRadiation) * Math.sqrt(hours * SECONDS_PER_HOUR)) / admittance;
}

/**
 * Share of the cooling that is left once dew or frost forms: condensing vapour gives back its latent heat.
 *   s = γ / (γ + Δ)
 *
 * Saturated air that cools by 1 °C gives off Δ/γ times its sensible heat besides. Taken at the saturation point and held below it.
 *
 * @param saturation dew or frost point [°C]
 * @param pressure [kPa]
 * @returns s [1]
 * @example condensationShare(0, 101.3) // 0.6025
 * Source: Δ and γ of FAO-56 Eq. 8, 13; heat capacity of saturated air as in Monteith & Unsworth (1990), Principles of Environmental Physics (recalled).
 */
export function condensationShare(saturation: number, pressure: number): number {
  const gamma = psychrometricConstant(pressure);
  return gamma / (gamma + vapourPressureSlope(saturation));
}

/** What a night's cooling starts from. */
export interface NightCooling {
  /** at sunset [°C] */
  readonly airTemperature: number;
  /** at sunset, over water [°C] */
  readonly dewPoint: number;
  /** at sunset [W m⁻²] */
  readonly netRadiation: number;
  /** of the ground [J m⁻² °C⁻¹ s⁻⁰·⁵] */
  readonly admittance: number;
  /** sunset to sunrise [h] */
  readonly nightLength: number;
  /** [kPa] */
  readonly pressure: number;
}

/**
 * Minimum by the square-root law, slowed from the dew or frost point on.
 *   Tmin = T0 − ΔT, or Tf − s [ΔT − (T0 − Tf)] where T0 − ΔT < Tf
 *
 * Air saturated at sunset is slowed all night.
 *
 * @returns Tmin [°C]
 * @example bruntMinimum({ airTemperature: 8, dewPoint: -12, netRadiation: -80, admittance: 1484.9, nightLength: 12, pressure: 101.3 }) // -4.635
 * Source: Brunt (1941) as `bruntFall`; the slowing as `condensationShare`.
 */
export function bruntMinimum(night: NightCooling): number {
  const { airTemperature, dewPoint, pressure } = night;
  const fall = bruntFall(night.netRadiation, night.nightLength, night.admittance);
  const saturation = Math.min(saturationPoint(dewPoint), airTemperature);
  const reach = airTemperature - saturation;
  if (Number.isNaN(fall + reach)) return Number.NaN;
  return fall <= reach ? airTemperature - fall : saturation - condensationShare(saturation, pressure) * (fall - reach);
}

/** Air temperature through a night, of which start, end and minimum are known. */
export interface NightCourse {
  /** at sunset [°C] */
  readonly airTemperature: number;
  /** at sunrise [°C] */
  readonly minimum: number;
  /** [h] */
  readonly nightLength: number;
}

/**
 * Air temperature at a time of the night on the square-root course from sunset to the minimum at sunrise.
 *   T(t) = T0 − (T0 − Tmin) √(t / h)
 *
 * @param hours t, held to the night [h after sunset]
 * @returns T [°C]
 * @example nightTemperature({ airTemperature: 9, minimum: -3, nightLength: 12 }, 3) // 3
 * Source: Snyder & de Melo-Abreu (2005), Frost Protection, FAO, volume 1, square-root trend (recalled); there from two hours after sunset.
 */
export function nightTemperature({ airTemperature, minimum, nightLength }: NightCourse, hours: number): number {
  const share = Math.min(1, Math.max(0, hours / nightLength));
  return airTemperature - (airTemperature - minimum) * Math.sqrt(share);
}

/**
 * Hours from sunset until the square-root course reaches a temperature; the inverse of `nightTemperature`.
 *   t = h [(T0 − T) / (T0 − Tmin)]²
 *
 * @returns t [h]; 0 where it is as cold at sunset, Infinity where the night does not get so cold
 * @example hoursUntil({ airTemperature: 9, minimum: -3, nightLength: 12 }, 3) // 3
 * Source: as `nightTemperature`, solved for t.
 */
export function hoursUntil({ airTemperature, minimum, nightLength }: NightCourse, temperature: number): number {
  if (Number.isNaN(airTemperature + minimum + nightLength + temperature)) return Number.NaN;
  if (temperature >= airTemperature) return 0;
  if (temperature < minimum) return Number.POSITIVE_INFINITY;
  return nightLength * ((airTemperature - temperature) / (airTemperature - minimum)) ** 2;
}
