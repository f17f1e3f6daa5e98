/**
 * Resistances of a canopy and the full Penman–Monteith equation, from which the reference equations are derived.
 */
import { AIR_SPECIFIC_HEAT, LATENT_HEAT, VON_KARMAN } from '../base/constants.ts';

/** Sensors over a canopy [m]. */
interface CanopyExposure {
  readonly cropHeight: number;
  readonly windHeight: number;
  readonly humidityHeight: number;
  /** height of the cover under the sensors, which sets d; the crop's own when left out */
  readonly coverHeight?: number;
}

/**
 * Aerodynamic resistance times wind speed, ra · uz, a constant of the canopy and the sensors.
 *   ra uz = ln[(zm − d)/zom] ln[(zh − d)/zoh] / k²,  d = 2h/3, zom = 0.123 h, zoh = 0.1 zom
 *
 * @returns ra uz [1]; NaN where a sensor stands below the displacement height
 * @example aerodynamicConstant({ cropHeight: 0.12, windHeight: 2, humidityHeight: 2 }) // 208
 * Source: FAO-56 Eq. 4 and Box 4.
 */
export function aerodynamicConstant({ cropHeight, windHeight, humidityHeight, coverHeight = cropHeight }: CanopyExposure): number {
  const displacement = (2 / 3) * coverHeight;
  const momentum = 0.123 * cropHeight;
  const heat = 0.1 * momentum;
  const wind = Math.log((windHeight - displacement) / momentum);
  const air = Math.log((humidityHeight - displacement) / heat);
  return (wind * air) / (VON_KARMAN * VON_KARMAN);
}

/**
 * Aerodynamic resistance.
 *
 * @param windSpeed at the wind height [m s⁻¹]; 0 gives Infinity, no exchange
 * @returns ra [s m⁻¹]
 * @example aerodynamicResistance({ cropHeight: 0.12, windHeight: 2, humidityHeight: 2 }, 2) // 104
 * Source: FAO-56 Eq. 4.
 */
export function aerodynamicResistance(exposure: CanopyExposure, windSpeed: number): number {
  return aerodynamicConstant(exposure) / windSpeed;
}

/**
 * Bulk surface resistance.
 *   rs = rl / LAIactive,  LAIactive = 0.5 LAI
 *
 * @param leafAreaIndex LAI [1]
 * @param leafResistance rl of a well-lit leaf [s m⁻¹]
 * @returns rs [s m⁻¹]
 * @example bulkSurfaceResistance(2.88, 100) // 69.4
 * Source: FAO-56 Eq. 5 and Box 5.
 */
export function bulkSurfaceResistance(leafAreaIndex: number, leafResistance: number): number {
  return leafResistance / (0.5 * leafAreaIndex);
}

/** Leaf area index of clipped grass, 24 h. @example leafAreaIndexOfGrass(0.12) // 2.88 */
export function leafAreaIndexOfGrass(cropHeight: number): number {
  return 24 * cropHeight;
}

/** What the full equation needs. */
interface PenmanMonteithInput {
  /** Rn − G [MJ m⁻² d⁻¹] */
  readonly availableEnergy: number;
  /** es − ea [kPa] */
  readonly vapourPressureDeficit: number;
  /** Δ [kPa °C⁻¹] */
  readonly slope: number;
  /** γ [kPa °C⁻¹] */
  readonly psychrometricConstant: number;
  /** ρ [kg m⁻³] */
  readonly airDensity: number;
  /** ra [s m⁻¹] */
  readonly aerodynamicResistance: number;
  /** rs [s m⁻¹] */
  readonly surfaceResistance: number;
}

/**
 * Evapotranspiration of any canopy by the full Penman–Monteith equation.
 *   λET = [Δ (Rn − G) + ρ cp (es − ea)/ra] / [Δ + γ (1 + rs/ra)]
 *
 * @returns ET [mm d⁻¹] with λ = 2.45 MJ kg⁻¹; NaN in gives NaN out
 * Source: FAO-56 Eq. 3.
 */
export function penmanMonteith(input: PenmanMonteithInput): number {
  const { slope, psychrometricConstant: gamma, aerodynamicResistance: ra, surfaceResistance: rs } = input;
  const exchange = (86400 * input.airDensity * AIR_SPECIFIC_HEAT * input.vapourPressureDeficit) / ra;
  return (slope * input.availableEnergy + exchange) / (slope + gamma * (1 + rs / ra)) / LATENT_HEAT;
}
