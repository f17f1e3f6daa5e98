/** The last steps of the working of a day's energy budget: what evaporation takes and what is left for the air. */
import { LATENT_HEAT } from '../base/constants.ts';
import { quantity as q, type Trace } from '../base/working.ts';

const ENERGY = 'MJ m⁻² d⁻¹';

/** A day's budget [MJ m⁻² d⁻¹], with ET [mm d⁻¹]. */
interface Budget {
  readonly netRadiation: number;
  readonly soilHeatFlux: number;
  readonly latentHeatFlux: number;
  readonly sensibleHeatFlux: number;
  readonly referenceEt: number;
}

/** Hands the closing steps of a solved budget to the recorder; nothing is computed here. */
export function traceEnergyBudget(budget: Budget, trace: Trace): void {
  const part = 'energy-budget';
  trace.step({
    part,
    symbol: 'λE',
    name: 'Latent heat: energy that evaporates water',
    expression: 'λE = λ ET',
    inputs: [q('λ', LATENT_HEAT, 'MJ kg⁻¹'), q('ET', budget.referenceEt, 'mm d⁻¹')],
    result: budget.latentHeatFlux,
    unit: ENERGY,
    source: 'FAO-56 Annex 3 Eq. 3-1 (λ = 2.45 MJ kg⁻¹); 1 mm d⁻¹ on 1 m² is 1 kg d⁻¹',
  });
  trace.step({
    part,
    symbol: 'H',
    name: 'Sensible heat: energy that warms the air; below 0 the air brings heat to the crop',
    expression: 'H = Rn − G − λE',
    inputs: [q('Rn', budget.netRadiation, ENERGY), q('G', budget.soilHeatFlux, ENERGY), q('λE', budget.latentHeatFlux, ENERGY)],
    result: budget.sensibleHeatFlux,
    unit: ENERGY,
    source: 'FAO-56 Eq. 1, solved for H',
  });
}
