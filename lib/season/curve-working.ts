/**
 * Steps of the working where a coefficient is not simply the table's: canopies, wettings of the soil, tall tables, observed cover, mulch.
 */
import { quantity } from '../base/working.ts';
import { canopyBasal, densityCoefficient, fullCoverBasal, fullCoverBasalInClimate } from '../crop/canopy.ts';
import { climateTerm } from '../crop/climate-adjustment.ts';
import { BARE_SOIL_COEFFICIENT } from '../crop/cover.ts';
import { mulchEvaporationShare } from '../crop/mulch.ts';
import { type InitialStage, wettingInterval } from '../crop/single-coefficient.ts';
import { tallRatio } from '../crop/surface-coefficient.ts';
import type { CycleCurve, StageClimate } from './cycle-curve.ts';
import type { PlantedCycles } from './stage-days.ts';
import type { DatedValues, Mulch, WorkingStep } from './types.ts';

type Quantities = WorkingStep['inputs'];

/** Kcb mid of a canopy, equation by equation (FAO-56 Eq. 98–100). */
export function canopySteps({ canopy, climates, coefficients, table }: CycleCurve): WorkingStep[] {
  if (canopy === null) return [];
  const term = standard(climates.mid);
  const ground = canopy.groundBasal ?? BARE_SOIL_COEFFICIENT;
  const full = fullCoverBasalInClimate(canopy.height, term);
  const density = densityCoefficient(canopy.cover, canopy.height);
  const step = (symbol: string, name: string, expression: string, inputs: Quantities, result: number, source: string): WorkingStep => {
    return { part: 'coefficient', symbol, name, expression, inputs, result, unit: '1', source };
  };
  const height = quantity('h', canopy.height, 'm');
  return [
    step(
      'Kcb full',
      'Kcb of full cover in the climate of the mid season',
      'Kcb full = min(1.2, 1 + 0.1 h) + [0.04 (u2 − 2) − 0.004 (RHmin − 45)] (h/3)^0.3',
      [height, quantity('Kcb,h', fullCoverBasal(canopy.height), '1'), quantity('climate term', term, '1')],
      full,
      'FAO-56 Eq. 99 and 100 (recalled)',
    ),
    step(
      'Kd',
      'Density of the canopy',
      'Kd = min(1, 2 fc, fc^(1 / (1 + h)))',
      [quantity('fc', canopy.cover, '1'), height],
      density,
      'FAO-56 Eq. 98 (recalled)',
    ),
    step(
      'Kcb mid',
      'Basal coefficient of the canopy, mid season',
      'Kcb mid = Kcb ground + Kd max(Fr Kcb full − Kcb ground, (Fr Kcb full − Kcb ground) / 2)',
      [
        quantity('Kcb ground', ground, '1'),
        quantity('Fr', canopy.stomatalFactor, '1'),
        quantity('Kcb full', full, '1'),
        quantity('Kd', density, '1'),
      ],
      coefficients.mid,
      'FAO-56 Eq. 98 and 102, Allen & Pereira (2009) (recalled); Fr as given, or fitted to the table value of a mature stand',
    ),
    step(
      'Kcb end',
      'Basal coefficient of the canopy, end of the season',
      'Kcb end = max(Kcb ground, Kcb of the canopy in the climate of the late stage × Kcb end,table / Kcb mid,table)',
      [
        quantity('Kcb of the canopy, late climate', canopyBasal(canopy, standard(climates.late)), '1'),
        quantity('Kcb end,table', table.end, '1'),
        quantity('Kcb mid,table', table.mid, '1'),
      ],
      coefficients.end,
      'proportion of the table, choice of the product',
    ),
  ];
}

function standard({ windSpeed2m, humidityMinimum }: StageClimate): number {
  const term = climateTerm(windSpeed2m, humidityMinimum);
  return Number.isNaN(term) ? 0 : term;
}

/** Kc ini from the wettings of the initial stage. */
export function initialSteps({ initialStage, coefficients }: CycleCurve): WorkingStep[] {
  if (initialStage === null) return [];
  return wettingSteps(initialStage, coefficients.initial, { symbol: 'Kc ini', name: 'Single coefficient of the initial stage' });
}

/** A Kc from how often the soil is wetted. */
export function wettingSteps(stage: InitialStage, result: number, { symbol, name }: { symbol: string; name: string }): WorkingStep[] {
  const { days, referenceEt, rain, irrigation, wettedFraction, texture } = stage;
  const events = rain.count + irrigation.count;
  const interval = wettingInterval(days, events);
  return [
    {
      part: 'coefficient',
      symbol: 'tw',
      name: 'Mean interval between wettings',
      expression: `tw = L / (n + 0.5); n: ${rain.count} of rain, ${Number(irrigation.count.toFixed(1))} of irrigation as the rule is expected to give it`,
      inputs: [quantity('L', days, 'd'), quantity('n', events, '1')],
      result: interval,
      unit: 'd',
      source: 'FAO-56 Annex 7, Eq. 7-7',
    },
    {
      part: 'coefficient',
      symbol,
      name: `${name}, ${texture} soil`,
      expression: `${symbol} by Annex 7 for tw, ETo and the mean infiltrated depth, between its light (10 mm) and heavy (40 mm) forms; times the mean wetted fraction, less what a mulch keeps back`,
      inputs: [
        quantity('tw', interval, 'd'),
        quantity('ETo', referenceEt, 'mm'),
        quantity('rain of the events', rain.depth, 'mm'),
        quantity('irrigation of the stage', irrigation.depth, 'mm'),
        quantity('fw', wettedFraction, '1'),
      ],
      result,
      unit: '1',
      source: 'FAO-56 Annex 7 and Eq. 59–61',
    },
  ];
}

/** Ratio of tall to short reference ET of a day. */
export function ratioStep(climate: number, basal: number): WorkingStep {
  const ratio = tallRatio(climate);
  return {
    part: 'coefficient',
    symbol: 'K',
    name: 'Tall over short reference ET of the day: the crop’s table is on the tall surface',
    expression: 'K = 1.2 + [0.04 (u2 − 2) − 0.004 (RHmin − 45)] (0.5/3)^0.3; Kcb short = K Kcb tall',
    inputs: [quantity('climate term', climate, '1'), quantity('Kcb on short reference ET', basal, '1')],
    result: ratio,
    unit: '1',
    source: 'FAO-56 Eq. 67 and 68',
  };
}

/** Where the Kcb of a day is from when images saw the parcel; null when none fell within the planting. */
export function observedStep(
  observed: DatedValues | undefined,
  { cycles }: PlantedCycles,
  { day, basal }: { readonly day: number; readonly basal: number },
): WorkingStep | null {
  if (!observed || cycles.length === 0) return null;
  const within = observed.days
    .map((at, k) => ({ at, value: observed.values[k] }))
    .filter(({ at }) => at >= cycles[0].start && at < cycles[cycles.length - 1].end);
  if (within.length === 0) return null;
  const before = within.filter(({ at }) => at <= day).at(-1);
  const after = within.find(({ at }) => at >= day);
  const between = before && after;
  return {
    part: 'coefficient',
    symbol: 'Kcb',
    name: 'Basal coefficient from observed cover',
    expression: between
      ? 'linear between the observations before and after the day'
      : 'calendar’s curve, moved by the difference on the nearest observation, which fades to nothing at the planting or the harvest',
    inputs: [
      ...(before ? [quantity(`Kcb observed, ${day - before.at} d before`, before.value, '1')] : []),
      ...(after ? [quantity(`Kcb observed, ${after.at - day} d after`, after.value, '1')] : []),
    ],
    result: basal,
    unit: '1',
    source: 'observed cover: Allen & Pereira (2009) (recalled); linear between images is common practice, no source',
  };
}

/** What a mulch leaves of evaporation. */
export function mulchStep(mulch: Mulch): WorkingStep {
  return {
    part: 'surface',
    symbol: 'fm',
    name: `Share of evaporation left by ${mulch.kind} mulch`,
    expression: mulch.kind === 'plastic' ? 'fm = 1 − cover; Ke × fm' : 'fm = 1 − 0.5 cover; Ke × fm',
    inputs: [quantity('cover', mulch.cover, '1')],
    result: mulchEvaporationShare(mulch),
    unit: '1',
    source: 'FAO-56 chapter 10 (recalled)',
  };
}
