/** The working of the radiation of a night, in steps that a pocket calculator can follow. */
import { CELSIUS_OFFSET, STEFAN_BOLTZMANN_SI } from '../base/constants.ts';
import { quantity, type Trace } from '../base/working.ts';
import { SKY_FORMULAS, type SkyFormula, skyEmissivity } from './frost-sky.ts';

interface SkyTold {
  readonly part: string;
  readonly when: string;
  readonly formula: SkyFormula;
  /** symbol of the air temperature, and its value [°C] */
  readonly symbol: string;
  readonly airTemperature: number;
  /** [kPa] */
  readonly vapourPressure: number;
  readonly cloudFactor: number;
  /** as computed [W m⁻²] */
  readonly netRadiation: number;
  readonly strip?: string;
}

/** Absolute temperature, emissivity of the sky, net radiation. */
export function traceSky(trace: Trace, told: SkyTold): void {
  const { part, when, strip, airTemperature, vapourPressure } = told;
  const sky = SKY_FORMULAS[told.formula];
  const kelvin = airTemperature + CELSIUS_OFFSET;
  const emissivity = skyEmissivity(told.formula, airTemperature, vapourPressure);
  trace.step({
    ...{ part, symbol: 'TK', name: `absolute temperature ${when}`, strip },
    expression: `${told.symbol} + 273.15`,
    inputs: [quantity(told.symbol, airTemperature, '°C')],
    ...{ result: kelvin, unit: 'K', source: 'offset of the Celsius scale' },
  });
  trace.step({
    ...{ part, symbol: 'ε', name: `emissivity of a clear sky ${when}, ${sky.name}`, strip },
    expression: sky.expression,
    inputs: [quantity('ea', vapourPressure, 'kPa'), ...(sky.expression.includes('TK') ? [quantity('TK', kelvin, 'K')] : [])],
    ...{ result: emissivity, unit: '1', source: sky.source },
  });
  trace.step({
    ...{ part, symbol: 'Rn', name: `net radiation ${when}`, strip },
    expression: '−(1 − ε) σ TK⁴ f',
    inputs: [
      quantity('ε', emissivity, '1'),
      quantity('σ', STEFAN_BOLTZMANN_SI, 'W m⁻² K⁻⁴'),
      quantity('TK', kelvin, 'K'),
      quantity('f', told.cloudFactor, '1'),
    ],
    ...{ result: told.netRadiation, unit: 'W m⁻²', source: 'Stefan–Boltzmann law; f is the cloud factor of FAO-56 Eq. 39' },
  });
}
