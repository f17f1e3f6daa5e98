/** Decisions as they are stored, as layers that the numeric rooms lay over observations. */
import type { CorrectionRow } from '../../db/queries/quality.ts';
import { dayNumber } from '../base/civil-date.ts';
import { nanFromNull } from '../base/missing.ts';
import type { Correction } from '../weather/quality/correction.ts';
import type { WeatherVariable } from '../weather/variable.ts';

/** What a layer needs of a stored decision. */
export type StoredCorrection = Pick<CorrectionRow, 'sourceId' | 'ordinal' | 'variable' | 'fromDay' | 'toDay' | 'act' | 'amount' | 'values'>;

/**
 * @param startDate first day of the observations the layers are for
 * @param siteIndex place of a site in them; undefined leaves its decisions out
 */
export function correctionsOver(
  rows: readonly StoredCorrection[],
  startDate: string,
  siteIndex: (key: { sourceId: number; ordinal: number }) => number | undefined,
): Correction[] {
  const first = dayNumber(startDate);
  return rows.flatMap((row): Correction[] => {
    const site = siteIndex(row);
    if (site === undefined) return [];
    const values = row.values ? new Map(Object.entries(row.values).map(([date, value]) => [dayNumber(date) - first, value])) : undefined;
    const days = { firstDay: dayNumber(row.fromDay) - first, lastDay: dayNumber(row.toDay) - first };
    return [{ site, variable: row.variable as WeatherVariable, ...days, act: row.act, amount: nanFromNull(row.amount), values }];
  });
}
