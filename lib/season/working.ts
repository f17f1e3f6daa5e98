/**
 * The working of one parcel and day: the season is replayed from its first day by the same code, with a recorder on that day.
 */
import { isoDate } from '../base/civil-date.ts';
import { RangeViolation } from '../base/errors.ts';
import type { Cycle } from '../crop/curve.ts';
import { referenceEtDay } from '../energy/reference-day.ts';
import { type CarriedSeries, fallbackNames, type SiteWeight } from '../weather/variable.ts';
import { recordBareDay, recordPlantedDay } from './calendar-working.ts';
import { RUN_SURFACE } from './check.ts';
import { walkParcel } from './kernel.ts';
import { lapseCorrection } from './mix.ts';
import { keptDays, type PackedSeason, packSeason } from './pack.ts';
import { seriesParts } from './series-weather.ts';
import type { PlantedCycles, StripPlan } from './strip-curve.ts';
import { mm } from './told-day.ts';
import {
  DAILY_VARIABLES,
  type DailyVariable,
  type ParcelInput,
  type SeasonInput,
  type Trace,
  type Working,
  type WorkingStep,
} from './types.ts';
import { recordUse } from './use-working.ts';
import { weatherSteps } from './weather-working.ts';
import { recordWetting } from './wetting-working.ts';

/**
 * Derives one parcel's day: the site values with their weights and flags, every equation with the numbers put in, and the results.
 *
 * Results are those of `runSeason` before rounding, to the last bit. All numbers are finite.
 *
 * @param input the season as it was run (other parcels may be left out)
 * @param parcelIndex index into `input.parcels`
 * @param dayOffset day of the run, 0 on the first day kept: the start date, where there are no lead days
 * @throws {RangeViolation} when parcel or day lie outside the input; else as `runSeason`
 */
export function explainDay(input: SeasonInput, parcelIndex: number, dayOffset: number): Working {
  const parcel = input.parcels[parcelIndex];
  if (!parcel) throw new RangeViolation(`parcel index ${parcelIndex} is not within 0 … ${input.parcels.length - 1}`);
  const days = keptDays(input);
  if (!(dayOffset >= 0 && dayOffset < days)) {
    throw new RangeViolation(`day ${dayOffset} is not within 0 … ${days - 1} of the season that starts on ${input.startDate}`);
  }
  const day = dayOffset + input.dayCount - days;
  const season = packSeason(input);
  const weather: WorkingStep[] = [];
  const strips: WorkingStep[] = [];
  const recorder: Trace = { step: (step) => strips.push(step) };
  walkParcel(season, parcel, {
    day,
    strip(plan, index, count, ground) {
      const trace = count === 1 ? recorder : labelled(recorder, stripLabel(plan, index, day));
      recordPlanting(season, parcel, plan, day, trace);
      const rain = input.settings.snow ? 'Pl' : 'P';
      const single = input.settings.coefficient === 'single';
      return (record) => {
        const told = {
          record,
          ground,
          curve: season.curve,
          soil: parcel.soil,
          climate: season.weather.climate[day],
          rain,
          single,
        } as const;
        recordWetting(told, trace);
        recordUse(told, trace);
      };
    },
  });
  for (const step of weatherSteps(season, parcel, day)) weather.push(step);
  if (!input.weather.referenceEt) referenceEtDay(referenceInput(season, parcel, day), { step: (step) => weather.push(step) });
  const results = resultsOf(season, dayOffset);
  return {
    parcel: parcel.code,
    date: isoDate(season.firstDay + day),
    inputs: siteInputs(season, parcel, day),
    steps: [...weather, ...strips, ...parcelSteps(season, results)],
    results,
  };
}

function labelled(trace: Trace, strip: string): Trace {
  return { step: (step) => trace.step({ ...step, strip }) };
}

function stripLabel(plan: StripPlan, index: number, day: number): string {
  const standing = plan.planted.find((planted) => findCycle(planted, day) !== null);
  const share = `${Number((plan.share * 100).toFixed(2))} % of the parcel`;
  if (standing) return `${standing.planting.crop.name} of ${standing.planting.plantingDate}, ${share}`;
  return plan.planted.length > 0 ? `strip ${index + 1} between crops, ${share}` : `bare ground, ${share}`;
}

function findCycle(planted: PlantedCycles, day: number): Cycle | null {
  return planted.cycles.find((cycle) => cycle.start <= day && day < cycle.end) ?? null;
}

function recordPlanting(season: PackedSeason, parcel: ParcelInput, plan: StripPlan, day: number, trace: Trace): void {
  for (const planted of plan.planted) {
    const k = planted.cycles.findIndex((cycle) => cycle.start <= day && day < cycle.end);
    if (k >= 0) recordPlantedDay(season, parcel, planted, { k, day }, trace);
  }
  recordBareDay(season, parcel, day, trace);
}

function referenceInput(season: PackedSeason, parcel: ParcelInput, day: number): Parameters<typeof referenceEtDay>[0] {
  const { weather } = season;
  return {
    method: season.input.settings.method,
    surface: RUN_SURFACE,
    dayOfYear: season.dayOfYear[day],
    latitude: parcel.latitude,
    elevation: parcel.elevation,
    airTemperatureMax: weather.airTemperatureMax[day],
    airTemperatureMin: weather.airTemperatureMin[day],
    actualVapourPressure: weather.actualVapourPressure[day],
    solarRadiation: weather.solarRadiation[day],
    windSpeed2m: weather.windSpeed2m[day],
  };
}

function resultsOf(season: PackedSeason, day: number): Record<DailyVariable, number> {
  const rows = DAILY_VARIABLES.map(({ id }, v) => [id, season.daily[v * keptDays(season.input) + day]] as const);
  return Object.fromEntries(rows) as Record<DailyVariable, number>;
}

/** The sites that made the parcel's weather that day, with the weight each had after absent ones dropped out. */
function siteInputs(season: PackedSeason, parcel: ParcelInput, day: number): Working['inputs'] {
  const { input } = season;
  const shared = new Map(sharedShares(season, parcel, day));
  const own = ownShares(season, parcel, day);
  return [...new Set([...shared.keys(), ...own.keys()])].map((site) => {
    const at = site * input.dayCount + day;
    const { code, name, elevation } = input.sites[site];
    return {
      site: code,
      siteName: name,
      weight: shared.get(site) ?? 0,
      seriesWeights: own.get(site) ?? {},
      elevation: Number.isFinite(elevation) ? elevation : parcel.elevation,
      values: siteValues(season, parcel, site, at),
      flags: fallbackNames(input.weather.flags[at]),
    };
  });
}

function sharedShares(season: PackedSeason, parcel: ParcelInput, day: number): [number, number][] {
  const { dayCount } = season.input;
  const total = season.weather.weightSum[day];
  // without one whole site-day only rain and reference ET are carried, by what reports them
  if (total === 0) return seriesParts(season, parcel, 'precipitation', day).map(({ site, weight }) => [site, weight]);
  const counts = ({ site, weight }: SiteWeight) => weight > 0 && season.present[site * dayCount + day] === 1;
  return parcel.weights.filter(counts).map(({ site, weight }) => [site, weight / total]);
}

/** Weights of the series that have their own that day, by site and name of the series as it leaves the process. */
function ownShares(season: PackedSeason, parcel: ParcelInput, day: number): Map<number, Record<string, number>> {
  const shares = new Map<number, Record<string, number>>();
  for (const name of Object.keys(parcel.series ?? {}) as CarriedSeries[]) {
    if (name === 'referenceEt' && !season.input.weather.referenceEt) continue;
    for (const { site, weight } of seriesParts(season, parcel, name, day)) {
      shares.set(site, { ...shares.get(site), [SERIES_NAMES[name]]: weight });
    }
  }
  return shares;
}

/** Names of the carried series as they leave the process. */
const SERIES_NAMES: Readonly<Record<CarriedSeries, string>> = {
  airTemperatureMax: 'air_temperature_max_c',
  airTemperatureMin: 'air_temperature_min_c',
  actualVapourPressure: 'vapour_pressure_kpa',
  solarRadiation: 'solar_radiation_mj_m2_d',
  windSpeed2m: 'wind_speed_2m_m_s',
  precipitation: 'precipitation_mm',
  referenceEt: 'reference_et_mm',
};

/** What the site has of the day; values it does not have are left out. */
function siteValues(season: PackedSeason, parcel: ParcelInput, site: number, at: number): Record<string, number> {
  const { sites, weather, settings } = season.input;
  const named = (Object.entries(SERIES_NAMES) as [CarriedSeries, string][]).map(([series, name]): [string, number] => [
    name,
    weather[series]?.[at] ?? Number.NaN,
  ]);
  named.splice(2, 0, ['temperature_correction_c', lapseCorrection(sites[site], parcel, settings.lapseRate)]);
  return Object.fromEntries(named.filter(([, value]) => Number.isFinite(value)));
}

/** What the strips come to together; a parcel of one strip has it in the strip's own steps. */
function parcelSteps({ closing }: PackedSeason, results: Record<DailyVariable, number>): WorkingStep[] {
  const several = closing.length > 1;
  const gross: WorkingStep = {
    part: 'irrigation',
    symbol: 'Ig parcel',
    name: 'Gross irrigation requirement of the parcel',
    expression: 'Ig parcel = Σ Ig × share of the strip; the net depth I of the parcel is Σ I × share',
    inputs: [mm('I', results.net_requirement)],
    result: results.gross_requirement,
    unit: 'mm',
    source: 'definition of application efficiency',
  };
  return [
    ...(several ? [gross] : []),
    {
      part: 'balance',
      symbol: 'ETc adj',
      name: 'Crop ET of the parcel, adjusted for stress',
      expression: `ETc adj = T + E${several ? ', strips weighted by share' : ''}`,
      inputs: [mm('T', results.adjusted_crop_et - results.evaporation), mm('E', results.evaporation)],
      result: results.adjusted_crop_et,
      unit: 'mm',
      source: 'FAO-56 Eq. 80',
    },
  ];
}
