import type { Caller } from '../../../../../../lib/access/caller.ts';
import { isIsoDate } from '../../../../../../lib/base/civil-date.ts';
import { answerWorking } from '../../../../../../lib/http/answers/parcel-season.ts';
import type { RunAnswer, WorkingAnswer } from '../../../../../../lib/http/contract/run.ts';
import { orNotFound } from '../../../../../_components/or-not-found.ts';

/** The working of a parcel's day, or null for a date outside the run. */
export async function loadWorking(ask: { caller: Caller; run: RunAnswer; parcel: string; date: string }): Promise<WorkingAnswer | null> {
  const { caller, run, parcel, date } = ask;
  if (!isIsoDate(date) || date < run.start_date || date > run.end_date) return null;
  return orNotFound(answerWorking(caller, run.id, parcel, date));
}
