/** Days on which none of a parcel's sites reports: the nearest site that does stands in. */
import { nearSites, type Place, type PlacedSites } from '../weather/interpolation.ts';
import type { CompletedWeather, SiteWeight } from '../weather/variable.ts';

/** A weight that counts only when it is alone. */
const STAND_IN_WEIGHT = 1e-9;

/**
 * Adds to the weights of a place what it takes for every day to have a site.
 *
 * @param placed the sites of the weather, those that may not stand in without a place
 * @returns a function that hands back the weights themselves where they need no stand-in
 */
export function standIns(weather: CompletedWeather, placed: PlacedSites) {
  const reports = placed.sites.map((_, site) => reportingDays(weather, site));
  const complete = reports.map((days) => days.every(Boolean));
  const uncovered = new Map<string, number[]>();
  return (place: Place, weights: SiteWeight[]): SiteWeight[] => {
    if (weights.some(({ site }) => complete[site])) return weights;
    const key = weights
      .map(({ site }) => site)
      .sort((a, b) => a - b)
      .join();
    let days = uncovered.get(key);
    if (!days) {
      days = uncoveredDays(reports, weights, weather.dayCount);
      uncovered.set(key, days);
    }
    return days.length === 0 ? weights : withStandIns(weights, days, reports, byDistance(place, placed));
  };
}

function reportingDays({ airTemperatureMax, referenceEt, dayCount }: CompletedWeather, site: number): boolean[] {
  return Array.from({ length: dayCount }, (_, day) => {
    const at = site * dayCount + day;
    return !Number.isNaN(airTemperatureMax[at]) || Number.isFinite(referenceEt?.[at] ?? Number.NaN);
  });
}

function uncoveredDays(reports: readonly boolean[][], weights: readonly SiteWeight[], dayCount: number): number[] {
  return Array.from({ length: dayCount }, (_, day) => day).filter((day) => !weights.some(({ site }) => reports[site][day]));
}

/** Every site with a known place, nearest first. */
function byDistance(place: Place, placed: PlacedSites): number[] {
  return nearSites(place, placed, placed.sites.length).map(({ site }) => site);
}

function withStandIns(
  weights: readonly SiteWeight[],
  days: readonly number[],
  reports: readonly boolean[][],
  nearest: readonly number[],
): SiteWeight[] {
  const result = [...weights];
  for (const day of days) {
    if (result.some(({ site }) => reports[site][day])) continue;
    const site = nearest.find((candidate) => reports[candidate][day]);
    if (site !== undefined) result.push({ site, weight: STAND_IN_WEIGHT });
  }
  return result;
}
