/** Whether two parcels have the same weather, so that one need not be placed after the other. */
import type { CarriedSeries, SeriesWeights, SiteWeight } from '../weather/variable.ts';
import type { ParcelInput } from './types.ts';

/** True when everything that `placeAtmosphere` reads of a parcel is equal: place, weights and series. */
export function sameSky(a: ParcelInput, b: ParcelInput): boolean {
  if (a.latitude !== b.latitude || a.elevation !== b.elevation) return false;
  return sameWeights(a.weights, b.weights) && sameSeries(a.series, b.series);
}

function sameWeights(a: readonly SiteWeight[], b: readonly SiteWeight[]): boolean {
  if (a === b) return true;
  if (a.length !== b.length) return false;
  for (let k = 0; k < a.length; k++) if (a[k].site !== b[k].site || a[k].weight !== b[k].weight) return false;
  return true;
}

function sameSeries(a: ParcelInput['series'], b: ParcelInput['series']): boolean {
  if (a === b) return true;
  if (!a || !b) return false;
  const names = Object.keys(a) as CarriedSeries[];
  return names.length === Object.keys(b).length && names.every((name) => sameCarried(a[name], b[name]));
}

function sameCarried(a: SeriesWeights | undefined, b: SeriesWeights | undefined): boolean {
  return a !== undefined && b !== undefined && a.gradient === b.gradient && sameWeights(a.weights, b.weights);
}
