import type { Caller } from '../../../lib/access/caller.ts';
import { NotFound } from '../../../lib/base/errors.ts';
import { answerMapDescription, mapValues } from '../../../lib/http/answers/map.ts';
import type { RunAnswer } from '../../../lib/http/contract/run.ts';
import {
  floatsOf,
  LISTED_VARIABLES,
  type ListedVariable,
  type ParcelListResult,
  parcelPage,
  SORT_KEYS,
} from '../../_components/parcel-list.ts';
import type { PeriodChoice } from '../../_components/period-choice.ts';
import { one, oneOf, type Query } from '../../_components/query.ts';

export const PAGE_SIZE = 100;

/** A run of an earlier version did not keep every variable: its column is blank. */
function nothingKept(error: unknown): Uint8Array {
  if (error instanceof NotFound) return new Uint8Array();
  throw error;
}

/** The page of the list that the address asks for. */
export async function loadParcelPage(ask: {
  caller: Caller;
  run: RunAnswer;
  choice: PeriodChoice;
  query: Query;
}): Promise<ParcelListResult> {
  const { caller, run, choice, query } = ask;
  const valuesOf = async (variable: ListedVariable) =>
    floatsOf(await mapValues(caller, run.id, { variable, period: choice.kind, index: choice.index }).catch(nothingKept));
  const [map, ...arrays] = await Promise.all([answerMapDescription(caller, run.id), ...LISTED_VARIABLES.map(valuesOf)]);
  return parcelPage({
    parcels: map.parcels,
    values: Object.fromEntries(LISTED_VARIABLES.map((variable, at) => [variable, arrays[at]])) as Record<ListedVariable, Float32Array>,
    search: one(query, 'search'),
    reach: one(query, 'reach'),
    own: caller.parcels,
    sort: oneOf(query, 'sort', SORT_KEYS, 'parcel'),
    descending: one(query, 'order') === 'down',
    page: Number(one(query, 'page') ?? 1) || 1,
    pageSize: PAGE_SIZE,
  });
}
