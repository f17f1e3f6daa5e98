/** Decisions of the quality desk: made, previewed and undone. Each is a layer over the raw record, with its reason and its maker. */

import type { Tx } from '../../db/connect.ts';
import { findWholeDistrict } from '../../db/queries/district-read.ts';
import {
  type CorrectionRow,
  findCorrection,
  holdCorrections,
  insertCorrection,
  listStandingCorrections,
  markUndone,
  reopenFlags,
  settleFlags,
} from '../../db/queries/quality.ts';
import { findStandingSettings } from '../../db/queries/run-state.ts';
import { markRunsStale } from '../../db/queries/stale-runs.ts';
import { listSites, type SiteRow } from '../../db/queries/weather-observations.ts';
import { database } from '../access/database.ts';
import { addDays, dayNumber, isIsoDate } from '../base/civil-date.ts';
import { Conflict, Malformed, NotFound, Refused, TillwaterError } from '../base/errors.ts';
import { applyCorrections } from '../energy/quality-corrections.ts';
import { siteReferenceEt } from '../energy/quality-reference-et.ts';
import { siteSky } from '../energy/quality-sky.ts';
import { seriesOf } from '../weather/quality/flag.ts';
import { doubtsItsDays, RULES } from '../weather/quality/rules.ts';
import type { SiteObservations, WeatherVariable } from '../weather/variable.ts';
import { correctionsOver, type StoredCorrection } from './correction-rows.ts';
import { type CorrectionWanted, checkedCorrection, refuseImpossible } from './correction-rules.ts';
import { seasonsTouched } from './import-runs.ts';
import { loadObservations } from './observations.ts';
import { requestRun } from './runs.ts';
import { requestWeatherCheck } from './weather-check.ts';

interface Who {
  readonly districtId: string;
  /** as it is shown beside the decision */
  readonly name: string;
}

/** One day of a decision before it is made. */
export interface PreviewDay {
  readonly date: string;
  /** as stored */
  readonly raw: number;
  /** under the decisions that stand now */
  readonly standing: number;
  /** with this one laid over them */
  readonly corrected: number;
  /** mm d⁻¹ */
  readonly referenceEtBefore: number;
  readonly referenceEtAfter: number;
}

interface Weighed {
  readonly place: SiteRow;
  readonly row: StoredCorrection;
  readonly days: readonly PreviewDay[];
}

/**
 * What a decision would make of the record and of reference ET, without making it.
 *
 * @throws as `makeCorrection`
 */
export async function previewCorrection(districtId: string, wanted: CorrectionWanted): Promise<readonly PreviewDay[]> {
  return (await database().inDistrict(districtId, (tx) => weigh(tx, districtId, wanted))).days;
}

/**
 * Makes a decision: lays it over the record, settles the flags it answers, has the source checked and the seasons it touches computed anew.
 *
 * @throws {NotFound} for a site that is not the district's
 * @throws {Refused} when a part of it cannot be: see `checkedCorrection`; nothing stored; a corrected value outside its physical limits
 */
export async function makeCorrection(who: Who, wanted: CorrectionWanted): Promise<{ row: CorrectionRow; place: SiteRow }> {
  const { districtId } = who;
  const made = await database().inDistrict(districtId, async (tx) => {
    await holdCorrections(tx, districtId);
    const { place, row: layer } = await weigh(tx, districtId, wanted);
    const rule = wanted.rule ?? null;
    const row = await insertCorrection(tx, { districtId, ...layer, rule, reason: wanted.reason.trim(), createdBy: who.name });
    await settle(tx, districtId, row);
    return { row, place, seasons: await follow(tx, districtId, row, place, 'made') };
  });
  await recompute(districtId, made.seasons);
  return made;
}

/**
 * Undoes a decision: the record is again what it would be without it, bit for bit, and the flags it had settled are open.
 *
 * @throws {NotFound} when there is none of this id; {Conflict} when it has been undone
 */
export async function undoCorrection(who: Who, correctionId: string): Promise<void> {
  const { districtId } = who;
  const seasons = await database().inDistrict(districtId, async (tx) => {
    await holdCorrections(tx, districtId);
    const row = await findCorrection(tx, districtId, correctionId);
    if (!row) throw new NotFound(`there is no correction ${correctionId} in this district`);
    if (!(await markUndone(tx, districtId, correctionId, who.name))) {
      throw new Conflict(`this correction was already undone by ${row.undoneBy ?? 'somebody'}: there is nothing left to undo`);
    }
    await reopenFlags(tx, districtId, correctionId);
    const place = (await listSites(tx, districtId)).find((site) => site.sourceId === row.sourceId && site.ordinal === row.ordinal);
    return follow(tx, districtId, row, place ?? null, 'undone');
  });
  await recompute(districtId, seasons);
}

async function weigh(tx: Tx, districtId: string, wanted: CorrectionWanted): Promise<Weighed> {
  for (const date of [wanted.from, wanted.to]) if (!isIsoDate(date)) throw new Malformed(`"${date}" is not a day of the calendar`);
  const place = findPlace(
    (await listSites(tx, districtId)).filter(({ role }) => role === 'observed'),
    wanted,
  );
  const row = { sourceId: place.sourceId, ordinal: place.ordinal, ...checkedCorrection(wanted) };
  const district = await findWholeDistrict(tx, districtId);
  const raw = await loadObservations(tx, districtId, { sites: [place], from: row.fromDay, to: row.toDay, raw: true });
  const standing = await listStandingCorrections(tx, districtId, { sourceIds: [place.sourceId], from: row.fromDay, to: row.toDay });
  const layered = (rows: readonly StoredCorrection[]) =>
    applyCorrections(
      raw,
      correctionsOver(rows, raw.startDate, ({ ordinal }) => (ordinal === place.ordinal ? 0 : undefined)),
      district?.defaultElevation ?? 0,
    );
  const variable = row.variable as WeatherVariable;
  refuseImpossible(row, raw, layered([...standing, row]));
  const places = { defaultElevation: district?.defaultElevation ?? 0, radiationCoefficient: district?.radiationCoefficient ?? 0.16 };
  return { place, row, days: previewDays({ raw, before: layered(standing), after: layered([...standing, row]), variable, places }) };
}

/** @throws {NotFound} for no such site; {Refused} when several sources have one of this code */
function findPlace(sites: readonly SiteRow[], { site, source }: CorrectionWanted): SiteRow {
  const found = sites.filter((each) => each.code === site && (!source || each.source === source));
  if (found.length === 0)
    throw new NotFound(`there is no weather site "${site}"${source ? ` in source "${source}"` : ''} in this district`);
  if (found.length > 1) {
    throw new Refused(`site "${site}" is in ${found.map((each) => `"${each.source}"`).join(' and ')}: say which with "source"`);
  }
  return found[0];
}

interface Compared {
  readonly raw: SiteObservations;
  readonly before: SiteObservations;
  readonly after: SiteObservations;
  readonly variable: WeatherVariable;
  readonly places: { readonly defaultElevation: number; readonly radiationCoefficient: number };
}

function previewDays({ raw, before, after, variable, places }: Compared): PreviewDay[] {
  const et = (record: SiteObservations) =>
    siteReferenceEt(record, siteSky(record, 0, places.defaultElevation), places.radiationCoefficient);
  const [etBefore, etAfter] = [et(before), et(after)];
  const at = (record: SiteObservations, day: number) => seriesOf(record, variable, 0)?.[day] ?? Number.NaN;
  return Array.from({ length: raw.dayCount }, (_, day) => ({
    date: addDays(raw.startDate, day),
    raw: at(raw, day),
    standing: at(before, day),
    corrected: at(after, day),
    referenceEtBefore: etBefore[day],
    referenceEtAfter: etAfter[day],
  }));
}

/** Every rule that single days can break. */
const DAY_RULES = Object.keys(RULES).filter(doubtsItsDays);
const STATE_OF = { accept: 'accepted', reject: 'rejected', factor: 'corrected', offset: 'corrected', replace: 'corrected' } as const;

async function settle(tx: Tx, districtId: string, row: CorrectionRow): Promise<void> {
  const aridity = row.act === 'aridity';
  const rules = aridity ? ['dew-point-far-below-minimum', 'humidity-never-saturated'] : row.rule ? [row.rule] : DAY_RULES;
  const variables = aridity
    ? ['dew_point_c', 'vapour_pressure_kpa', 'relative_humidity_max_pct', 'relative_humidity_mean_pct', 'specific_humidity_kg_kg']
    : [row.variable];
  const state = row.act === 'aridity' ? 'corrected' : STATE_OF[row.act];
  const { sourceId, ordinal, correctionId, fromDay: from, toDay: to } = row;
  const across = row.rule !== null || aridity;
  await settleFlags(tx, districtId, { ...{ sourceId, ordinal, variables, from, to, rules }, state, correctionId, across });
}

/** What a decision brings with it, in its transaction. @returns codes of the seasons to compute anew */
async function follow(tx: Tx, districtId: string, row: CorrectionRow, place: SiteRow | null, done: 'made' | 'undone'): Promise<string[]> {
  await requestWeatherCheck(districtId, [row.sourceId], tx);
  const accepted = row.act === 'accept' && done === 'made' && !(await coversOthers(tx, districtId, row));
  if (accepted) return [];
  const touched = await seasonsTouched(tx, districtId, { everything: false, months: monthsBetween(row.fromDay, row.toDay), seasons: [] });
  const standing: string[] = [];
  for (const season of touched) if (await findStandingSettings(tx, districtId, season)) standing.push(season);
  const what = done === 'made' ? 'weather corrected' : 'weather correction undone';
  await markRunsStale(tx, districtId, standing, `${what} at ${place?.code ?? 'a station'}`);
  return standing;
}

/** True when an acceptance lies over an earlier decision, and so changes the values after all. */
async function coversOthers(tx: Tx, districtId: string, row: CorrectionRow): Promise<boolean> {
  const standing = await listStandingCorrections(tx, districtId, { sourceIds: [row.sourceId], from: row.fromDay, to: row.toDay });
  return standing.some(
    (each) =>
      each.correctionId !== row.correctionId && each.ordinal === row.ordinal && each.variable === row.variable && each.act !== 'accept',
  );
}

function monthsBetween(from: string, to: string): string[] {
  const months: string[] = [];
  for (let month = `${from.slice(0, 7)}-01`; dayNumber(month) <= dayNumber(to); month = `${addDays(month, 32).slice(0, 7)}-01`)
    months.push(month);
  return months;
}

/** Asks for runs like those that stand; what cannot be computed now is left to the stale mark. */
async function recompute(districtId: string, seasons: readonly string[]): Promise<void> {
  for (const season of seasons) {
    try {
      await requestRun({ districtId, userId: null }, { season, likeStanding: true });
    } catch (error) {
      if (!(error instanceof TillwaterError)) throw error;
    }
  }
}
