/**
 * The working of a parcel's weather on one day: how the values of the sites became the values of the parcel.
 */

import { quantity } from '../base/working.ts';
import type { CarriedSeries } from '../weather/variable.ts';
import { groundWaterSteps } from './ground-water-working.ts';
import { lapseCorrection } from './mix.ts';
import type { PackedSeason } from './pack.ts';
import { type SeriesPart, seriesParts } from './series-weather.ts';
import type { ParcelInput, SiteReferenceEt, WorkingStep } from './types.ts';

interface Carried {
  readonly row: CarriedSeries;
  readonly symbol: string;
  readonly name: string;
  readonly unit: string;
  readonly lapsed: boolean;
  readonly capped: boolean;
}

const CARRIED: readonly Carried[] = [
  { row: 'airTemperatureMax', symbol: 'Tmax', name: 'Maximum air temperature', unit: '°C', lapsed: true, capped: false },
  { row: 'airTemperatureMin', symbol: 'Tmin', name: 'Minimum air temperature', unit: '°C', lapsed: true, capped: false },
  { row: 'actualVapourPressure', symbol: 'ea', name: 'Actual vapour pressure', unit: 'kPa', lapsed: false, capped: true },
  { row: 'solarRadiation', symbol: 'Rs', name: 'Solar radiation', unit: 'MJ m⁻² d⁻¹', lapsed: false, capped: false },
  { row: 'windSpeed2m', symbol: 'u2', name: 'Wind speed at 2 m', unit: 'm s⁻¹', lapsed: false, capped: false },
  { row: 'precipitation', symbol: 'P', name: 'Rain', unit: 'mm', lapsed: false, capped: false },
];

const REFERENCE_ET: Carried = { row: 'referenceEt', symbol: 'ETo', name: 'Reference ET', unit: 'mm', lapsed: false, capped: false };

/** Where the reference ET of a site came from, in words. */
export const SITE_REFERENCE_ET_TEXT: Readonly<Record<SiteReferenceEt, string>> = {
  given: 'given by the source',
  'hourly-sum': 'sum over the hours of the day at the site',
  'at-sites': 'computed at the site from its daily weather',
};

/**
 * Steps from the sites' values to the parcel's weather, RHmin, the climate term, snow, frost and runoff of a day already in `season.weather`; with the reference
 * ET where it is carried from the sites.
 */
export function weatherSteps(season: PackedSeason, parcel: ParcelInput, day: number): WorkingStep[] {
  const whole = Number.isFinite(season.weather.airTemperatureMax[day]);
  const shown = whole ? CARRIED : CARRIED.filter(({ row }) => row === 'precipitation');
  const carried = shown.map((variable) => carriedStep(season, parcel, day, variable));
  const reference = season.input.weather.referenceEt ? [referenceStep(season, parcel, day)] : [];
  return [
    ...carried,
    ...(whole ? humiditySteps(season, day) : [standardClimateStep()]),
    ...groundWaterSteps(season, parcel, day),
    ...reference,
  ];
}

/** Parts of one value: by the series' own weights, or the shared ones. */
function partsOf(season: PackedSeason, parcel: ParcelInput, { row, lapsed }: Carried, day: number): SeriesPart[] {
  if (parcel.series || season.input.weather.referenceEt) return seriesParts(season, parcel, row, day);
  const { sites, settings, dayCount } = season.input;
  return parcel.weights
    .filter(({ site, weight }) => weight !== 0 && season.present[site * dayCount + day] === 1)
    .map(({ site, weight }) => ({
      site,
      weight: weight / season.weather.weightSum[day],
      shift: lapsed ? lapseCorrection(sites[site], parcel, settings.lapseRate) : 0,
    }));
}

function carriedStep(season: PackedSeason, parcel: ParcelInput, day: number, variable: Carried): WorkingStep {
  const { symbol, unit, row } = variable;
  const { input } = season;
  const own = parcel.series?.[row];
  const shifted = variable.lapsed || (own !== undefined && own.gradient !== 0);
  const letter = own ? 'β' : 'Γ';
  const inputs = partsOf(season, parcel, variable, day).flatMap(({ site, weight, shift }) => {
    const { code } = input.sites[site];
    const value = (input.weather[row] as Float64Array)[site * input.dayCount + day];
    const both = [quantity(`w ${code}`, weight, '1'), quantity(`${symbol} ${code}`, value, unit)];
    return shifted ? [...both, quantity(`${letter} Δz ${code}`, shift, unit)] : both;
  });
  const mean = shifted ? `${symbol} = Σ w (${symbol},site + ${letter} Δz)` : `${symbol} = Σ w ${symbol},site`;
  return {
    part: 'weather',
    symbol,
    name: `${variable.name} at the parcel`,
    expression: limited(mean, variable, own !== undefined),
    inputs,
    result: season.weather[row][day],
    unit,
    source: sourceOf(variable, own !== undefined),
  };
}

function limited(mean: string, { capped, row }: Carried, own: boolean): string {
  const temperature = row === 'airTemperatureMax' || row === 'airTemperatureMin';
  const floored = own && !temperature ? `${mean}, at least 0` : mean;
  const uncrossed = own && temperature ? `${floored}; the mean of both where Tmax < Tmin` : floored;
  return capped ? `${uncrossed}, at most es of the parcel` : uncrossed;
}

function sourceOf({ lapsed }: Carried, own: boolean): string {
  if (own) return 'weights of this series, which the run made for it alone; β Δz by its gradient with elevation, Δz = z parcel − z site';
  return lapsed ? 'weights of the parcel; lapse rate of the settings, Δz = z site − z parcel' : 'weights of the parcel';
}

function referenceStep(season: PackedSeason, parcel: ParcelInput, day: number): WorkingStep {
  const origin = season.input.settings.referenceEt ?? 'at-sites';
  const step = carriedStep(season, parcel, day, REFERENCE_ET);
  return { ...step, source: `reference ET ${SITE_REFERENCE_ET_TEXT[origin]}; ${step.source}` };
}

function standardClimateStep(): WorkingStep {
  return {
    part: 'coefficient',
    symbol: 'k',
    name: 'Climate term of Kc max',
    expression: 'k = 0; no temperature, wind or humidity that day, so the standard climate is taken: u2 = 2 m/s, RHmin = 45 %',
    inputs: [],
    result: 0,
    unit: '1',
    source: 'FAO-56 Eq. 72 in the climate of its Table 12',
  };
}

function humiditySteps(season: PackedSeason, day: number): WorkingStep[] {
  const { weather } = season;
  return [
    {
      part: 'weather',
      symbol: 'RHmin',
      name: 'Minimum relative humidity',
      expression: 'RHmin = 100 ea / e°(Tmax)',
      inputs: [quantity('ea', weather.actualVapourPressure[day], 'kPa'), quantity('Tmax', weather.airTemperatureMax[day], '°C')],
      result: weather.humidityMinimum[day],
      unit: '%',
      source: 'FAO-56 Eq. 63, ea standing for e°(Tdew)',
    },
    {
      part: 'coefficient',
      symbol: 'k',
      name: 'Climate term of Kc max',
      expression: 'k = 0.04 (u2 − 2) − 0.004 (RHmin − 45), u2 in 1 … 6, RHmin in 20 … 80',
      inputs: [quantity('u2', weather.windSpeed2m[day], 'm s⁻¹'), quantity('RHmin', weather.humidityMinimum[day], '%')],
      result: weather.climate[day],
      unit: '1',
      source: 'FAO-56 Eq. 72',
    },
  ];
}
