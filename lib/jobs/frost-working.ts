/** The working of a frost night at one planting: every station that speaks for it, the parcel, the plant, the water. */
import { CRITICAL_SOURCE, STAGE_SOURCE } from '../../db/library/frost.ts';
import { quantity, type Trace, type WorkingStep } from '../base/working.ts';
import { plantNight } from '../energy/frost-plant.ts';
import { TENTH_DEVIATE } from '../energy/frost-stage.ts';
import { type FrostNight, type FrostPlanting, type FrostWanted, protectionOf } from './frost.ts';
import { traceStationNight } from './frost-site.ts';

/** Steps by the code that made the answer. */
export function frostWorking(found: FrostNight, planting: FrostPlanting, wanted: FrostWanted): WorkingStep[] {
  const steps: WorkingStep[] = [];
  const trace: Trace = { step: (step) => steps.push({ ...step, name: step.name.charAt(0).toUpperCase() + step.name.slice(1) }) };
  for (const { site } of planting.weights) traceStationNight(found.stations[site], wanted.options, trace);
  traceParcel(trace, found, planting);
  plantNight(planting.night, wanted.options.sky, trace);
  traceRisk(trace, planting);
  protectionOf(planting, wanted.rotation, trace);
  return steps;
}

function traceParcel(trace: Trace, found: FrostNight, { weights, night }: FrostPlanting): void {
  const carried = [
    ['T0', 'air temperature at sunset', '°C', night.airTemperature, (at: number) => found.stations[at].evening.airTemperature],
    ['Td', 'dew point at sunset', '°C', night.dewPoint, (at: number) => found.stations[at].evening.dewPoint],
    ['u', 'wind of the night', 'm s⁻¹', night.windSpeed, (at: number) => found.stations[at].evening.windSpeed],
    ['f', 'cloud factor', '1', night.cloudFactor, (at: number) => found.stations[at].evening.cloudFactor],
    ['Tmin', 'lowest air temperature', '°C', night.minimum, (at: number) => found.stations[at].estimate.minimum],
    ['E', 'error of the minimum', '°C', night.error, (at: number) => found.stations[at].estimate.error],
  ] as const;
  for (const [symbol, name, unit, result, pick] of carried) {
    trace.step({
      ...{ part: 'parcel', symbol, name: `${name} at the parcel` },
      expression: weights.map(({ site }) => `w(${found.stations[site].code}) ${symbol}(${found.stations[site].code})`).join(' + '),
      inputs: weights.flatMap(({ site, weight }) => [
        quantity(`w(${found.stations[site].code})`, weight, '1'),
        quantity(`${symbol}(${found.stations[site].code})`, pick(site), unit),
      ]),
      ...{ result, unit, source: 'inverse distance squared, Shepard (1968); elevation is left out: on a still night cold air gathers low' },
    });
  }
}

function traceRisk(trace: Trace, { plant, night, stage, thermalTime }: FrostPlanting): void {
  if (Number.isNaN(stage.tenthKilled)) return;
  const source = stage.table ? CRITICAL_SOURCE : 'given by the reader';
  trace.step({
    ...{ part: 'risk', symbol: 'T10', name: `critical temperature, a tenth killed: ${stage.tableName ?? 'own'}, ${stage.stageName}` },
    expression: stage.from === 'thermal-time' ? 'table, at the stage that thermal time has reached' : 'table, at the stage chosen',
    inputs: stage.from === 'thermal-time' ? [quantity('Σ', thermalTime, '°C d')] : [],
    ...{ result: stage.tenthKilled, unit: '°C', source: stage.from === 'thermal-time' ? `${source}; ${STAGE_SOURCE}` : source },
  });
  trace.step({
    ...{ part: 'risk', symbol: 'M', name: 'margin of the leaf over the critical temperature; negative: damage is expected' },
    expression: 'Tl − T10',
    inputs: [quantity('Tl', plant.leaf, '°C'), quantity('T10', stage.tenthKilled, '°C')],
    ...{ result: plant.leaf - stage.tenthKilled, unit: '°C', source: 'definition' },
  });
  trace.step({
    ...{ part: 'risk', symbol: 'M,low', name: 'margin at the low end of the band; negative: damage is possible' },
    expression: 'M − 1.2816 E',
    inputs: [quantity('M', plant.leaf - stage.tenthKilled, '°C'), quantity('E', night.error, '°C')],
    ...{ result: plant.leaf - stage.tenthKilled - TENTH_DEVIATE * night.error, unit: '°C', source: 'normal distribution of the error' },
  });
}
