import type { Caller } from '../../../lib/access/caller.ts';
import { answerParcelSeason, answerWorking } from '../../../lib/http/answers/parcel-season.ts';
import { answerRunParcels } from '../../../lib/http/answers/run-parcels.ts';
import type { ParcelDay, RunAnswer, WorkingAnswer } from '../../../lib/http/contract/run.ts';

export type Equation = WorkingAnswer['steps'][number];

export interface WorkedEquations {
  readonly parcel: string;
  readonly dates: readonly string[];
  readonly equations: readonly Equation[];
}

/** Every different equation on the way to the figures of the run's first parcel: in mid-season, on its wettest day and on the day of its greatest irrigation. */
export async function loadEquations(caller: Caller, run: RunAnswer): Promise<WorkedEquations | null> {
  const { items } = await answerRunParcels(caller, run.id, { period: 'season', limit: 1 });
  if (items.length === 0) return null;
  const { parcel, days } = await answerParcelSeason(caller, run.id, items[0].parcel);
  const dates = tellingDays(days);
  const workings = [];
  for (const date of dates) workings.push(await answerWorking(caller, run.id, parcel, date));
  return { parcel, dates, equations: differentSteps(workings.flatMap((working) => working.steps)) };
}

/** Middle, wettest and most irrigated day, each once. */
function tellingDays(days: readonly ParcelDay[]): string[] {
  const most = (pick: (day: ParcelDay) => number | null) => days.reduce((a, b) => ((pick(b) ?? -1) > (pick(a) ?? -1) ? b : a));
  const picked = [days[Math.floor(days.length / 2)], most((day) => day.precipitation_mm), most((day) => day.net_requirement_mm)];
  return [...new Set(picked.map((day) => day.date))];
}

/** Steps that differ in symbol, equation or source; the first of each is kept. */
export function differentSteps(steps: readonly Equation[]): Equation[] {
  const seen = new Map<string, Equation>();
  for (const step of steps) {
    const key = [step.part, step.symbol, step.expression, step.source].join('|');
    if (!seen.has(key)) seen.set(key, step);
  }
  return [...seen.values()];
}
