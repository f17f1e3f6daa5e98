/** After an import is applied or undone: the seasons it bears on are computed anew. */
import type { Tx } from '../../db/connect.ts';
import type { ImportKey } from '../../db/queries/import-before.ts';
import { listComputableSeasons } from '../../db/queries/import-context.ts';
import { changeImport, findImport, type ImportState } from '../../db/queries/import-row.ts';
import { listSeasonsAhead, listSeasonsOnRecords } from '../../db/queries/stale-runs.ts';
import { database } from '../access/database.ts';
import { addDays } from '../base/civil-date.ts';
import { TillwaterError } from '../base/errors.ts';
import type { Touched } from './import-counts.ts';
import { requestRun } from './runs.ts';

const LONGEST_MONTH = 31;

/**
 * Codes of the seasons that an import bears on and that have parcels, plantings and weather. Any weather bears on a season whose run has days to come: it may be
 * of these days, or of the years that their normals rest on.
 *
 * @param since first day on which what it brought stands: seasons that ended before keep the run they have
 */
export async function seasonsTouched(tx: Tx, districtId: string, touched: Touched, since: string | null = null): Promise<string[]> {
  const seasons = (await listComputableSeasons(tx, districtId)).filter((season) => since === null || season.endDate >= since);
  const inSeason = (month: string, season: { startDate: string; endDate: string }) =>
    month <= season.endDate && addDays(month, LONGEST_MONTH) > season.startDate;
  const ahead = touched.months.length > 0 ? await listSeasonsAhead(tx, districtId) : [];
  const onRecords = touched.records ? await listSeasonsOnRecords(tx, districtId, touched.records) : [];
  return seasons
    .filter(
      (season) =>
        touched.everything ||
        touched.seasons.includes(season.code) ||
        touched.months.some((month) => inSeason(month, season)) ||
        ahead.includes(season.code) ||
        onRecords.includes(season.code),
    )
    .map((season) => season.code);
}

interface Outcome {
  readonly seasons?: string[];
  readonly runs?: string[] | null;
}

const STAGE_OF: Partial<Record<ImportState, 'applied' | 'undone'>> = { applied: 'applied', undone: 'undone' };

/**
 * Asks for the runs once: the import's row remembers that they were asked for, so that a job done twice asks once.
 * With the option `recompute: false` none is asked for.
 */
export async function startImportRuns(own: ImportKey): Promise<void> {
  const row = await database().inDistrict(own.districtId, (tx) => findImport(tx, own.districtId, own.importId));
  const stage = row ? STAGE_OF[row.state] : undefined;
  if (!row || !stage) return;
  const understood = row.understood as Record<string, unknown>;
  const outcome = understood[stage] as Outcome | undefined;
  if (!outcome || outcome.runs !== null) return;
  const wanted = (row.options as { recompute?: unknown }).recompute !== false;
  const seasons = wanted ? await stillComputable(own.districtId, outcome.seasons ?? []) : [];
  const asked = await askForRuns(own.districtId, seasons);
  await database().inDistrict(own.districtId, (tx) =>
    changeImport(tx, { ...own, from: [row.state] }, { understood: { ...understood, [stage]: { ...outcome, ...asked } } }),
  );
}

async function stillComputable(districtId: string, seasons: readonly string[]): Promise<string[]> {
  const now = await database().inDistrict(districtId, (tx) => listComputableSeasons(tx, districtId));
  return now.map((season) => season.code).filter((code) => seasons.includes(code));
}

async function askForRuns(districtId: string, seasons: readonly string[]): Promise<{ runs: string[]; runs_refused?: string[] }> {
  const runs: string[] = [];
  const refused: string[] = [];
  for (const season of seasons) {
    try {
      runs.push(await requestRun({ districtId, userId: null }, { season, likeStanding: true }));
    } catch (error) {
      if (!(error instanceof TillwaterError)) throw error;
      refused.push(`${season}: ${error.message}`);
    }
  }
  return refused.length > 0 ? { runs, runs_refused: refused } : { runs };
}
