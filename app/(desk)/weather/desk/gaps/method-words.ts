/** Words and drawing of the ways in which a day of a record was got. */
import type { RecordMethod } from '../../../../../lib/http/contract/gaps.ts';

export interface MethodWords {
  readonly name: string;
  readonly help: string;
  /** share of the strip's height: what was observed stands full, what was filled lower, what was estimated lowest */
  readonly height: number;
}

/** In the order in which they are tried. */
export const METHODS: Readonly<Record<RecordMethod, MethodWords>> = {
  measured: { name: 'measured', help: 'as the source brought it', height: 1 },
  corrected: { name: 'corrected', help: 'changed at the quality desk', height: 1 },
  suspect: { name: 'in doubt', help: 'measured, with an open flag', height: 1 },
  neighbour: { name: 'neighbour', help: 'by regression on a neighbouring site', height: 0.7 },
  source: { name: 'other source', help: 'from another source, its mean difference taken off', height: 0.7 },
  'in-time': { name: 'between days', help: 'straight line over at most five days', height: 0.55 },
  normal: { name: 'normal', help: 'mean of the same days of other years', height: 0.55 },
  estimated: { name: 'estimated', help: 'the published estimate where nothing was measured', height: 0.35 },
  missing: { name: 'missing', help: 'nothing to go by: the site carries no weight that day', height: 0 },
};

export const METHOD_NAMES = Object.keys(METHODS) as RecordMethod[];

/** Days by method as a sentence. @example daysText({ measured: 200, neighbour: 1 }) // '200 days measured, 1 day neighbour' */
export function daysText(days: Readonly<Record<string, number>>): string {
  const said = METHOD_NAMES.filter((method) => (days[method] ?? 0) > 0);
  return said.map((method) => `${days[method]} ${days[method] === 1 ? 'day' : 'days'} ${METHODS[method].name}`).join(', ');
}
