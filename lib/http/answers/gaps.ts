/** Gaps in the weather record of the sites, filled as a run fills them, with the figures behind every fill. */
import type { Tx } from '../../../db/connect.ts';
import { findWholeDistrict } from '../../../db/queries/district-read.ts';
import { findStandingRun } from '../../../db/queries/run-read.ts';
import { listRunSources } from '../../../db/queries/run-sources.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { addDays, dayNumber, isIsoDate } from '../../base/civil-date.ts';
import { Malformed, NotFound, Refused, TooLarge } from '../../base/errors.ts';
import { roundOrNull } from '../../base/missing.ts';
import { completeWeather } from '../../energy/complete-weather.ts';
import { loadObservations } from '../../jobs/observations.ts';
import { findRunSource, listSourceSites, loadOtherSources, type OtherSource, type RunWeatherSource } from '../../jobs/run-observations.ts';
import { coveringDays } from '../../jobs/season-weather.ts';
import { LONGEST_GAP_IN_TIME } from '../../weather/gaps.ts';
import { type FilledObservations, fillGaps, type Gap } from '../../weather/gaps-fill.ts';
import { REGRESSION_LIMITS, refusalOf } from '../../weather/gaps-regression.ts';
import { methodSpans, RECORD_SERIES, type RecordSeries, recordMethods } from '../../weather/gaps-summary.ts';
import { type CompletedWeather, QUALITY, type SiteObservations, WEATHER_VARIABLES } from '../../weather/variable.ts';
import type { GapRow, GapsAnswer, RecordMethod, SiteRecord } from '../contract/gaps.ts';

/** Most days, and most sites, of one answer. */
const MOST_DAYS = 400;
const MOST_SITES = 200;

interface GapsWanted {
  readonly source?: string;
  readonly site?: string;
  readonly from?: string;
  readonly to?: string;
}

const NOTHING: Omit<GapsAnswer, 'limits' | 'sources'> = { source: null, from: null, to: null, sites: [], items: [] };

/** @throws {NotFound} for a source or site the district does not have. @throws {TooLarge} for more days or sites than one answer holds. */
export function answerGaps(caller: Caller, wanted: GapsWanted): Promise<GapsAnswer> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const district = await findWholeDistrict(tx, districtId);
    const source = await sourceOf(tx, districtId, wanted.source);
    const known = { limits: limits(), sources: (await listRunSources(tx, districtId)).map(({ name, kind }) => ({ name, kind })) };
    if (!district || !source) return { ...NOTHING, ...known };
    const stored = await loadRecord(tx, districtId, source, wanted.site);
    if (stored.dayCount === 0) return { ...NOTHING, ...known, source: source.name };
    const span = await spanOf(tx, districtId, stored, wanted);
    const days = { startDate: span.from, dayCount: dayNumber(span.to) - dayNumber(span.from) + 1 };
    const others = await loadOtherSources(tx, districtId, source.others, stored.sites, days);
    const filled = fillGaps(
      coveringDays(stored, days),
      others.map(({ observations }) => observations),
    );
    const completed = completeWeather(filled, district);
    const first = dayNumber(span.from) - dayNumber(filled.startDate);
    const window = { first, last: first + days.dayCount - 1 };
    const inWindow = filled.gaps.filter((gap) => gap.to >= window.first && gap.from <= window.last);
    return {
      source: source.name,
      ...span,
      ...known,
      sites: shownSites(filled.sites, wanted.site).map((site) => siteRecord(filled, completed, site, window)),
      items: inWindow.map((gap) => rowOf(gap, filled, others)),
    };
  });
}

function limits(): GapsAnswer['limits'] {
  const { leastR2, leastSlope, greatestSlope, leastDays } = REGRESSION_LIMITS;
  return {
    least_r2: leastR2,
    least_slope: leastSlope,
    greatest_slope: greatestSlope,
    least_common_days: leastDays,
    longest_in_time_days: LONGEST_GAP_IN_TIME,
  };
}

/** Null where the district has no weather at all. */
async function sourceOf(tx: Tx, districtId: string, name: string | undefined): Promise<RunWeatherSource | null> {
  try {
    return await findRunSource(tx, districtId, name ?? null);
  } catch (error) {
    if (!(error instanceof Refused)) throw error;
    if (name === undefined) return null;
    throw new NotFound(error.message, { cause: error });
  }
}

/** Every site of sets of stations, or the one named; of a grid only the cell that is named. */
async function loadRecord(tx: Tx, districtId: string, source: RunWeatherSource, code: string | undefined): Promise<SiteObservations> {
  if (source.kind === 'stations') {
    const stored = await loadObservations(tx, districtId, { source: source.asked });
    if (code !== undefined && !stored.sites.some((site) => site.code === code))
      throw new NotFound(`no weather site "${code}" in this district`);
    if (stored.sites.length <= MOST_SITES) return stored;
    throw new TooLarge(`${stored.sites.length} sites; one answer holds ${MOST_SITES}: name one source of them`);
  }
  if (code === undefined) throw new TooLarge(`${source.name} is a grid: name one of its cells with site=`);
  const { rows } = await listSourceSites(tx, districtId, source.asked as string);
  const sites = rows.filter((row) => row.code === code);
  if (sites.length === 0) throw new NotFound(`no cell "${code}" in the grid ${source.name}`);
  return loadObservations(tx, districtId, { source: source.asked, sites });
}

/** The days asked for: of the run in use unless said, else the last of the record. @throws {Malformed} @throws {TooLarge} */
async function spanOf(
  tx: Tx,
  districtId: string,
  stored: SiteObservations,
  { from, to }: GapsWanted,
): Promise<{ from: string; to: string }> {
  for (const date of [from, to]) if (date && !isIsoDate(date)) throw new Malformed(`"${date}" is not a day of the calendar`);
  const run = from || to ? null : await findStandingRun(tx, districtId);
  if (run) return { from: run.startDate, to: run.endDate };
  const last = to ?? (from ? addDays(from, MOST_DAYS - 1) : addDays(stored.startDate, stored.dayCount - 1));
  const first = from ?? addDays(last, 1 - MOST_DAYS);
  if (first > last) throw new Malformed(`from ${first} is after to ${last}`);
  const days = dayNumber(last) - dayNumber(first) + 1;
  if (days > MOST_DAYS) throw new TooLarge(`${first} to ${last} are ${days} days; one answer has at most ${MOST_DAYS}: ask in parts`);
  return { from: first, to: last };
}

const METHOD_OF: Readonly<Record<number, RecordMethod>> = {
  [QUALITY.missing]: 'missing',
  [QUALITY.measured]: 'measured',
  [QUALITY.corrected]: 'corrected',
  [QUALITY.suspect]: 'suspect',
  [QUALITY.rejected]: 'missing',
  [QUALITY.filledFromNeighbour]: 'neighbour',
  [QUALITY.filledFromSource]: 'source',
  [QUALITY.filledInTime]: 'in-time',
  [QUALITY.filledFromNormal]: 'normal',
  [QUALITY.estimated]: 'estimated',
};

const OBSERVED: ReadonlySet<RecordMethod> = new Set(['measured', 'corrected', 'suspect']);

interface Window {
  readonly first: number;
  readonly last: number;
}

/** Places of every site, or of the one named. */
function shownSites(sites: FilledObservations['sites'], code: string | undefined): number[] {
  const all = sites.map((_, site) => site);
  return code === undefined ? all : all.filter((site) => sites[site].code === code);
}

function siteRecord(filled: FilledObservations, completed: CompletedWeather, site: number, { first, last }: Window): SiteRecord {
  const dayCount = last - first + 1;
  const series = (Object.keys(RECORD_SERIES) as RecordSeries[]).map((name) => {
    const codes = recordMethods(filled, completed, site, name).subarray(first, last + 1);
    const spans = methodSpans(codes).map(({ code, from, to }) => ({
      from: addDays(filled.startDate, first + from),
      to: addDays(filled.startDate, first + to),
      method: METHOD_OF[code],
    }));
    const days: Record<string, number> = {};
    for (const code of codes) days[METHOD_OF[code]] = (days[METHOD_OF[code]] ?? 0) + 1;
    const observed = [...OBSERVED].reduce((sum, method) => sum + (days[method] ?? 0), 0);
    return { series: name, term: RECORD_SERIES[name].term, days, estimated_share: roundOrNull(1 - observed / dayCount, 4), spans };
  });
  const { code, name } = filled.sites[site];
  const share = series.reduce((sum, one) => sum + (one.estimated_share ?? 0), 0) / series.length;
  return { site: code, name, estimated_share: roundOrNull(share, 4), series };
}

function rowOf(gap: Gap, filled: FilledObservations, others: readonly OtherSource[]): GapRow {
  const { code, name } = filled.sites[gap.site];
  const { term, unit } = WEATHER_VARIABLES[gap.variable];
  const neighbours = gap.neighbours.map((figures) => ({
    neighbour: filled.sites[figures.neighbour].code,
    distance_km: roundOrNull(figures.distance / 1000, 1),
    common_days: figures.n,
    slope: roundOrNull(figures.slope, 4),
    intercept: roundOrNull(figures.intercept, 4),
    r2: roundOrNull(figures.r2, 4),
    accepted: figures.accepted,
    refused_because: refusalOf(figures),
    filled_days: figures.days,
  }));
  const [best] = neighbours;
  return {
    site: code,
    name,
    variable: gap.variable,
    term,
    unit,
    from: addDays(filled.startDate, gap.from),
    to: addDays(filled.startDate, gap.to),
    days: gap.to - gap.from + 1,
    from_neighbour_days: gap.days.neighbour,
    from_source_days: gap.days.source,
    in_time_days: gap.days.inTime,
    from_normal_days: gap.days.normal,
    left_days: gap.days.left,
    best_neighbour: best?.neighbour ?? null,
    r2: best?.r2 ?? null,
    slope: best?.slope ?? null,
    intercept: best?.intercept ?? null,
    common_days: best?.common_days ?? null,
    accepted: best?.accepted ?? null,
    neighbours,
    sources: gap.sources.map((figures) => ({
      source: others[figures.source].name,
      site: others[figures.source].observations.sites[figures.site].code,
      distance_km: roundOrNull(figures.distance / 1000, 1),
      common_days: figures.n,
      by: figures.by,
      adjustment: roundOrNull(figures.adjustment, 4),
      filled_days: figures.days,
    })),
  };
}
