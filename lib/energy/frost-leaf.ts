/**
 * Temperature of a leaf or bud at night: it loses radiation to the sky faster than the air can warm it.
 */
import { CELSIUS_OFFSET, STEFAN_BOLTZMANN_SI } from '../base/constants.ts';

/** Molar heat capacity of air [J mol⁻¹ °C⁻¹]. Source: Campbell & Norman (1998), An Introduction to Environmental Biophysics, Table A.1 (recalled). */
export const AIR_MOLAR_HEAT = 29.3;
/** Width of the leaf or blossom taken where none is given [m]. Choice of ours: an opening leaf cluster of a fruit tree. */
export const USUAL_LEAF_WIDTH = 0.05;
/** Least wind that is computed with [m s⁻¹]: below it buoyancy stirs the air instead. Choice of ours. */
export const LEAST_LEAF_WIND = 0.2;
/** Characteristic dimension of a leaf as a share of its width. Source: Campbell & Norman (1998), chapter 7 (recalled). */
const CHARACTERISTIC_SHARE = 0.72;
/** Factor of conductance in the turbulence outdoors. Source: Campbell & Norman (1998), chapter 7 (recalled). */
const OUTDOORS = 1.4;

/**
 * Boundary-layer conductance for heat of one side of a leaf in forced convection.
 *   gHa = 1.4 × 0.135 √(u / d),  d = 0.72 w
 *
 * @param windSpeed u at the leaf [m s⁻¹]; taken as at least 0.2
 * @param width w of the leaf [m]
 * @returns gHa [mol m⁻² s⁻¹]
 * @example leafHeatConductance(1, 0.05) // 0.9961
 * Source: Campbell & Norman (1998), An Introduction to Environmental Biophysics, Table 7.6 (recalled).
 */
export function leafHeatConductance(windSpeed: number, width: number): number {
  const wind = Math.max(LEAST_LEAF_WIND, windSpeed);
  return OUTDOORS * 0.135 * Math.sqrt(wind / (CHARACTERISTIC_SHARE * width));
}

/**
 * Radiative conductance of one side of a surface of emissivity 1.
 *   gr = 4 σ T³ / cp
 *
 * @param airTemperature [°C]
 * @returns gr [mol m⁻² s⁻¹]
 * @example radiativeConductance(0) // 0.1578
 * Source: Campbell & Norman (1998), An Introduction to Environmental Biophysics, chapter 12 (recalled).
 */
export function radiativeConductance(airTemperature: number): number {
  return (4 * STEFAN_BOLTZMANN_SI * (airTemperature + CELSIUS_OFFSET) ** 3) / AIR_MOLAR_HEAT;
}

/** A leaf under the night sky. */
export interface LeafNight {
  /** of the air around it [°C] */
  readonly airTemperature: number;
  /** net radiation of a level surface at air temperature [W m⁻²], negative */
  readonly netRadiation: number;
  /** at the leaf [m s⁻¹] */
  readonly windSpeed: number;
  /** [m] */
  readonly width: number;
}

/**
 * Temperature of a dry leaf that lies open to the sky: its radiation loss over what radiation and air bring to its two sides.
 *   Tl = Ta + Rn / [2 cp (gHa + gr)]
 *
 * The underside sees ground and foliage at air temperature. No heat of dew or frost is counted: a leaf that gathers dew is a little warmer.
 *
 * @returns Tl [°C]
 * @example leafTemperature({ airTemperature: 0, netRadiation: -80, windSpeed: 1, width: 0.05 }) // -1.18
 * Source: Campbell & Norman (1998), An Introduction to Environmental Biophysics, chapter 14, leaf without latent heat (recalled).
 */
export function leafTemperature({ airTemperature, netRadiation, windSpeed, width }: LeafNight): number {
  const conductance = leafHeatConductance(windSpeed, width) + radiativeConductance(airTemperature);
  return airTemperature + netRadiation / (2 * AIR_MOLAR_HEAT * conductance);
}
