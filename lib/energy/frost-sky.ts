/**
 * Long-wave radiation of a night: what the surface loses to the sky. Fluxes [W m⁻²], a loss is negative; NaN in any input gives NaN out.
 */
import { CELSIUS_OFFSET, STEFAN_BOLTZMANN_SI } from '../base/constants.ts';
import { humidityFactor } from './radiation.ts';

/** Published forms of the emissivity ε of a clear sky, ea in kPa and TK in kelvin; that of FAO-56 is 1 less its humidity factor. */
export const SKY_FORMULAS = {
  fao56: { name: 'FAO-56', expression: '0.66 + 0.14 √ea', source: 'FAO-56 Eq. 39, night, no cloud' },
  brunt: { name: 'Brunt', expression: '0.52 + 0.065 √(10 ea)', source: 'Brunt (1932), QJRMS 58, 389–420 (recalled)' },
  idso: {
    name: 'Idso',
    expression: '0.70 + 0.0000595 (10 ea) exp(1500 / TK)',
    source: 'Idso (1981), Water Resources Research 17, 295–304 (recalled)',
  },
  brutsaert: {
    name: 'Brutsaert',
    expression: '1.24 (10 ea / TK)^(1/7)',
    source: 'Brutsaert (1975), Water Resources Research 11, 742–744 (recalled)',
  },
  swinbank: { name: 'Swinbank', expression: '0.0000092 TK²', source: 'Swinbank (1963), QJRMS 89, 339–348 (recalled)' },
} as const;
export type SkyFormula = keyof typeof SKY_FORMULAS;
export const SKY_NAMES = Object.keys(SKY_FORMULAS) as [SkyFormula, ...SkyFormula[]];

/** hPa in a kPa. */
const HECTOPASCALS = 10;

/**
 * Emissivity of a clear sky as seen from the ground.
 *   the form of each formula stands in `SKY_FORMULAS`
 *
 * @param airTemperature [°C]
 * @param actualVapourPressure ea [kPa]
 * @returns ε [1]; for `fao56` the emissivity that a surface of emissivity 1 would see
 * @example skyEmissivity('brunt', 0, 0.4) // 0.65
 * Source: as named in `SKY_FORMULAS`.
 */
export function skyEmissivity(formula: SkyFormula, airTemperature: number, actualVapourPressure: number): number {
  const kelvin = airTemperature + CELSIUS_OFFSET;
  const e = HECTOPASCALS * actualVapourPressure;
  switch (formula) {
    case 'brunt':
      return 0.52 + 0.065 * Math.sqrt(e);
    case 'idso':
      return 0.7 + 5.95e-5 * e * Math.exp(1500 / kelvin);
    case 'brutsaert':
      return 1.24 * (e / kelvin) ** (1 / 7);
    case 'swinbank':
      // the vapour pressure is no part of the form, but a missing one stays missing
      return 9.2e-6 * kelvin * kelvin + 0 * e;
    default:
      return 1 - humidityFactor(actualVapourPressure);
  }
}

/**
 * Radiation of a black body.
 *   σT⁴
 *
 * @param airTemperature [°C]
 * @returns [W m⁻²]
 * @example blackBodyFlux(0) // 315.7
 * Source: Stefan–Boltzmann law with the SI constant (CODATA 2018).
 */
export function blackBodyFlux(airTemperature: number): number {
  return STEFAN_BOLTZMANN_SI * (airTemperature + CELSIUS_OFFSET) ** 4;
}

/**
 * Net radiation of a surface at air temperature under a clear night sky; there is no sun, so it is net long-wave radiation.
 *   Rn = −(1 − ε) σT⁴
 *
 * @param airTemperature [°C]
 * @param actualVapourPressure [kPa]
 * @returns Rn [W m⁻²], negative
 * @example clearNightNetRadiation('brunt', 0, 0.4) // -110.5
 * Source: as named in `SKY_FORMULAS`; surface emissivity 1.
 */
export function clearNightNetRadiation(formula: SkyFormula, airTemperature: number, actualVapourPressure: number): number {
  return -(1 - skyEmissivity(formula, airTemperature, actualVapourPressure)) * blackBodyFlux(airTemperature);
}

/**
 * Cloud factor of a share of sky covered: what is left of the loss under a clear sky.
 *   f = 1 − 0.9 c
 *
 * It is the cloud factor of FAO-56 Eq. 39 with Rs/Rso = (0.25 + 0.50 n/N) / 0.75 (Eq. 35) and n/N = 1 − c.
 *
 * @param cloudShare c, 0 clear … 1 overcast
 * @returns f [1]
 * @example cloudFactorOfShare(0.5) // 0.55
 * Source: FAO-56 Eq. 35, 39.
 */
export function cloudFactorOfShare(cloudShare: number): number {
  return 1 - 0.9 * cloudShare;
}

/** Share of sky covered from the cloud factor; the inverse of `cloudFactorOfShare`, held to 0 … 1. @example cloudShareOfFactor(0.55) // 0.5 */
export function cloudShareOfFactor(factor: number): number {
  return Math.min(1, Math.max(0, (1 - factor) / 0.9));
}
