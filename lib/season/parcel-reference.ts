/** What the ways of placing weather at a parcel have in common: the reference day there, and the refusal of a day without weather. */
import { isoDate } from '../base/civil-date.ts';
import { RangeViolation } from '../base/errors.ts';
import { atmosphericPressure, psychrometricConstant } from '../energy/air.ts';
import { type ReferenceDay, solveReferenceDay } from '../energy/combination.ts';
import type { PackedSeason } from './pack.ts';
import type { ParcelInput } from './types.ts';

/** Solves the reference day; where the sites' vapour pressure exceeds es at the parcel, again with es in its place. */
export function solveWithinSaturation(season: PackedSeason, day: ReferenceDay): void {
  solveReferenceDay(day, season.constants);
  if (day.vapourPressureDeficit >= 0) return;
  day.actualVapourPressure = day.saturationVapourPressure;
  solveReferenceDay(day, season.constants);
}

export function placeReferenceDay(day: ReferenceDay, elevation: number): void {
  day.elevation = elevation;
  day.pressure = atmosphericPressure(elevation);
  day.psychrometricConstant = psychrometricConstant(day.pressure);
}

export function noWeather(season: PackedSeason, parcel: ParcelInput, day: number): RangeViolation {
  const sites = parcel.weights.map(({ site }) => season.input.sites[site].code).join(', ');
  return new RangeViolation(
    `no weather for parcel ${parcel.code} on ${isoDate(season.firstDay + day)}: none of its sites (${sites}) has a complete day; fill the gap or add a site`,
  );
}
