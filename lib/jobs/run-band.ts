/**
 * The band of a run, P10, P50 and P90: asked for when the run is finished, called off, or failed. What computes it is in `band-work.ts`, which only worker
 * processes load.
 */
import type { Tx } from '../../db/connect.ts';
import { deleteBand, lockBandState, saveBandState } from '../../db/queries/run-band.ts';
import type { RunRow } from '../../db/queries/run-state.ts';
import { database } from '../access/database.ts';
import { log } from '../access/log.ts';
import { DEFAULT_FIELD_ERRORS, type FieldErrors } from '../season/band-factors.ts';
import type { WeatherErrorRecord } from './band-weather-error.ts';
import { enqueue } from './queue.ts';
import type { RunJob } from './run-failure.ts';
import { DEFAULT_RUN_SETTINGS, type RunSettings } from './run-settings.ts';

export type BandJob = RunJob & { readonly step: 'plan' | 'part' | 'finish'; readonly part?: number };

/** Where a band stands: `run.band`. */
export interface BandState {
  readonly state: 'waiting' | 'running' | 'done' | 'failed' | 'cancelled';
  readonly members: number;
  readonly seed: number;
  /** 0–1 */
  readonly progress: number;
  readonly parts: number;
  readonly parts_done: number;
  readonly parcels_per_part: number;
  /** whether parcels keep a band of every week */
  readonly weeks: boolean;
  readonly field_errors: FieldErrors;
  readonly weather_error: WeatherErrorRecord | null;
  /** by day of the season input */
  readonly weather: { readonly deviation: readonly number[]; readonly persistence: readonly number[] } | null;
  readonly error: string | null;
  readonly requested_at: string;
  readonly seconds: number | null;
}

export type FinishedRun = Omit<RunRow, 'frozen'>;

/** Days walked in a part, parcels × members × days: some five seconds of a thread of its own, far below the half minute a piece may take. */
const PART_DAYS = 20_000_000;
/** Above so many parcels the band of a parcel is kept by month and season alone. */
const MOST_WEEKLY_PARCELS = 100_000;

/** Puts the band of a finished run in hand, in the transaction that finishes it; nothing where the run asked for none. */
export async function afterRun(tx: Tx, { districtId, runId }: RunJob, run: FinishedRun): Promise<void> {
  const key = { districtId, runId };
  const { band_members: members, band_seed: seed } = settingsOf(run);
  if (members < 1) return;
  const perPart = Math.max(1, Math.floor(PART_DAYS / (members * run.dayCount)));
  const waiting: BandState = {
    ...{ state: 'waiting', members, seed, progress: 0, parts_done: 0, error: null, seconds: null },
    parts: Math.ceil(run.parcelCount / perPart),
    parcels_per_part: perPart,
    weeks: run.parcelCount <= MOST_WEEKLY_PARCELS,
    field_errors: DEFAULT_FIELD_ERRORS,
    weather_error: null,
    weather: null,
    requested_at: new Date().toISOString(),
  };
  await deleteBand(tx, key);
  await saveBandState(tx, key, waiting);
  await enqueue('run-band', { ...key, step: 'plan' }, { singletonKey: `${runId}/plan`, tx });
}

export function settingsOf(run: Pick<FinishedRun, 'settings'>): RunSettings {
  return { ...DEFAULT_RUN_SETTINGS, ...(run.settings as Partial<RunSettings>) };
}

/** Marks a band as failed, so that none hangs; the run itself stands. */
export async function failBand(key: RunJob, reason: string): Promise<void> {
  log().warn({ run: key.runId, district: key.districtId, reason }, 'band failed');
  await database().inDistrict(key.districtId, (tx) => endBand(tx, key, { state: 'failed', error: reason }));
}

/** Calls the band of a run off. Answers whether there was one under way. */
export function cancelBand(tx: Tx, key: RunJob): Promise<boolean> {
  return endBand(tx, key, { state: 'cancelled', error: null });
}

async function endBand(tx: Tx, { districtId, runId }: RunJob, end: Pick<BandState, 'state' | 'error'>): Promise<boolean> {
  const key = { districtId, runId };
  const band = (await lockBandState(tx, key)) as BandState | null;
  if (!isGoing(band)) return false;
  await deleteBand(tx, key);
  await saveBandState(tx, key, { ...band, ...end });
  return true;
}

/** True while more will come of a band. */
export function isGoing(band: Pick<BandState, 'state'> | null): band is BandState {
  return band?.state === 'waiting' || band?.state === 'running';
}
