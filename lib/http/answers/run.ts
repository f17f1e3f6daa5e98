/** Runs of the district: the list, one, and the one readers see. */

import type { Tx } from '../../../db/connect.ts';
import { findStandingRun, listRuns, type RunHead } from '../../../db/queries/run-read.ts';
import { findRun } from '../../../db/queries/run-state.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { addDays, dayNumber, isIsoDate, type Period, type PeriodKind, periodsOf } from '../../base/civil-date.ts';
import { Conflict, Malformed, NotFound } from '../../base/errors.ts';
import { cancelRun, requestRun } from '../../jobs/runs.ts';
import type { RunAnswer, RunRequest } from '../contract/run.ts';
import { runSettings } from '../contract/run.ts';
import { bandStateOf } from './band-state.ts';

export async function answerRuns(caller: Caller, season?: string): Promise<RunAnswer[]> {
  const rows = await database().inDistrict(caller.districtId, (tx) => listRuns(tx, caller.districtId, season));
  return rows.map(runMembers);
}

/** @throws {NotFound} for a run that is not the district's. */
export async function answerRun(caller: Caller, runId: string): Promise<RunAnswer> {
  return runMembers(await database().inDistrict(caller.districtId, (tx) => readRun(tx, caller.districtId, runId)));
}

/** The run readers see: of this season, or of the newest season that has one. */
export async function standingRun(caller: Caller, season?: string): Promise<RunAnswer | null> {
  const row = await database().inDistrict(caller.districtId, (tx) => findStandingRun(tx, caller.districtId, season));
  return row ? runMembers(row) : null;
}

export async function startRun(caller: Caller, wanted: RunRequest): Promise<RunAnswer> {
  const runId = await requestRun(caller, wanted);
  return answerRun(caller, runId);
}

export async function callOffRun(caller: Caller, runId: string): Promise<RunAnswer> {
  await cancelRun(caller.districtId, runId);
  return answerRun(caller, runId);
}

function runMembers(row: RunHead): RunAnswer {
  const { warnings, ...balance } = row.balance as Record<string, unknown>;
  const manifest = row.manifest as Record<string, unknown>;
  return {
    id: row.runId,
    season: row.seasonCode,
    state: row.state,
    stage: row.stage,
    progress: row.progress,
    standing: row.standing,
    stale_since: row.staleSince?.toISOString() ?? null,
    stale_reason: row.staleReason,
    start_date: row.startDate,
    end_date: row.endDate,
    parcel_count: row.parcelCount,
    settings: runSettings.strip().parse(row.settings),
    manifest,
    balance: balance as RunAnswer['balance'],
    band: bandStateOf(row),
    days_ahead: (manifest.days_ahead ?? null) as RunAnswer['days_ahead'],
    warnings: [warnings, manifest.warnings].flat().filter((warning): warning is string => typeof warning === 'string'),
    error: row.error,
    created_at: row.createdAt.toISOString(),
    started_at: row.startedAt?.toISOString() ?? null,
    finished_at: row.finishedAt?.toISOString() ?? null,
  };
}

/** True when nothing more will happen to the run. */
export function isOver(run: { state: RunAnswer['state'] }): boolean {
  return run.state !== 'queued' && run.state !== 'running';
}

const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/i;

async function readRun(tx: Tx, districtId: string, runId: string): Promise<RunHead> {
  const row = UUID.test(runId) ? await findRun(tx, districtId, runId) : null;
  if (!row) throw new NotFound(`no run ${runId} in this district`);
  return row;
}

/** A run with results. @throws {NotFound} @throws {Conflict} when it is not finished. */
export async function readFinishedRun(tx: Tx, districtId: string, runId: string): Promise<RunHead> {
  const row = await readRun(tx, districtId, runId);
  if (row.state === 'done') return row;
  const why = row.error ? `: ${row.error}` : '';
  throw new Conflict(`run ${runId} has no results: it is ${row.state}, ${Math.floor(row.progress * 100)} % done${why}`);
}

/** Weekday on which the delivery weeks of a run begin: as the run was made, else as the district has it now. */
function weekStartOf(run: RunHead, caller: Caller): number {
  const frozen = (run.manifest as { week_start?: unknown }).week_start;
  return typeof frozen === 'number' ? frozen : caller.district.weekStart;
}

export interface SpanWanted {
  readonly period: PeriodKind;
  readonly from?: string;
  readonly to?: string;
}

/**
 * Periods within the days asked for; offsets count from the first day of the run. Days outside the run are left out.
 *
 * @throws {Malformed} when a date is none, or the last day is before the first.
 */
export function periodsWanted(run: RunHead, caller: Caller, wanted: SpanWanted): Period[] {
  const { from = run.startDate, to = run.endDate } = wanted;
  for (const date of [from, to]) if (!isIsoDate(date)) throw new Malformed(`"${date}" is not a day of the calendar`);
  if (from > to && wanted.from && wanted.to) throw new Malformed(`from ${from} is after to ${to}`);
  if (from > to) throw new Malformed(`${outsideText(wanted)} the run, which goes from ${run.startDate} to ${run.endDate}`);
  const [, start] = [run.startDate, from].sort();
  const [end] = [run.endDate, to].sort();
  const offset = dayNumber(start) - dayNumber(run.startDate);
  return periodsOf(wanted.period, start, end, weekStartOf(run, caller)).map((period) => ({
    ...period,
    from: period.from + offset,
    to: period.to + offset,
  }));
}

/** One of the two is given. */
function outsideText({ from, to }: SpanWanted): string {
  return from ? `from ${from} is after the last day of` : `to ${to} is before the first day of`;
}

/** Place of a date within a run. @throws {Malformed} when it lies outside. */
export function dayOffset(run: RunHead, date: string): number {
  if (!isIsoDate(date) || date < run.startDate || date > addDays(run.startDate, run.dayCount - 1)) {
    throw new Malformed(`"${date}" is not a day of the run, which goes from ${run.startDate} to ${run.endDate}`);
  }
  return dayNumber(date) - dayNumber(run.startDate);
}
