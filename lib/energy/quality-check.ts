/** The whole check of a source: every rule on every site, and what stands beside the flags. */
import { dayNumber } from '../base/civil-date.ts';
import { checkChanges, checkPersistence } from '../weather/quality/change.ts';
import { type Flag, seriesOf } from '../weather/quality/flag.ts';
import { checkHomogeneity, moveFlags, movesSince, placeOf, type SiteMove, type SitePlace } from '../weather/quality/homogeneity.ts';
import {
  checkNeighbours,
  checkWindAgainstNeighbours,
  type NeighbourLine,
  nearestNeighbours,
  neighbourLines,
} from '../weather/quality/neighbours.ts';
import { checkConsistency, checkRange } from '../weather/quality/values.ts';
import { checkStillWind } from '../weather/quality/wind.ts';
import type { SiteObservations } from '../weather/variable.ts';
import { type AridityOffer, aridityOffers, KO_WITHOUT_REFERENCE } from './quality-aridity.ts';
import { checkHumidity } from './quality-humidity.ts';
import { checkNetRadiation } from './quality-net-radiation.ts';
import { checkPyranometer, isDrifting, type Pyranometer } from './quality-pyranometer.ts';
import { checkRadiationDays } from './quality-radiation.ts';
import { siteSky } from './quality-sky.ts';

export interface CheckOptions {
  /** elevation of a site that does not state its own [m] */
  readonly defaultElevation: number;
  /** kRs [°C⁻⁰·⁵] */
  readonly radiationCoefficient: number;
  /** day of the check, YYYY-MM-DD */
  readonly today: string;
  /** places of the stations at the last check, and moves seen so far */
  readonly places?: readonly SitePlace[];
  readonly moves?: readonly SiteMove[];
}

export interface CheckResult {
  readonly flags: readonly Flag[];
  /** by site that has solar radiation */
  readonly pyranometers: readonly (Pyranometer & { readonly site: number; readonly drifting: boolean })[];
  readonly aridity: readonly AridityOffer[];
  readonly lines: readonly NeighbourLine[];
  readonly places: readonly SitePlace[];
  readonly moves: readonly SiteMove[];
}

/** Checks a source. Nothing is changed; the same observations and options give the same flags. */
export function checkSource(observations: SiteObservations, options: CheckOptions): CheckResult {
  const steps = checkSteps(observations, options);
  let step = steps.next();
  while (!step.done) step = steps.next();
  return step.value;
}

/** `checkSource` a site at a time: yields the number of sites done, so that a long record does not hold up everything else. */
export function* checkSteps(observations: SiteObservations, options: CheckOptions): Generator<number, CheckResult> {
  const neighbours = nearestNeighbours(observations.sites);
  const places = observations.sites.map(placeOf);
  const moves = [...(options.moves ?? []), ...movesSince(options.places ?? [], places, options.today)];
  const parts: SitePart[] = [];
  for (let site = 0; site < neighbours.length; site++) {
    parts.push(checkSite(observations, site, neighbours[site], options));
    yield site + 1;
  }
  const moved = moveFlags(observations, moves, (date) => dayNumber(date) - dayNumber(observations.startDate));
  return {
    ...{ places, moves, flags: [...parts.flatMap(({ flags }) => flags), ...moved] },
    lines: parts.flatMap(({ lines }) => lines),
    pyranometers: parts.flatMap(({ pyranometer }, site) =>
      pyranometer ? [{ ...pyranometer, site, drifting: isDrifting(pyranometer) }] : [],
    ),
    aridity: parts.flatMap(({ aridity }) => aridity),
  };
}

type Neighbours = ReturnType<typeof nearestNeighbours>[number];
type SitePart = ReturnType<typeof checkSite>;

function checkSite(observations: SiteObservations, site: number, neighbours: Neighbours, options: CheckOptions) {
  const lines = neighbourLines(observations, site, neighbours);
  const instruments = checkInstruments(observations, site, options);
  const flags = [
    ...checkRange(observations, site),
    ...checkConsistency(observations, site),
    ...checkChanges(observations, site),
    ...checkPersistence(observations, site),
    ...checkStillWind(observations, site),
    ...checkWindAgainstNeighbours(observations, site, neighbours),
    ...checkNeighbours(observations, site, lines),
    ...checkHomogeneity(observations, site, lines),
    ...instruments.flags,
  ];
  return { ...instruments, flags, lines };
}

function checkInstruments(observations: SiteObservations, site: number, { defaultElevation, radiationCoefficient }: CheckOptions) {
  const sky = siteSky(observations, site, defaultElevation);
  const { flags, pyranometer } = checkPyranometer(observations, sky);
  const hasDays = seriesOf(observations, 'solar_radiation_mj_m2_d', site)?.some((value) => !Number.isNaN(value)) ?? false;
  return {
    flags: [
      ...flags,
      ...checkRadiationDays(observations, sky),
      ...checkHumidity(observations, sky),
      ...checkNetRadiation(observations, sky),
    ],
    pyranometer: hasDays ? pyranometer : null,
    aridity: aridityOffers(observations, sky, { ko: KO_WITHOUT_REFERENCE, radiationCoefficient }),
  };
}
