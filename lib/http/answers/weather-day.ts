/** One day of a site's record as the interface tells it: observed, completed, reference ET by every method, energy budget. */
import { addDays, dayNumber, dayOfYear } from '../../base/civil-date.ts';
import { roundOrNull } from '../../base/missing.ts';
import { hargreavesReferenceEt } from '../../energy/hargreaves.ts';
import { hourlySumReferenceEt } from '../../energy/hourly-day.ts';
import { clearSkyRadiation } from '../../energy/radiation.ts';
import { energyBudgetDay, type ReferenceDayInput, referenceEtDay } from '../../energy/reference-day.ts';
import { sunDay } from '../../energy/sun.ts';
import { dayKind } from '../../weather/day-kind.ts';
import { type CompletedWeather, fallbackNames, QUALITY, type SiteObservations, type WeatherVariable } from '../../weather/variable.ts';
import type { SiteDay } from '../contract/rest.ts';
import type { RecordHours, SiteRecord } from './weather-record.ts';

type HourlySums = Pick<
  SiteDay,
  'reference_et_hourly_fao56_short_mm' | 'reference_et_hourly_asce2005_short_mm' | 'reference_et_hourly_asce2005_tall_mm'
>;

/** Sums of the hours of days, [day]. */
export function hourlySums({ place, hours, lead }: RecordHours): Record<keyof HourlySums, Float64Array> {
  return {
    reference_et_hourly_fao56_short_mm: hourlySumReferenceEt(place, hours, { method: 'fao56', surface: 'short' }).subarray(lead),
    reference_et_hourly_asce2005_short_mm: hourlySumReferenceEt(place, hours, { method: 'asce2005', surface: 'short' }).subarray(lead),
    reference_et_hourly_asce2005_tall_mm: hourlySumReferenceEt(place, hours, { method: 'asce2005', surface: 'tall' }).subarray(lead),
  };
}

/** The sums of one day; null throughout without hours. */
export function sumsOn(sums: Record<keyof HourlySums, Float64Array> | null, day: number): HourlySums {
  const on = (name: keyof HourlySums) => (sums ? roundOrNull(sums[name][day], 4) : null);
  return {
    reference_et_hourly_fao56_short_mm: on('reference_et_hourly_fao56_short_mm'),
    reference_et_hourly_asce2005_short_mm: on('reference_et_hourly_asce2005_short_mm'),
    reference_et_hourly_asce2005_tall_mm: on('reference_et_hourly_asce2005_tall_mm'),
  };
}

/** What the equations take of one day of a record. */
export function dayInput({ site, district, completed, start }: SiteRecord, day: number): Omit<ReferenceDayInput, 'method' | 'surface'> {
  return {
    latitude: site.latitude,
    elevation: site.elevation ?? district.defaultElevation,
    dayOfYear: dayOfYear(dayNumber(start) + day),
    airTemperatureMax: completed.airTemperatureMax[day],
    airTemperatureMin: completed.airTemperatureMin[day],
    actualVapourPressure: completed.actualVapourPressure[day],
    solarRadiation: completed.solarRadiation[day],
    windSpeed2m: completed.windSpeed2m[day],
  };
}

/** A day of a record. */
export function siteDay(record: SiteRecord, day: number, hourly: HourlySums): SiteDay {
  const { observed, completed, start } = record;
  return {
    date: addDays(start, day),
    day_kind: record.site.role === 'forecast' ? 'forecast' : dayKind(completed.flags[day]) === 'observed' ? 'observed' : 'filled',
    observed: observedOn(observed, day),
    completed: completedOn(completed, day),
    quality: qualityOn(observed, day),
    ...hourly,
    reference_et_given_mm: rounded(observed.values.reference_et_given_mm?.[day] ?? Number.NaN),
    ...derived(dayInput(record, day), completed.flags[day]),
  };
}

const QUALITY_WORDS = new Map<number, string>(Object.entries(QUALITY).map(([word, code]) => [code, word]));

/** Observed values that are not as measured, by what they are. */
function qualityOn({ quality }: SiteObservations, day: number): SiteDay['quality'] {
  const told: Record<string, string> = {};
  for (const [name, codes] of Object.entries(quality ?? {}) as [WeatherVariable, Uint8Array][]) {
    const word = QUALITY_WORDS.get(codes[day]);
    if (word && codes[day] > QUALITY.measured) told[name] = word;
  }
  return told;
}

function observedOn({ values }: SiteObservations, day: number): SiteDay['observed'] {
  return Object.fromEntries(Object.entries(values).map(([name, row]) => [name, rounded(row?.[day] ?? Number.NaN)]));
}

/** Stored observations are single precision: six significant figures are what they hold for certain. */
function rounded(value: number): number | null {
  return Number.isFinite(value) ? Number(value.toPrecision(6)) : null;
}

function completedOn(completed: CompletedWeather, day: number): SiteDay['completed'] {
  return {
    air_temperature_max_c: rounded(completed.airTemperatureMax[day]),
    air_temperature_min_c: rounded(completed.airTemperatureMin[day]),
    vapour_pressure_kpa: rounded(completed.actualVapourPressure[day]),
    solar_radiation_mj_m2_d: rounded(completed.solarRadiation[day]),
    wind_speed_2m_m_s: rounded(completed.windSpeed2m[day]),
    precipitation_mm: rounded(completed.precipitation[day]),
  };
}

type Derived = Omit<SiteDay, 'date' | 'day_kind' | 'observed' | 'completed' | 'quality' | 'reference_et_given_mm' | keyof HourlySums>;

function derived(input: Omit<ReferenceDayInput, 'method' | 'surface'>, flags: number): Derived {
  const short = { ...input, method: 'fao56', surface: 'short' } as const;
  const budget = energyBudgetDay(short);
  const extraterrestrial = sunDay(input.latitude, input.dayOfYear).extraterrestrialRadiation;
  const depth = (value: number) => roundOrNull(value, 4);
  return {
    fallbacks: fallbackNames(flags),
    reference_et_fao56_short_mm: depth(budget.referenceEt),
    reference_et_asce2005_short_mm: depth(referenceEtDay({ ...input, method: 'asce2005', surface: 'short' }, null)),
    reference_et_asce2005_tall_mm: depth(referenceEtDay({ ...input, method: 'asce2005', surface: 'tall' }, null)),
    reference_et_hargreaves_mm: depth(hargreavesReferenceEt(input.airTemperatureMax, input.airTemperatureMin, extraterrestrial)),
    clear_sky_radiation_mj_m2_d: depth(clearSkyRadiation(extraterrestrial, input.elevation)),
    extraterrestrial_radiation_mj_m2_d: depth(extraterrestrial),
    net_shortwave_mj_m2_d: depth(budget.netShortwave),
    net_longwave_mj_m2_d: depth(budget.netLongwave),
    net_radiation_mj_m2_d: depth(budget.netRadiation),
    soil_heat_flux_mj_m2_d: depth(budget.soilHeatFlux),
    latent_heat_mj_m2_d: depth(budget.latentHeatFlux),
    sensible_heat_mj_m2_d: depth(budget.sensibleHeatFlux),
  };
}
