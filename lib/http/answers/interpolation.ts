/** Leave-one-out figures of the stations: per variable and method, with semivariograms and errors by station. */
import type { Tx } from '../../../db/connect.ts';
import { listSeasons } from '../../../db/queries/district-read.ts';
import { listRunSources } from '../../../db/queries/run-sources.ts';
import { findMonths, listWeatherSources } from '../../../db/queries/weather-observations.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { addDays, isIsoDate } from '../../base/civil-date.ts';
import { Malformed, NotFound, Refused } from '../../base/errors.ts';
import { interpolationCheck, type KeptCheck, type KeptVariable, type KeptVariogram } from '../../jobs/interpolation-check.ts';
import {
  CARRIED_NAMES,
  CARRIED_VARIABLES,
  type CarriedVariable,
  type CarriedVariableAnswer,
  type InterpolationAnswer,
  type Semivariogram,
} from '../contract/interpolation.ts';

export interface InterpolationWanted {
  readonly source?: string;
  readonly season?: string;
  readonly from?: string;
  readonly to?: string;
  readonly variable?: CarriedVariable;
  readonly method?: string;
}

/** Days taken where neither a season nor dates are given and no season has weather. */
const USUAL_DAYS = 365;

/**
 * @throws {Malformed} for a span that is none, or both a season and dates; {NotFound} for an unknown season or source;
 * {Refused} or {TooLarge} as `interpolationCheck`
 */
export function answerInterpolation(caller: Caller, wanted: InterpolationWanted): Promise<InterpolationAnswer> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const source = await sourceAsked(tx, districtId, wanted.source);
    const span = await spanAsked(tx, districtId, wanted, source?.sourceId);
    const { source: name, computedAt, check } = await interpolationCheck(tx, districtId, { source: source?.name ?? null, ...span });
    const items = CARRIED_NAMES.filter((variable) => !wanted.variable || variable === wanted.variable).flatMap((variable) => {
      const kept = check.variables.find(({ series }) => series === CARRIED_VARIABLES[variable].series);
      return kept ? [variableMembers(variable, kept, check, wanted.method)] : [];
    });
    return { source: name, ...span, computed_at: computedAt.toISOString(), sites: [...check.sites], items };
  });
}

async function sourceAsked(tx: Tx, districtId: string, name: string | undefined) {
  if (name === undefined) return null;
  const source = (await listWeatherSources(tx, districtId)).find((each) => each.name === name);
  if (!source) throw new NotFound(`there is no weather source "${name}" in this district`);
  return source;
}

async function spanAsked(
  tx: Tx,
  districtId: string,
  { season, from, to }: InterpolationWanted,
  sourceId: number | undefined,
): Promise<{ from: string; to: string }> {
  if (season && (from || to)) throw new Malformed('give a season, or from and to, not both');
  for (const date of [from, to]) if (date && !isIsoDate(date)) throw new Malformed(`"${date}" is not a day of the calendar`);
  if (from && to && from > to) throw new Malformed(`from ${from} is after to ${to}`);
  const seasons = await listSeasons(tx, districtId);
  const named = seasons.find(({ code }) => code === season);
  if (season && !named) throw new NotFound(`there is no season "${season}" in this district`);
  if (named) return { from: named.startDate, to: named.endDate };
  if (from && to) return { from, to };
  if (from) return { from, to: addDays(from, USUAL_DAYS - 1) };
  if (to) return { from: addDays(to, 1 - USUAL_DAYS), to };
  return usualSpan(tx, districtId, seasons, sourceId);
}

/** The newest season that has weather; else the last year of the record. */
async function usualSpan(
  tx: Tx,
  districtId: string,
  seasons: readonly { startDate: string; endDate: string }[],
  sourceId: number | undefined,
): Promise<{ from: string; to: string }> {
  const observed = sourceId === undefined ? (await listRunSources(tx, districtId)).map((source) => source.sourceId) : [sourceId];
  const months = await findMonths(tx, districtId, observed);
  if (!months) throw new Refused('The district has no weather yet: import stations, then their weather.');
  const last = addDays(months.last, 30);
  const newest = seasons
    .filter(({ startDate, endDate }) => startDate <= last && endDate >= months.first)
    .toSorted((a, b) => (a.startDate < b.startDate ? 1 : -1))[0];
  return newest ? { from: newest.startDate, to: newest.endDate } : { from: addDays(last, 1 - USUAL_DAYS), to: last };
}

/** One variable as the answer has it. */
export function variableMembers(variable: CarriedVariable, kept: KeptVariable, check: KeptCheck, asked?: string): CarriedVariableAnswer {
  const { term, unit } = CARRIED_VARIABLES[variable];
  const shown = kept.methods.find(({ id }) => id === asked) ?? kept.methods.find(({ id }) => id === kept.chosen);
  return {
    ...{ variable, term, unit },
    gradient_per_km: kept.gradient_per_m === null ? null : kept.gradient_per_m * 1000,
    methods: kept.methods.map(({ id, name, n, bias, rmse, mae, msdr }) => ({
      ...{ method: id, name, chosen: id === kept.chosen },
      ...{ n, bias, rmse, mae, msdr },
    })),
    variograms: kept.variograms.map(variogramMembers),
    shown_method: shown?.id ?? null,
    site_errors: shown
      ? check.sites.map(({ code }, i) => ({ site: code, n: shown.sites.n[i], bias: shown.sites.bias[i], rmse: shown.sites.rmse[i] }))
      : [],
  };
}

function variogramMembers({ trend, kind, nugget, partial_sill, range_m, classes }: KeptVariogram): Semivariogram {
  return {
    ...{ trend, model: kind as Semivariogram['model'], nugget, partial_sill },
    range_km: range_m === null ? null : range_m / 1000,
    classes: classes.map(({ pair_count, distance_m, semivariance }) => ({ pair_count, distance_km: distance_m / 1000, semivariance })),
  };
}
