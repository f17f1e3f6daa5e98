/** The quality desk: flags, decisions and the state of the checks. */
import { z } from 'zod';
import type { Tx } from '../../../db/connect.ts';
import {
  countFlags,
  type FlagFilter,
  findCorrection,
  type ListedCorrection,
  type ListedFlag,
  listChecks,
  listCorrections,
  listFlags,
  listStandingCorrections,
} from '../../../db/queries/quality.ts';
import { listSites, listWeatherSources } from '../../../db/queries/weather-observations.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { dayNumber, isIsoDate } from '../../base/civil-date.ts';
import { Malformed, NotFound } from '../../base/errors.ts';
import { nullFromNaN, roundOrNull } from '../../base/missing.ts';
import type { CorrectionWanted } from '../../jobs/correction-rules.ts';
import { makeCorrection, type PreviewDay, previewCorrection, undoCorrection } from '../../jobs/corrections.ts';
import { requestWeatherCheck } from '../../jobs/weather-check.ts';
import { RULES, type Rule } from '../../weather/quality/rules.ts';
import type { CheckSummary } from '../../weather/quality/summary.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../weather/variable.ts';
import type { CheckAnswer, CorrectionAnswer, FlagAnswer, PreviewAnswer } from '../contract/quality.ts';
import { pageLimit, readCursor, writeCursor } from '../paging.ts';

const USUAL_ROWS = 200;
/** Most days that a preview lists. */
const MOST_PREVIEW_DAYS = 400;

interface Paged {
  readonly limit?: number;
  readonly cursor?: string;
}

export interface FlagPage {
  readonly items: FlagAnswer[];
  readonly next_cursor: string | null;
  readonly total: number;
}

/** A page of flags that fit the filter, the gravest first. */
export async function answerFlags(caller: Caller, { limit, cursor, ...filter }: FlagFilter & Paged, csv = false): Promise<FlagPage> {
  for (const date of [filter.from, filter.to]) if (date && !isIsoDate(date)) throw new Malformed(`"${date}" is not a day of the calendar`);
  if (filter.from && filter.to && filter.from > filter.to) throw new Malformed(`from ${filter.from} is after to ${filter.to}`);
  const [offset] = readCursor(cursor, z.tuple([z.number().int().min(0)])) ?? [0];
  const size = pageLimit({ limit }, csv, USUAL_ROWS);
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const rows = await listFlags(tx, districtId, filter, { limit: size, offset });
    const total = (await countFlags(tx, districtId, filter)).reduce((sum, { count }) => sum + count, 0);
    const next = offset + rows.length;
    return { items: rows.map(flagMembers), next_cursor: next < total && rows.length > 0 ? writeCursor(next) : null, total };
  });
}

/** One flag by what names it. @throws {NotFound} when there is no such flag */
export async function answerFlag(
  caller: Caller,
  key: { source: string; site: string; variable: string; rule: string; first_day: string },
): Promise<FlagAnswer> {
  const { source, site, variable, rule } = key;
  const rows = await database().inDistrict(caller.districtId, (tx) =>
    listFlags(tx, caller.districtId, { source, site, variable, rule }, { limit: Number.MAX_SAFE_INTEGER, offset: 0 }),
  );
  const found = rows.find((row) => row.flag.firstDay === key.first_day);
  if (!found) throw new NotFound('there is no such flag: it was settled by a new check, or the address is wrong');
  return flagMembers(found);
}

function flagMembers({ flag, source, site, siteName }: ListedFlag): FlagAnswer {
  const text = RULES[flag.rule as Rule] as { name: string; source: string; unit?: string } | undefined;
  const figures = flag.figures as Record<string, unknown>;
  const own = WEATHER_VARIABLES[flag.variable as WeatherVariable]?.unit ?? '';
  return {
    source,
    site,
    site_name: siteName,
    variable: flag.variable,
    rule: flag.rule,
    rule_name: text?.name ?? flag.rule,
    first_day: flag.firstDay,
    last_day: flag.lastDay,
    day_count: dayNumber(flag.lastDay) - dayNumber(flag.firstDay) + 1,
    severity: flag.severity,
    value: significantOrNull(flag.value),
    limit: significantOrNull(flag.limit),
    unit: typeof figures.unit === 'string' ? figures.unit : (text?.unit ?? own),
    detail: flag.detail,
    rule_source: text?.source ?? '',
    state: flag.state,
    correction_id: flag.correctionId,
    figures,
  };
}

/** Stored observations are single precision: six significant figures are what they hold for certain. */
function significantOrNull(value: number | null): number | null {
  return value === null || !Number.isFinite(value) ? null : Number(value.toPrecision(6));
}

const UNIT_OF_AMOUNT: Partial<Record<string, string>> = { factor: '1', aridity: '°C', accept: '', reject: '' };

function correctionMembers({ correction, source, site, siteName }: ListedCorrection): CorrectionAnswer {
  return {
    id: correction.correctionId,
    source,
    site,
    site_name: siteName,
    variable: correction.variable,
    from: correction.fromDay,
    to: correction.toDay,
    act: correction.act,
    amount: correction.amount,
    unit: UNIT_OF_AMOUNT[correction.act] ?? WEATHER_VARIABLES[correction.variable as WeatherVariable]?.unit ?? '',
    values: correction.values,
    rule: correction.rule,
    reason: correction.reason,
    created_by: correction.createdBy,
    created_at: correction.createdAt.toISOString(),
    undone_by: correction.undoneBy,
    undone_at: correction.undoneAt?.toISOString() ?? null,
    standing: correction.undoneAt === null,
  };
}

interface CorrectionFilter extends Paged {
  readonly source?: string;
  readonly site?: string;
  readonly variable?: string;
  readonly standing?: 'true' | 'false';
}

/** Decisions, the newest first; undone ones stay in the list. */
export async function answerCorrections(caller: Caller, wanted: CorrectionFilter, csv = false) {
  const { limit, cursor, standing, ...filter } = wanted;
  const [before] = readCursor(cursor, z.tuple([z.number().int().min(0)])) ?? [undefined];
  const size = pageLimit({ limit }, csv, USUAL_ROWS);
  const rows = await database().inDistrict(caller.districtId, (tx) =>
    listCorrections(
      tx,
      caller.districtId,
      { ...filter, standing: standing === undefined ? undefined : standing === 'true' },
      { limit: size, before },
    ),
  );
  const last = rows.at(-1);
  return { items: rows.map(correctionMembers), next_cursor: last && rows.length === size ? writeCursor(last.correction.sequence) : null };
}

function nameOf(caller: Caller): string {
  return caller.kind === 'token' ? `token “${caller.name}”` : caller.name;
}

/** Makes a decision. @throws as `makeCorrection` */
export async function answerNewCorrection(caller: Caller, wanted: CorrectionWanted): Promise<CorrectionAnswer> {
  const { row, place } = await makeCorrection({ districtId: caller.districtId, name: nameOf(caller) }, wanted);
  return correctionMembers({ correction: row, source: place.source, site: place.code, siteName: place.name });
}

/** What a decision would do. @throws as `makeCorrection` */
export async function answerPreview(caller: Caller, wanted: Omit<CorrectionWanted, 'reason'>): Promise<PreviewAnswer> {
  const days = await previewCorrection(caller.districtId, { ...wanted, reason: '' });
  const variable = wanted.variable ?? 'air_temperature_min_c';
  const both = days.filter(({ referenceEtBefore, referenceEtAfter }) => !Number.isNaN(referenceEtBefore + referenceEtAfter));
  const sum = (pick: (day: PreviewDay) => number) =>
    both.length === 0
      ? null
      : roundOrNull(
          both.reduce((total, day) => total + pick(day), 0),
          2,
        );
  return {
    variable,
    unit: WEATHER_VARIABLES[variable].unit,
    day_count: days.length,
    changed_days: days.filter(({ standing, corrected }) => !Object.is(standing, corrected)).length,
    reference_et_before_mm: sum((day) => day.referenceEtBefore),
    reference_et_after_mm: sum((day) => day.referenceEtAfter),
    truncated: days.length > MOST_PREVIEW_DAYS,
    days: days.slice(0, MOST_PREVIEW_DAYS).map((day) => ({
      date: day.date,
      raw: significantOrNull(day.raw),
      standing: significantOrNull(day.standing),
      corrected: significantOrNull(day.corrected),
      reference_et_before_mm: roundOrNull(day.referenceEtBefore, 3),
      reference_et_after_mm: roundOrNull(day.referenceEtAfter, 3),
    })),
  };
}

/** Undoes a decision. @throws as `undoCorrection` */
export async function answerUndo(caller: Caller, correctionId: string): Promise<CorrectionAnswer> {
  const { districtId } = caller;
  await undoCorrection({ districtId, name: nameOf(caller) }, correctionId);
  return database().inDistrict(districtId, async (tx) => {
    const correction = await findCorrection(tx, districtId, correctionId);
    const place = (await listSites(tx, districtId)).find(
      (site) => site.sourceId === correction?.sourceId && site.ordinal === correction?.ordinal,
    );
    if (!correction) throw new NotFound(`there is no correction ${correctionId} in this district`);
    return correctionMembers({ correction, source: place?.source ?? '', site: place?.code ?? '', siteName: place?.name ?? '' });
  });
}

/** Has one source checked, or all of them. @throws {NotFound} for a source that is not the district's */
export async function answerRunCheck(caller: Caller, source: string | undefined): Promise<{ sources: string[] }> {
  const { districtId } = caller;
  const all = await database().inDistrict(districtId, (tx) => listWeatherSources(tx, districtId));
  const wanted = all.filter(({ name, role }) => (source === undefined ? role === 'observed' : name === source));
  if (source !== undefined && wanted.length === 0) throw new NotFound(`there is no weather source "${source}" in this district`);
  await requestWeatherCheck(
    districtId,
    wanted.map(({ sourceId }) => sourceId),
  );
  return { sources: wanted.map(({ name }) => name) };
}

/** The last check of every source of observations. */
export function answerChecks(caller: Caller): Promise<CheckAnswer[]> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const sources = (await listWeatherSources(tx, districtId)).filter(({ role }) => role === 'observed');
    const checks = new Map((await listChecks(tx, districtId)).map((row) => [row.sourceId, row]));
    const counts = await countFlags(tx, districtId);
    const made = await aridityMade(tx, districtId);
    return sources.map((source) => {
      const check = checks.get(source.sourceId);
      const summary = check ? (check.summary as CheckSummary) : null;
      const own = counts.filter((count) => count.source === source.name);
      return checkMembers({ source, checkedAt: check?.checkedAt ?? null, summary, counts: own, made });
    });
  });
}

type MadeAridity = readonly { source: string; site: string; from: string; to: string }[];

async function aridityMade(tx: Tx, districtId: string): Promise<MadeAridity> {
  const sites = await listSites(tx, districtId);
  const sourceIds = [...new Set(sites.map(({ sourceId }) => sourceId))];
  const standing = await listStandingCorrections(tx, districtId, { sourceIds });
  return standing
    .filter(({ act }) => act === 'aridity')
    .flatMap((row) => {
      const place = sites.find((site) => site.sourceId === row.sourceId && site.ordinal === row.ordinal);
      return place ? [{ source: place.source, site: place.code, from: row.fromDay, to: row.toDay }] : [];
    });
}

interface OneCheck {
  readonly source: { readonly name: string; readonly kind: 'stations' | 'grid' };
  readonly checkedAt: Date | null;
  readonly summary: CheckSummary | null;
  readonly counts: Awaited<ReturnType<typeof countFlags>>;
  readonly made: MadeAridity;
}

function checkMembers({ source, checkedAt, summary, counts, made }: OneCheck): CheckAnswer {
  const total = (pick: (count: OneCheck['counts'][number]) => boolean) => counts.filter(pick).reduce((sum, { count }) => sum + count, 0);
  const open = (severity: string) => total((count) => count.state === 'open' && count.severity === severity);
  return {
    source: source.name,
    kind: source.kind,
    checked_at: checkedAt?.toISOString() ?? null,
    checked: summary?.checked ?? source.kind === 'stations',
    first_day: summary?.from ?? null,
    last_day: summary?.to ?? null,
    sites: summary?.sites ?? 0,
    open: { impossible: open('impossible'), suspect: open('suspect'), note: open('note') },
    settled: total((count) => count.state !== 'open'),
    counts: counts.map(({ site, rule, severity, state, count, days }) => ({ site, rule, severity, state, flags: count, days })),
    pyranometers: (summary?.pyranometers ?? []).map((each) => ({
      site: each.site,
      clear_day_ratio: each.level,
      years: [...each.years],
      drift_pct_per_year: each.driftPct,
      drift_error_pct_per_year: each.driftErrorPct,
      drifting: each.drifting,
      suggested_factor: nullFromNaN(each.suggestedFactor ?? Number.NaN),
    })),
    aridity_offers: (summary?.aridity ?? []).map((offer) => ({
      site: offer.site,
      from: offer.from,
      to: offer.to,
      months: offer.months,
      ko_c: offer.ko,
      minimum_less_dew_point_k: offer.difference,
      aridity_index: offer.index,
      reference_et_before_mm: offer.before,
      reference_et_after_mm: offer.after,
      made: made.some((act) => act.source === source.name && act.site === offer.site && act.from <= offer.from && act.to >= offer.to),
    })),
  };
}
