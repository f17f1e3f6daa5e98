/**
 * The crop through its season: growth stages, basal coefficient, height, root depth, and the cycles of a crop that is cut.
 *
 * Days are offsets from the run's first day; a planting may begin before it (negative offset) and end after the last day.
 */

import type { ShortCoefficient } from './surface-coefficient.ts';

/** Lengths of the growth stages [d]. */
export interface StageLengths {
  readonly initial: number;
  readonly development: number;
  readonly mid: number;
  readonly late: number;
}

/** Coefficients that anchor the curve [1], to multiply with short reference ET. */
export interface StageCoefficients {
  readonly initial: ShortCoefficient;
  readonly mid: ShortCoefficient;
  readonly end: ShortCoefficient;
}

/** One run through the stages: from planting or a cut to harvest or the next cut. `end` is the first day that is no longer part of it. */
export interface Cycle {
  readonly start: number;
  readonly end: number;
  readonly lengths: StageLengths;
}

export type Stage = 'initial' | 'development' | 'mid' | 'late';

/** Total length of the stages [d]. @example totalLength({ initial: 25, development: 25, mid: 30, late: 20 }) // 100 */
export function totalLength(lengths: StageLengths): number {
  return lengths.initial + lengths.development + lengths.mid + lengths.late;
}

/**
 * Stage of a day of the cycle; days past the late stage stay in it.
 *
 * @param lengths stage lengths [d]
 * @param day day of the cycle, 1 on the first
 * @example stageOf({ initial: 25, development: 25, mid: 30, late: 20 }, 26) // 'development'
 * Source: FAO-56 chapter 6, definition of the stages.
 */
export function stageOf(lengths: StageLengths, day: number): Stage {
  if (day <= lengths.initial) return 'initial';
  if (day <= lengths.initial + lengths.development) return 'development';
  return day <= lengths.initial + lengths.development + lengths.mid ? 'mid' : 'late';
}

/**
 * Progress of a crop through its development stage: 0 in the initial stage, 1 from the mid stage on.
 *
 * @param lengths stage lengths [d]
 * @param day day of the cycle, 1 on the first
 * @returns 0 … 1
 * @example developmentProgress({ initial: 25, development: 25, mid: 30, late: 20 }, 40) // 0.6
 * Source: FAO-56 Eq. 66, the fraction (i − Σ Lprev) / Lstage.
 */
export function developmentProgress(lengths: StageLengths, day: number): number {
  if (day <= lengths.initial) return 0;
  if (day >= lengths.initial + lengths.development) return 1;
  return (day - lengths.initial) / lengths.development;
}

/**
 * Crop coefficient of a day: constant in the initial and mid stages, linear between them and to the end.
 *
 *   Kc i = Kc prev + [(i − Σ Lprev) / Lstage] (Kc next − Kc prev)
 *
 * A crop that stands on past its late stage keeps the end value. Missing: NaN in a coefficient gives NaN where it is used.
 *
 * @param lengths stage lengths [d]
 * @param coefficients initial, mid and end [1]
 * @param day day of the cycle i, 1 on the first
 * @returns [1]
 * @example stageCoefficient({ initial: 25, development: 25, mid: 30, late: 20 }, { initial: 0.2, mid: 1.2, end: 0.4 }, 50) // 1.2
 * Source: FAO-56 Eq. 66.
 */
export function stageCoefficient(lengths: StageLengths, coefficients: StageCoefficients, day: number): number {
  if (day <= lengths.initial) return coefficients.initial;
  const toMid = lengths.initial + lengths.development;
  if (day < toMid)
    return coefficients.initial + ((day - lengths.initial) / lengths.development) * (coefficients.mid - coefficients.initial);
  const toLate = toMid + lengths.mid;
  if (day <= toLate) return coefficients.mid;
  if (day >= toLate + lengths.late) return coefficients.end;
  return coefficients.mid + ((day - toLate) / lengths.late) * (coefficients.end - coefficients.mid);
}

/**
 * Plant height of a day, growing with the basal coefficient and never falling within a cycle.
 *
 *   h = hmax · min(1, Kcb / Kcb mid) to the end of development, hmax from then on
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param basal Kcb of the day [1]
 * @param basalMid adjusted Kcb mid [1]
 * @param heightMax hmax [m]
 * @param progress `developmentProgress` of the day, 0 … 1
 * @returns [m]
 * @example plantHeight(0.3, 1.2, 2, 0.1) // 0.5
 * Source: FAO-56 Annex 8 (height in the spreadsheet).
 */
export function plantHeight(basal: number, basalMid: number, heightMax: number, progress: number): number {
  if (progress >= 1 || basal >= basalMid) return heightMax;
  return (heightMax * basal) / basalMid;
}

/**
 * Root depth of a day of an annual crop, growing with the basal coefficient and never falling within a cycle.
 *
 *   Zr = Zmin + (Zmax − Zmin) (Kcb − Kcb ini) / (Kcb mid − Kcb ini)
 *
 * The ratio equals the progress of the development stage, because the basal coefficient is linear in it.
 * Missing: NaN in any input gives NaN out.
 *
 * @param rootDepthMin Zmin [m]
 * @param rootDepthMax Zmax [m]
 * @param progress `developmentProgress` of the day, 0 … 1
 * @returns [m]
 * @example growingRootDepth(0.2, 0.8, 0.5) // 0.5
 * Source: FAO-56 Annex 8, Eq. 8-1.
 */
export function growingRootDepth(rootDepthMin: number, rootDepthMax: number, progress: number): number {
  return rootDepthMin + (rootDepthMax - rootDepthMin) * progress;
}

interface CycleInput {
  /** planting or green-up, day offset */
  readonly start: number;
  /** harvest, first day without the crop; Infinity when not given */
  readonly harvest: number;
  readonly lengths: StageLengths;
  /** stages after a cut; the first cycle's where null */
  readonly later: StageLengths | null;
  /** cut days, ascending; a cut day is the first of the next cycle */
  readonly cuts: readonly number[];
  /** true when a new cycle follows of itself at the end of the last (cut forage without cut dates) */
  readonly repeats: boolean;
  /** first day after the run; open-ended crops stop there */
  readonly runEnd: number;
  /** lengths of a cycle that the weather decides, from its place (0 the first) and first day; in place of `lengths` and `later` */
  readonly lengthsOf?: (cycle: number, start: number) => StageLengths;
}

/**
 * The cycles of a planting, in order.
 *
 * Without cuts: one cycle, ended by the harvest or, where none is given, by the total of the stages. A harvest later than the stages keeps the
 * crop standing at its end values. With cut days: a new cycle from each cut to the next, the last to the harvest or the end of the run. A cut
 * forage without cut days is cut whenever its stages are through.
 *
 * @returns cycles with ascending, touching day ranges
 * Source: FAO-56 chapter 6, forage crops and Fig. 35.
 */
export function cyclesOf(input: CycleInput): Cycle[] {
  if (input.cuts.length > 0) return cyclesBetweenCuts(input);
  if (input.repeats) return repeatedCycles(input);
  const lengths = lengthsOfCycle(input, 0, input.start);
  const end = Number.isFinite(input.harvest) ? input.harvest : input.start + totalLength(lengths);
  return [{ start: input.start, end, lengths }];
}

function lengthsOfCycle(input: CycleInput, cycle: number, start: number): StageLengths {
  if (input.lengthsOf) return input.lengthsOf(cycle, start);
  return cycle === 0 ? input.lengths : (input.later ?? input.lengths);
}

function cyclesBetweenCuts(input: CycleInput): Cycle[] {
  const last = Number.isFinite(input.harvest) ? input.harvest : input.runEnd;
  const edges = [input.start, ...input.cuts.filter((cut) => cut > input.start && cut < last)];
  return edges.map((start, k) => ({
    start,
    end: edges[k + 1] ?? last,
    lengths: lengthsOfCycle(input, k, start),
  }));
}

function repeatedCycles(input: CycleInput): Cycle[] {
  const last = Number.isFinite(input.harvest) ? input.harvest : input.runEnd;
  const cycles: Cycle[] = [];
  let start = input.start;
  while (start < last) {
    const lengths = lengthsOfCycle(input, cycles.length, start);
    const next = start + Math.max(1, totalLength(lengths));
    cycles.push({ start, end: Math.min(last, next), lengths });
    start = next;
  }
  return cycles;
}
