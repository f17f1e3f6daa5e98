/**
 * What a season refuses in the optional parts of crops, calendars and plantings.
 */
import { RangeViolation } from '../base/errors.ts';
import type { Canopy, Crop, CropCalendar, IrrigationRule, Planting, StartRule, ThermalStages } from './types.ts';

function within(what: string, value: number, low: number, high: number, where: string): void {
  if (!(value >= low && value <= high)) throw new RangeViolation(`${what} ${value} is not within ${low} … ${high} (${where})`);
}

/**
 * Checks canopy, single coefficients, salt tolerance, ponding and dormancy of a crop, each where it is there.
 *
 * @throws {RangeViolation} naming value, limits and place
 */
export function checkCropParts(crop: Crop, where: string): void {
  if (crop.canopy) checkCanopy(crop.canopy, where);
  for (const [stage, value] of Object.entries(crop.single ?? {})) within(`Kc of the ${stage} stage`, value, 0, 2, where);
  if (crop.salinity) {
    within('salt threshold [dS/m]', crop.salinity.threshold, 0, 50, where);
    within('decline of yield by salt [% per dS/m]', crop.salinity.slope, 0.1, 100, where);
  }
  if (crop.dormantBasal !== undefined) within('dormant Kcb', crop.dormantBasal, 0, 1.5, where);
  if (!crop.paddy) return;
  const { floodFrom, drainBefore, pondTarget, pondMinimum, bund, puddledDepth } = crop.paddy;
  within('first day of flooding, from the planting', floodFrom, -60, 60, where);
  within('days from drainage to harvest', drainBefore, 0, 60, where);
  within('bund [mm]', bund, 1, 1000, where);
  within('ponded depth [mm]', pondTarget, 1, bund, where);
  within('ponded depth at which water is supplied [mm]', pondMinimum, 0, pondTarget, where);
  within('puddled depth [m]', puddledDepth, 0.05, 1, where);
}

function checkCanopy({ cover, height, groundBasal, stomatalFactor }: Canopy, where: string): void {
  within('canopy cover', cover, 0.01, 1, where);
  within('canopy height [m]', height, 0.01, 40, where);
  if (groundBasal !== undefined) within('Kcb of the ground between the plants', groundBasal, 0, 1.3, where);
  if (stomatalFactor !== undefined) within('stomatal factor Fr', stomatalFactor, 0.05, 1, where);
}

/**
 * Checks thermal stages, start rule, killing frost and cycle coefficients of a calendar.
 *
 * @throws {RangeViolation} naming value, limits and place
 */
export function checkCalendarParts(calendar: CropCalendar, where: string): void {
  const at = `calendar ${calendar.code}, ${where}`;
  for (const stages of [calendar.thermal, calendar.laterThermal]) if (stages) checkThermal(stages, at);
  if (calendar.start) checkStart(calendar.start, at);
  if (calendar.killingFrost) {
    within('killing frost [°C]', calendar.killingFrost.threshold, -30, 5, at);
    within('days before which no frost ends the crop', calendar.killingFrost.notBefore, 0, 366, at);
    within('days the crop goes on after the frost', calendar.killingFrost.after ?? 0, 0, 60, at);
  }
  if (calendar.cycles?.length === 0) throw new RangeViolation(`the list of cycle coefficients is empty: leave it out (${at})`);
  for (const { basalInitial, basalMid, basalEnd } of calendar.cycles ?? []) {
    for (const value of [basalInitial, basalMid, basalEnd]) within('Kcb of a cycle', value, 0, 2, at);
  }
}

function checkThermal(stages: ThermalStages, where: string): void {
  within('base temperature [°C]', stages.base, -10, 30, where);
  within('ceiling temperature [°C]', stages.ceiling, stages.base + 1, 60, where);
  const sums = [stages.initial, stages.development, stages.mid, stages.late];
  for (const sum of sums) within('degree days of a stage [°C d]', sum, 0, 10000, where);
  if (!(sums.reduce((a, b) => a + b) > 0))
    throw new RangeViolation(`the degree days of the stages are all 0 (${where}): give at least one`);
}

function checkStart(rule: StartRule, where: string): void {
  within('latest start, days after the earliest', rule.latest, 0, 366, where);
  within('days from the day found to the start', rule.offset ?? 0, -60, 60, where);
  if (rule.kind === 'growing-degree-days') {
    within('base temperature of the start [°C]', rule.base, -10, 30, where);
    within('degree days to the start [°C d]', rule.sum, 0, 10000, where);
  } else if (rule.kind === 'rain') {
    within('rain of the start [mm]', rule.depth, 0.1, 500, where);
    within('days of rain', rule.days, 1, 60, where);
  } else {
    within('temperature of the start [°C]', rule.threshold, -30, 40, where);
    if (rule.kind !== 'frost-free') within('days of the mean', rule.days, 1, 60, where);
  }
}

/**
 * Checks how a planting is watered and covered.
 *
 * @throws {RangeViolation} naming value, limits and place
 */
export function checkPractice({ irrigation, mulch, canopy, preIrrigation, germination }: Planting, where: string): void {
  if (irrigation) checkRule(irrigation, where);
  if (mulch) within('mulch cover', mulch.cover, 0, 1, where);
  if (canopy) checkCanopy(canopy, where);
  if (preIrrigation) {
    within('pre-irrigation, days before planting', preIrrigation.daysBefore, 0, 366, where);
    if (preIrrigation.depth !== undefined) within('pre-irrigation [mm]', preIrrigation.depth, 0, 1000, where);
  }
  for (const { daysAfter, depth } of germination ?? []) {
    within('germination, days after planting', daysAfter, 0, 366, where);
    within('germination irrigation [mm]', depth, 0, 500, where);
  }
}

function checkRule(rule: IrrigationRule, where: string): void {
  if (rule.kind === 'interval' && !(Number.isInteger(rule.days) && rule.days >= 1)) {
    throw new RangeViolation(`irrigation interval ${rule.days} is not a whole number of days from 1 (${where})`);
  }
  if (rule.kind === 'fixed-depth') within('irrigation depth [mm]', rule.depth, 0.1, 1000, where);
  if (rule.kind === 'depletion') checkShares(rule.trigger ?? 1, rule.refill ?? 1, where);
  if (rule.kind === 'deficit') for (const { trigger, refill } of Object.values(rule.stages)) checkShares(trigger, refill, where);
}

function checkShares(trigger: number, refill: number, where: string): void {
  within('irrigation trigger, share of RAW', trigger, 0, 10, where);
  within('irrigation refill, share of the depletion', refill, 0.01, 1, where);
}
