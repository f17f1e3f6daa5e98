/**
 * Evaporation from a wet surface driven by radiation alone.
 */
import { LATENT_HEAT } from '../base/constants.ts';

/** Priestley–Taylor coefficient of wet surfaces without advection. Source: Priestley & Taylor (1972). */
export const PRIESTLEY_TAYLOR = 1.26;

/**
 * Evaporation of a wet surface.
 *   λE = α Δ/(Δ + γ) (Rn − G),  α = 1.26
 *
 * @param slope Δ [kPa °C⁻¹]
 * @param gamma γ [kPa °C⁻¹]
 * @param availableEnergy Rn − G [MJ m⁻² d⁻¹]
 * @returns E [mm d⁻¹]; NaN in gives NaN out
 * @example priestleyTaylorEt(0.122, 0.0666, 13.28) // 4.42
 * Source: Priestley & Taylor (1972), Monthly Weather Review 100, 81–92.
 */
export function priestleyTaylorEt(slope: number, gamma: number, availableEnergy: number): number {
  return ((PRIESTLEY_TAYLOR * slope) / (slope + gamma)) * (availableEnergy / LATENT_HEAT);
}
