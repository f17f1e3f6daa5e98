/**
 * The working of a parcel's weather on one day: how the values of the sites became the values of the parcel.
 */

import { quantity } from '../base/working.ts';
import { potentialRetention } from '../crop/runoff.ts';
import type { PackedSeason } from './pack.ts';
import { lapseCorrection } from './parcel-weather.ts';
import type { ParcelInput, WorkingStep } from './types.ts';

type Rows = 'airTemperatureMax' | 'airTemperatureMin' | 'actualVapourPressure' | 'solarRadiation' | 'windSpeed2m' | 'precipitation';

const CARRIED: readonly { row: Rows; symbol: string; name: string; unit: string; lapsed: boolean; capped: boolean }[] = [
  { row: 'airTemperatureMax', symbol: 'Tmax', name: 'Maximum air temperature', unit: '°C', lapsed: true, capped: false },
  { row: 'airTemperatureMin', symbol: 'Tmin', name: 'Minimum air temperature', unit: '°C', lapsed: true, capped: false },
  { row: 'actualVapourPressure', symbol: 'ea', name: 'Actual vapour pressure', unit: 'kPa', lapsed: false, capped: true },
  { row: 'solarRadiation', symbol: 'Rs', name: 'Solar radiation', unit: 'MJ m⁻² d⁻¹', lapsed: false, capped: false },
  { row: 'windSpeed2m', symbol: 'u2', name: 'Wind speed at 2 m', unit: 'm s⁻¹', lapsed: false, capped: false },
  { row: 'precipitation', symbol: 'P', name: 'Rain', unit: 'mm', lapsed: false, capped: false },
];

/** Steps from the sites' values to the parcel's weather, RHmin, the climate term and runoff of a day already in `season.weather`. */
export function weatherSteps(season: PackedSeason, parcel: ParcelInput, day: number): WorkingStep[] {
  const carried = CARRIED.map((variable) => carriedStep(season, parcel, day, variable));
  return [...carried, ...humiditySteps(season, day), runoffStep(season, parcel, day)];
}

function carriedStep(season: PackedSeason, parcel: ParcelInput, day: number, variable: (typeof CARRIED)[number]): WorkingStep {
  const { symbol, unit } = variable;
  const { input } = season;
  const inputs: WorkingStep['inputs'][number][] = [];
  for (const { site, weight } of parcel.weights) {
    const at = site * input.dayCount + day;
    if (weight === 0 || season.present[at] === 0) continue;
    const { code } = input.sites[site];
    inputs.push(
      quantity(`w ${code}`, weight / season.weather.weightSum[day], '1'),
      quantity(`${symbol} ${code}`, input.weather[variable.row][at], unit),
    );
    if (variable.lapsed) inputs.push(quantity(`Γ Δz ${code}`, lapseCorrection(input.sites[site], parcel, input.settings.lapseRate), '°C'));
  }
  const mean = variable.lapsed ? `${symbol} = Σ w (${symbol},site + Γ Δz)` : `${symbol} = Σ w ${symbol},site`;
  return {
    part: 'weather',
    symbol,
    name: `${variable.name} at the parcel`,
    expression: variable.capped ? `${mean}, at most es of the parcel` : mean,
    inputs,
    result: season.weather[variable.row][day],
    unit,
    source: variable.lapsed ? 'weights of the parcel; lapse rate of the settings, Δz = z site − z parcel' : 'weights of the parcel',
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

function runoffStep(season: PackedSeason, parcel: ParcelInput, day: number): WorkingStep {
  const rain = quantity('P', season.weather.precipitation[day], 'mm');
  const counted = season.input.settings.runoff && !Number.isNaN(parcel.soil.curveNumber);
  const retention = counted
    ? [quantity('CN', parcel.soil.curveNumber, '1'), quantity('S', potentialRetention(parcel.soil.curveNumber), 'mm')]
    : [];
  return {
    part: 'weather',
    symbol: 'RO',
    name: 'Surface runoff',
    expression: counted ? 'RO = (P − 0.2 S)² / (P + 0.8 S) where P > 0.2 S, S = 25400 / CN − 254' : 'RO = 0; no runoff is reckoned here',
    inputs: [rain, ...retention],
    result: season.weather.surfaceRunoff[day],
    unit: 'mm',
    source: 'USDA-NRCS, National Engineering Handbook 630, chapter 10',
  };
}
