/**
 * The working of a planting's calendar on one day: how its start, stages and cycles came about. What stands behind coefficients that are not simply the
 * table's is in `curve-working.ts`.
 */
import { isoDate } from '../base/civil-date.ts';
import { quantity } from '../base/working.ts';
import { type Cycle, developmentProgress, stageOf } from '../crop/curve.ts';
import { initialFromWettings } from '../crop/single-coefficient.ts';
import { rainWithin, runningMean, runningSoilMean } from '../crop/start-rule.ts';
import { recordCoefficients } from './coefficient-working.ts';
import { canopySteps, initialSteps, mulchStep, observedStep, ratioStep, wettingSteps } from './curve-working.ts';
import { type CycleCurve, cycleCurve, tableCoefficients } from './cycle-curve.ts';
import { bareStageOf } from './initial-wetting.ts';
import type { PackedSeason } from './pack.ts';
import { ruleWords } from './rule-words.ts';
import { riseSteps, saltSteps } from './salt-working.ts';
import { degreeDaySums, type PlantedCycles, stagesOfCycle } from './stage-days.ts';
import type { ParcelInput, StartRule, ThermalStages, Trace, WorkingStep } from './types.ts';

const STAGES = ['initial', 'development', 'mid', 'late'] as const;

type Quantities = WorkingStep['inputs'];

/**
 * Hands everything that leads to a planting's coefficient, height and roots of a day to the recorder: calendar, coefficients, and what lies over the curve.
 *
 * @param at place of the cycle in the planting, and the day
 */
export function recordPlantedDay(
  season: PackedSeason,
  parcel: ParcelInput,
  planted: PlantedCycles,
  at: { readonly k: number; readonly day: number },
  trace: Trace,
): void {
  const { day } = at;
  const { curve } = season;
  const single = season.input.settings.coefficient === 'single';
  const cycle = planted.cycles[at.k];
  const drawn = cycleCurve(season, parcel, planted, at.k);
  const dayOfCycle = day - cycle.start + 1;
  for (const step of calendarSteps(season, planted, drawn, at)) trace.step(step);
  const { crop } = planted.planting;
  const stage = stageOf(cycle.lengths, dayOfCycle);
  const progress = developmentProgress(cycle.lengths, dayOfCycle);
  const rows = { basal: curve.basal[day], height: curve.height[day], rootDepth: curve.rootDepth[day] };
  const table = { mulch: planted.planting.mulch, basalTable: tableCoefficients(crop, planted.planting.calendar, at.k) };
  recordCoefficients({ crop, cycle, drawn, single, ...table, dayOfCycle, stage, progress, ...rows }, trace);
  for (const step of overlaySteps(season, parcel, planted, day)) trace.step(step);
  for (const step of saltSteps(season, parcel, planted.planting, day)) trace.step(step);
  for (const step of riseSteps(season, parcel, day)) trace.step(step);
}

/** What comes before the curve: start, degree days, frost, and where the coefficients are from. */
function calendarSteps(
  season: PackedSeason,
  planted: PlantedCycles,
  drawn: CycleCurve,
  { k, day }: { readonly k: number; readonly day: number },
): WorkingStep[] {
  const { calendar } = planted.planting;
  const stages = stagesOfCycle(calendar, k);
  return [
    ...(calendar.start ? [startStep(season, planted, calendar.start)] : []),
    ...(stages ? [degreeDayStep(season, planted.cycles[k], stages, day)] : []),
    ...(Number.isFinite(planted.frost) ? [frostStep(season, planted)] : []),
    ...(calendar.cycles ? [cycleStep(k, drawn)] : []),
    ...canopySteps(drawn),
    ...initialSteps(drawn),
  ];
}

/** What lies over the curve: the ratio of a tall table, observed cover, a mulch. */
function overlaySteps(season: PackedSeason, parcel: ParcelInput, planted: PlantedCycles, day: number): WorkingStep[] {
  const { crop, mulch } = planted.planting;
  const basal = season.curve.basal[day];
  const tall = crop.surface === 'tall' ? [ratioStep(season.weather.climate[day], basal)] : [];
  if (season.input.settings.coefficient === 'single') return tall;
  const observed = observedStep(parcel.observedBasal, planted, { day, basal });
  return [...tall, ...(observed ? [observed] : []), ...(mulch ? [mulchStep(mulch)] : [])];
}

/** The Kc of a day without a crop on single coefficients; nothing for other days. */
export function recordBareDay(season: PackedSeason, parcel: ParcelInput, day: number, trace: Trace): void {
  if (season.input.settings.coefficient !== 'single') return;
  const stage = bareStageOf(season, parcel, day);
  if (stage === null || initialFromWettings(stage) !== season.curve.basal[day]) return;
  for (const step of wettingSteps(stage, season.curve.basal[day], { symbol: 'Kc', name: 'Single coefficient of bare ground' }))
    trace.step(step);
}

/** The start rule, and the day on which it was met or given up. */
export function startStep(season: PackedSeason, planted: PlantedCycles, rule: StartRule): WorkingStep {
  const found = planted.start ?? { day: planted.earliest, met: false };
  const start = found.day + (rule.offset ?? 0);
  const date = (day: number) => isoDate(season.firstDay + day);
  const outcome = found.met ? `met on ${date(found.day)}` : `not met by ${date(planted.earliest + rule.latest)}`;
  return {
    part: 'calendar',
    symbol: 'start',
    name: `First day of the crop, ${date(start)}`,
    expression: `${ruleWords(rule)}, from ${date(planted.earliest)} to ${date(planted.earliest + rule.latest)}: ${outcome}${offsetWords(rule)}`,
    inputs: ruleInputs(season, rule, found.day),
    result: start,
    unit: 'd from the first day of the run',
    source: 'FAO-56 chapter 6 (growing seasons); rule of the calendar',
  };
}

function offsetWords({ offset }: StartRule): string {
  if (!offset) return '';
  return `; the crop starts ${Math.abs(offset)} days ${offset < 0 ? 'before' : 'after'} it`;
}

function ruleInputs(season: PackedSeason, rule: StartRule, day: number): Quantities {
  const { weather } = season;
  if (day < 0 || day >= season.input.dayCount) return [];
  switch (rule.kind) {
    case 'air-temperature':
      return [quantity('mean of the days', runningMean(weather, day, rule.days), '°C')];
    case 'soil-temperature':
      return [quantity('mean of the days', runningSoilMean(weather, day, rule.days), '°C')];
    case 'rain':
      return [quantity('rain of the days', rainWithin(weather.precipitation, day, rule.days), 'mm')];
    case 'frost-free':
      return day > 0 ? [quantity('Tmin of the day before', weather.airTemperatureMin[day - 1], '°C')] : [];
    default:
      return [quantity('Tbase', rule.base, '°C'), quantity('sum asked', rule.sum, '°C d')];
  }
}

/** Degree days of a cycle up to a day, and the stage they have brought it to. */
export function degreeDayStep(season: PackedSeason, cycle: Cycle, stages: ThermalStages, day: number): WorkingStep {
  const sums = degreeDaySums(season, stages);
  const from = Math.max(0, cycle.start);
  const stage = stageOf(cycle.lengths, day - cycle.start + 1);
  return {
    part: 'calendar',
    symbol: 'ΣGDD',
    name: `Growing degree days since ${isoDate(season.firstDay + from)}: ${stage} stage`,
    expression:
      'ΣGDD = Σ [(Tmax’ + Tmin’) / 2 − Tbase], T’ held in Tbase … Tceiling; a stage ends when the sum of the stages is reached; days before the run go by the calendar’s days',
    inputs: [
      quantity('Tbase', stages.base, '°C'),
      quantity('Tceiling', stages.ceiling, '°C'),
      quantity('Tmax of the day', season.weather.airTemperatureMax[day], '°C'),
      quantity('Tmin of the day', season.weather.airTemperatureMin[day], '°C'),
      ...STAGES.map((name) => quantity(`sum of the ${name} stage`, stages[name], '°C d')),
      quantity('days before the run', Math.max(0, -cycle.start), 'd'),
    ].filter(({ value }) => Number.isFinite(value)),
    result: sums[day + 1] - sums[from],
    unit: '°C d',
    source: 'McMaster & Wilhelm (1997), method 2 (recalled)',
  };
}

function frostStep(season: PackedSeason, { planting, frost }: PlantedCycles): WorkingStep {
  const rule = planting.calendar.killingFrost ?? { threshold: Number.NaN, notBefore: 0 };
  return {
    part: 'calendar',
    symbol: 'frost',
    name: `End of the crop by killing frost, ${isoDate(season.firstDay + frost)}`,
    expression: `first day with Tmin ≤ threshold, ${rule.notBefore} days or more after the start${rule.after ? `, and ${rule.after} days more` : ''}`,
    inputs: [
      quantity('threshold', rule.threshold, '°C'),
      quantity('Tmin', season.weather.airTemperatureMin[Math.min(season.input.dayCount - 1, frost - (rule.after ?? 0))], '°C'),
    ],
    result: frost,
    unit: 'd from the first day of the run',
    source: 'FAO-56 chapter 6 (growing seasons); rule of the calendar',
  };
}

function cycleStep(k: number, { table }: CycleCurve): WorkingStep {
  return {
    part: 'coefficient',
    symbol: 'Kcb,table',
    name: `Coefficients of cutting cycle ${k + 1}`,
    expression: 'Kcb ini, mid and end as the calendar has them for this cycle; the last cycle listed stands for all after it',
    inputs: [quantity('Kcb ini', table.initial, '1'), quantity('Kcb mid', table.mid, '1'), quantity('Kcb end', table.end, '1')],
    result: table.mid,
    unit: '1',
    source: 'calendar of the crop',
  };
}
