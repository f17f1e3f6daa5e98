/** The hours of a site's day, and the energy budget of the day by every method with its working. */
import type { Caller } from '../../access/caller.ts';
import { addDays, dayNumber, isIsoDate } from '../../base/civil-date.ts';
import { LATENT_HEAT } from '../../base/constants.ts';
import { Malformed } from '../../base/errors.ts';
import { roundOrNull } from '../../base/missing.ts';
import { MEGAJOULES_PER_DAY_PER_WATT } from '../../base/units.ts';
import type { WorkingStep } from '../../base/working.ts';
import { traceEnergyBudget } from '../../energy/budget-working.ts';
import type { CombinationMethod, ReferenceSurface } from '../../energy/combination.ts';
import { traceCompletion } from '../../energy/complete-weather.ts';
import { hourlyBudget, hourlySumReferenceEt } from '../../energy/hourly-day.ts';
import { energyBudgetDay, referenceEtDay } from '../../energy/reference-day.ts';
import { HOURS_PER_DAY } from '../../weather/hours.ts';
import type { WorkingAnswer } from '../contract/run.ts';
import type { SiteHour, SiteHoursAnswer } from '../contract/weather.ts';
import { dayInput } from './weather-day.ts';
import { loadHours, openRecord, type RecordHours, type SharedFills, type SiteRecord } from './weather-record.ts';

/** W m⁻² of a MJ m⁻² held for an hour, exact. */
const WATTS_PER_MEGAJOULE_HOUR = 1e6 / 3600;

/** The equations whose budgets stand side by side. */
export const BUDGET_METHODS = [
  { id: 'fao56-short', name: 'FAO-56 Penman–Monteith, short surface', method: 'fao56', surface: 'short' },
  { id: 'asce2005-short', name: 'ASCE 2005, short surface', method: 'asce2005', surface: 'short' },
  { id: 'asce2005-tall', name: 'ASCE 2005, tall surface', method: 'asce2005', surface: 'tall' },
] as const satisfies readonly { id: string; name: string; method: CombinationMethod; surface: ReferenceSurface }[];

export type BudgetMethod = (typeof BUDGET_METHODS)[number]['id'];

interface HoursWanted {
  readonly date: string;
  /** source of the site; left out: the first that has a site of this code */
  readonly source?: string;
}

/**
 * The 24 hours of one day of a site.
 *
 * @throws {NotFound} for a site that is not the district's. @throws {Malformed} for a date that is none.
 */
export async function answerSiteHours(caller: Caller, code: string, { date, source }: HoursWanted): Promise<SiteHoursAnswer> {
  if (!isIsoDate(date)) throw new Malformed(`"${date}" is not a day of the calendar`);
  const record = await openRecord(caller, code, source);
  const found = record && (await loadHours(caller, record, date, date));
  if (!record || !found) {
    const nothing = { site: code, source: record?.site.source ?? source ?? '', date, zone: '', utc_offset_h: 0, estimated: [], items: [] };
    return record ? { ...nothing, zone: record.site.zone ?? record.district.timeZone } : nothing;
  }
  return hoursAnswer(record, found, date);
}

function hoursAnswer(record: SiteRecord, found: RecordHours, date: string): SiteHoursAnswer {
  const first = found.lead * HOURS_PER_DAY;
  const has = (series: Float64Array | undefined) =>
    series?.subarray(first, first + HOURS_PER_DAY).some((value) => !Number.isNaN(value)) ?? false;
  const { stored } = found;
  const estimated: SiteHoursAnswer['estimated'] = [];
  if (!has(stored.hour_solar_radiation_mj_m2)) estimated.push('solar_radiation');
  if (!has(stored.hour_wind_speed_m_s)) estimated.push('wind_speed');
  return {
    site: record.site.code,
    source: record.site.source,
    date,
    zone: found.zone,
    utc_offset_h: found.place.zoneHours,
    estimated,
    items: has(stored.hour_air_temperature_c) ? hourItems(found) : [],
  };
}

function hourItems({ place, hours, stored, lead }: RecordHours): SiteHour[] {
  const [short, asceShort, asceTall] = BUDGET_METHODS.map((equation) => hourlyBudget(place, hours, lead, equation));
  const watts = (energy: number) => roundOrNull(energy * WATTS_PER_MEGAJOULE_HOUR, 2);
  return Array.from({ length: HOURS_PER_DAY }, (_, hour) => {
    const budget = short[hour];
    const at = lead * HOURS_PER_DAY + hour;
    return {
      hour,
      air_temperature_c: roundOrNull(hours.airTemperature[at], 3),
      vapour_pressure_kpa: roundOrNull(hours.actualVapourPressure[at], 4),
      solar_radiation_mj_m2_h: roundOrNull(hours.solarRadiation[at], 4),
      wind_speed_2m_m_s: roundOrNull(hours.windSpeed2m[at], 3),
      precipitation_mm: roundOrNull(stored.hour_precipitation_mm?.[at] ?? Number.NaN, 3),
      extraterrestrial_radiation_mj_m2_h: roundOrNull(budget.extraterrestrialRadiation, 4),
      clear_sky_radiation_mj_m2_h: roundOrNull(budget.clearSkyRadiation, 4),
      reference_et_fao56_short_mm: roundOrNull(budget.referenceEt, 4),
      reference_et_asce2005_short_mm: roundOrNull(asceShort[hour].referenceEt, 4),
      reference_et_asce2005_tall_mm: roundOrNull(asceTall[hour].referenceEt, 4),
      net_shortwave_w_m2: watts(budget.netShortwave),
      net_longwave_w_m2: watts(budget.netLongwave),
      net_radiation_w_m2: watts(budget.netRadiation),
      soil_heat_w_m2: watts(budget.soilHeatFlux),
      latent_heat_w_m2: watts(budget.latentHeatFlux),
      sensible_heat_w_m2: watts(budget.sensibleHeatFlux),
    };
  });
}

/** One flux of a day's budget in the three units that readers think in. */
export interface BudgetFlux {
  readonly symbol: string;
  readonly name: string;
  readonly mj_m2_d: number | null;
  readonly w_m2: number | null;
  /** depth of water that the energy would evaporate */
  readonly mm: number | null;
}

/** The energy budget of one day of a site. */
export interface SiteBudget {
  readonly date: string;
  readonly method: (typeof BUDGET_METHODS)[number];
  readonly fluxes: readonly BudgetFlux[];
  readonly reference_et_mm: number | null;
  /** sum of the hours, null without hours */
  readonly reference_et_hourly_mm: number | null;
  readonly steps: WorkingAnswer['steps'];
  readonly hours: SiteHoursAnswer | null;
  /** days of the record before and after */
  readonly previous: string | null;
  readonly next: string | null;
}

/** Budget of a day by one method with its working; null when the record does not reach the day. */
export async function answerSiteBudget(
  caller: Caller,
  code: string,
  wanted: HoursWanted & { readonly method: BudgetMethod; readonly shared?: SharedFills },
): Promise<SiteBudget | null> {
  const record = await openRecord(caller, code, wanted.source, wanted.shared);
  const { date } = wanted;
  if (!record || date < record.first || date > record.last) return null;
  const equation = BUDGET_METHODS.find(({ id }) => id === wanted.method) ?? BUDGET_METHODS[0];
  const day = dayNumber(date) - dayNumber(record.start);
  const input = { ...dayInput(record, day), method: equation.method, surface: equation.surface };
  const budget = energyBudgetDay(input);
  const found = await loadHours(caller, record, date, date);
  const sum = found ? hourlySumReferenceEt(found.place, found.hours, equation)[found.lead] : Number.NaN;
  return {
    date,
    method: equation,
    fluxes: fluxesOf(budget),
    reference_et_mm: roundOrNull(budget.referenceEt, 4),
    reference_et_hourly_mm: roundOrNull(sum, 4),
    steps: Number.isNaN(budget.netRadiation) ? [] : stepsOf(record, day, input, budget),
    hours: found ? hoursAnswer(record, found, date) : null,
    previous: date > record.first ? addDays(date, -1) : null,
    next: date < record.last ? addDays(date, 1) : null,
  };
}

function stepsOf(
  record: SiteRecord,
  day: number,
  input: Parameters<typeof referenceEtDay>[0],
  budget: ReturnType<typeof energyBudgetDay>,
): WorkingAnswer['steps'] {
  const steps: WorkingAnswer['steps'] = [];
  const trace = {
    step(step: WorkingStep) {
      steps.push({ ...step, inputs: [...step.inputs] });
    },
  };
  const { defaultElevation, radiationCoefficient } = record.district;
  traceCompletion(record.filled, 0, day, { defaultElevation, radiationCoefficient }, trace);
  referenceEtDay(input, trace);
  traceEnergyBudget(budget, trace);
  return steps;
}

function fluxesOf(budget: ReturnType<typeof energyBudgetDay>): BudgetFlux[] {
  const flux = (symbol: string, name: string, energy: number): BudgetFlux => ({
    symbol,
    name,
    mj_m2_d: roundOrNull(energy, 4),
    w_m2: roundOrNull(energy / MEGAJOULES_PER_DAY_PER_WATT, 2),
    mm: roundOrNull(energy / LATENT_HEAT, 3),
  });
  return [
    flux('Rns', 'Net short waves in', budget.netShortwave),
    flux('Rnl', 'Net long waves out', budget.netLongwave),
    flux('Rn', 'Net radiation, Rns − Rnl', budget.netRadiation),
    flux('G', 'Heat into the soil', budget.soilHeatFlux),
    flux('λE', 'Latent heat: evaporating water', budget.latentHeatFlux),
    flux('H', 'Sensible heat: warming the air', budget.sensibleHeatFlux),
  ];
}
