/** Site weights of a run's parcels by its settings: one shared set per parcel, and sets of their own for series that are carried another way. */
import { Refused } from '../base/errors.ts';
import {
  inverseDistanceOf,
  MAXIMUM_SITES,
  type NearSite,
  nearSites,
  type Place,
  type PlacedSites,
  placeSites,
} from '../weather/interpolation.ts';
import { krigingWeights } from '../weather/kriging.ts';
import type { CarriedSeries, CompletedWeather, GridShape, SeriesWeights, Site, SiteWeight } from '../weather/variable.ts';
import type { RunSettings } from './run-settings.ts';
import { gridFinder } from './run-weights-grid.ts';
import { planSeries, type SeriesPlan, type SeriesRecord } from './run-weights-plan.ts';
import { standIns } from './run-weights-stand-in.ts';

export interface WeightsWanted {
  readonly parcels: readonly { readonly longitude: number; readonly latitude: number }[];
  readonly sites: readonly Site[];
  /** the lattice of a grid source; null for stations */
  readonly grid: GridShape | null;
  /** indexes of the sites that may speak for a parcel */
  readonly usable: readonly number[];
  readonly settings: Pick<RunSettings, 'interpolation' | 'elevation_trend' | 'power' | 'maximum_sites' | 'lapse_rate_c_per_m'>;
  /** the season's weather at the sites; null: weights from the places alone, before the weather is read (grids) */
  readonly weather: CompletedWeather | null;
  readonly startDate: string;
  /** weather that variograms, trends and leave-one-out errors are made of, where that of the season has too few measured days; left out: `weather` */
  readonly fitted?: { readonly weather: CompletedWeather; readonly startDate: string };
}

/** How weather reaches one parcel. */
export interface ParcelWeights {
  /** shared by every series that has none of its own; ≥ 0 */
  readonly weights: SiteWeight[];
  readonly series?: Partial<Record<CarriedSeries, SeriesWeights>>;
}

/** What was chosen, for the run's manifest. Numbers in the units their names say; those of a series in its own unit. */
export interface WeightsRecord {
  readonly interpolation: string;
  readonly source: 'stations' | 'grid';
  readonly site_count: number;
  readonly series: Partial<Record<CarriedSeries, SeriesRecord>>;
  readonly notes: readonly string[];
}

/**
 * Weights for every parcel.
 *
 * The shared weights are the nearest site's, bilinear on a grid, or by inverse distance; they carry temperature with the lapse rate. Kriging, a fitted trend, and what
 * automatic chooses are sets of the series. On days when none of a parcel's sites reports, the nearest that does stands in with a negligible standing weight.
 *
 * @throws {Refused} for a method that does not suit the kind of source; {RangeViolation} when no usable site has a known place
 */
export function parcelWeights(wanted: WeightsWanted): { parcels: ParcelWeights[]; record: WeightsRecord } {
  const { grid, settings, usable, weather } = wanted;
  requireSuited(settings.interpolation, grid ? 'grid' : 'stations');
  const placed = placeSites(usablePlaces(wanted));
  const notes: string[] = [];
  const plans = planSeries({ ...wanted, ...wanted.fitted, placed, notes });
  const shared = sharedWeights(wanted, placed, notes);
  const owned = plans.filter((plan) => !plan.asShared);
  const stand = weather ? standIns(weather, placed) : null;
  const parcels = wanted.parcels.map((parcel): ParcelWeights => {
    const place: Place = [parcel.longitude, parcel.latitude];
    const own = shared(place);
    const weights = stand ? stand(place, own) : own;
    if (owned.length === 0) return { weights };
    return { weights, series: seriesWeights(owned, nearSites(place, placed, MAXIMUM_SITES), own, settings.maximum_sites) };
  });
  const record: WeightsRecord = {
    interpolation: settings.interpolation,
    source: grid ? 'grid' : 'stations',
    site_count: usable.length,
    series: Object.fromEntries(plans.map((plan) => [plan.series, plan.record])),
    notes: [...new Set(notes)],
  };
  return { parcels, record };
}

/** Whether a method is for this kind of source. */
export function suits(interpolation: RunSettings['interpolation'], kind: 'stations' | 'grid'): boolean {
  return kind === 'grid' ? interpolation !== 'kriging' : interpolation !== 'bilinear';
}

/** @throws {Refused} when a method is not for this kind of source */
export function requireSuited(interpolation: RunSettings['interpolation'], kind: 'stations' | 'grid'): void {
  if (suits(interpolation, kind)) return;
  const other = kind === 'grid' ? 'stations' : 'grids';
  const instead =
    kind === 'grid'
      ? '"bilinear", "nearest", "inverse-distance" or "automatic"'
      : '"inverse-distance", "kriging", "nearest" or "automatic"';
  throw new Refused(
    `interpolation "${interpolation}" is for ${other}, and the weather source is ${kind === 'grid' ? 'a grid' : 'stations'}: take ${instead}.`,
  );
}

/** The sites of the run; those that may not speak for a parcel have no place. */
function usablePlaces({ sites, usable }: WeightsWanted): Site[] {
  const speaks = new Set(usable);
  return sites.map((site, index) => (speaks.has(index) ? site : { ...site, longitude: Number.NaN, latitude: Number.NaN }));
}

/** Cells taken where a grid has no axes to be bilinear on. */
const CURVILINEAR_CELLS = 4;

/** Shared weights of a place. */
function sharedWeights(
  { grid, settings, sites, usable }: WeightsWanted,
  placed: PlacedSites,
  notes: string[],
): (place: Place) => SiteWeight[] {
  const { interpolation, power, maximum_sites } = settings;
  const byDistance = (place: Place, count: number) => inverseDistanceOf(nearSites(place, placed, count), power);
  if (!grid) {
    if (interpolation === 'nearest') return (place) => byDistance(place, 1);
    return (place) => byDistance(place, maximum_sites);
  }
  const find = gridFinder(grid, { sites, usable }, notes);
  if (interpolation === 'inverse-distance') return (place) => byDistance(place, maximum_sites);
  if (interpolation === 'nearest') return (place) => find.nearest(place) ?? byDistance(place, 1);
  return (place) => find.bilinear(place) ?? byDistance(place, CURVILINEAR_CELLS);
}

/** Sets of weights of the series that have their own; series carried alike share one array. */
function seriesWeights(
  plans: readonly SeriesPlan[],
  near: readonly NearSite[],
  own: SiteWeight[],
  maximumSites: number,
): Partial<Record<CarriedSeries, SeriesWeights>> {
  const made = new Map<string, SiteWeight[]>();
  const entries = plans.map((plan): [CarriedSeries, SeriesWeights] => {
    const { gradient } = plan;
    if (plan.kriging) {
      const { weights, variance } = krigingWeights(plan.kriging, near);
      return [plan.series, { weights, gradient, variance }];
    }
    const key = plan.carry ? `${plan.carry.method}${plan.carry.power}` : 'shared';
    const weights = made.get(key) ?? plainWeights(plan, near, own, maximumSites);
    made.set(key, weights);
    return [plan.series, { weights, gradient, variance: Number.NaN }];
  });
  return Object.fromEntries(entries);
}

function plainWeights({ carry }: SeriesPlan, near: readonly NearSite[], own: SiteWeight[], maximumSites: number): SiteWeight[] {
  if (!carry) return own;
  if (carry.method === 'nearest') return [{ site: near[0].site, weight: 1 }];
  return inverseDistanceOf(near.slice(0, maximumSites), carry.power);
}
