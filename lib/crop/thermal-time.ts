/**
 * Thermal time: growing degree days, and stages whose ends they decide.
 *
 * Two published ways of counting a day differ on cool and hot days. Method 1 holds the mean of the day at the base; method 2 holds both extremes
 * between base and ceiling before the mean is taken. The season counts by method 2.
 */
import type { StageLengths } from './curve.ts';

/** Days at the end of the weather whose mean goes on when the weather ends before the stages do. Choice of ours. */
export const TAIL_DAYS = 30;

/** A tail slower than this [°C d per day] is no growth: the lengths in days go on instead. */
const LEAST_RATE = 0.1;

/**
 * Growing degree days of a day by the mean temperature (method 1).
 *
 *   GDD = max(0, (Tmax + Tmin) / 2 − Tbase)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param airTemperatureMax Tmax [°C]
 * @param airTemperatureMin Tmin [°C]
 * @param base Tbase [°C]
 * @returns [°C d]
 * @example degreeDaysOfMean(30, 6, 10) // 8
 * Source: McMaster & Wilhelm (1997), Agricultural and Forest Meteorology 87, 291–300, method 1 (recalled).
 */
export function degreeDaysOfMean(airTemperatureMax: number, airTemperatureMin: number, base: number): number {
  return Math.max(0, (airTemperatureMax + airTemperatureMin) / 2 - base);
}

/**
 * Growing degree days of a day by its extremes, each held between base and ceiling (method 2).
 *
 *   GDD = (Tmax' + Tmin') / 2 − Tbase, T' = T held in Tbase … Tceiling
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param airTemperatureMax Tmax [°C]
 * @param airTemperatureMin Tmin [°C]
 * @param base Tbase [°C]
 * @param ceiling upper temperature above which growth is no faster [°C]
 * @returns [°C d]
 * @example degreeDays(34, 6, 10, 30) // 10
 * Source: McMaster & Wilhelm (1997), Agricultural and Forest Meteorology 87, 291–300, method 2 (recalled).
 */
export function degreeDays(airTemperatureMax: number, airTemperatureMin: number, base: number, ceiling: number): number {
  const high = Math.min(ceiling, Math.max(base, airTemperatureMax));
  const low = Math.min(ceiling, Math.max(base, airTemperatureMin));
  return (high + low) / 2 - base;
}

/**
 * Running sums of degree days (method 2): `into[d]` is the sum over the days before `d`.
 *
 * Missing: a day without temperature counts as the day before it, the first one as 0.
 *
 * @param airTemperatureMax Tmax [day], °C
 * @param airTemperatureMin Tmin [day], °C
 * @param limits base and ceiling [°C]
 * @param into [day + 1], overwritten; °C d
 */
export function sumDegreeDays(
  airTemperatureMax: Float64Array,
  airTemperatureMin: Float64Array,
  limits: { readonly base: number; readonly ceiling: number },
  into: Float64Array,
): Float64Array {
  into[0] = 0;
  let last = 0;
  for (let d = 0; d < airTemperatureMax.length; d++) {
    const today = degreeDays(airTemperatureMax[d], airTemperatureMin[d], limits.base, limits.ceiling);
    if (!Number.isNaN(today)) last = today;
    into[d + 1] = into[d] + last;
  }
  return into;
}

/** Stages as sums of degree days [°C d]. */
type StageSums = StageLengths;

/**
 * Lengths of the stages of one cycle, from the degree days of the run.
 *
 * A stage ends with the day on which the sum of the stages so far is reached, counted from the first day of the cycle; so what a stage overshoots is
 * not lost. Two rules stand in where there is no weather: days before the run go by the lengths in days, each a day's share of its stage;
 * past the end of the run the mean of its last 30 days goes on, or, where that is no growth at all, the lengths in days.
 *
 * @param start first day of the cycle, offset from the first day of the run; may be negative
 * @param stages sums of the stages [°C d]
 * @param days lengths that stand in where no weather tells [d]
 * @param sums running sums of degree days, [day + 1], see `sumDegreeDays`
 * @returns whole days; a stage of sum 0 has length 0
 * @example thermalLengths(0, { initial: 10, development: 20, mid: 0, late: 0 }, { initial: 9, development: 9, mid: 9, late: 9 }, Float64Array.of(0, 10, 20, 30)) // { initial: 1, development: 2, mid: 0, late: 0 }
 * Source: McMaster & Wilhelm (1997) for the day; the rules at both ends are choices of ours.
 */
export function thermalLengths(start: number, stages: StageSums, days: StageLengths, sums: Float64Array): StageLengths {
  let from = start;
  let owed = 0;
  const next = (sum: number, length: number): number => {
    if (sum <= 0) return 0;
    const end = stageEnd(from, sum - owed, length, { sum, sums });
    owed = end.over;
    const taken = end.day - from;
    from = end.day;
    return taken;
  };
  const initial = next(stages.initial, days.initial);
  const development = next(stages.development, days.development);
  const mid = next(stages.mid, days.mid);
  return { initial, development, mid, late: next(stages.late, days.late) };
}

/** First day after a stage that needs `needed` degree days from `from` on, and by how much its last day went over. */
function stageEnd(
  from: number,
  needed: number,
  length: number,
  { sum, sums }: { sum: number; sums: Float64Array },
): { day: number; over: number } {
  const last = sums.length - 1;
  let left = needed;
  let day = from;
  if (day < 0) {
    const rate = length > 0 ? sum / length : Number.POSITIVE_INFINITY;
    const before = Math.ceil(left / rate - 1e-9);
    if (day + before <= 0) return { day: day + before, over: 0 };
    left += day * rate;
    day = 0;
  }
  if (day < last) {
    const target = sums[day] + left;
    if (sums[last] >= target) {
      let at = day + 1;
      while (sums[at] < target) at++;
      return { day: at, over: sums[at] - target };
    }
    left = target - sums[last];
    day = last;
  }
  return { day: day + Math.max(1, Math.ceil(left / tailRate(sums, sum / Math.max(1, length)))), over: 0 };
}

function tailRate(sums: Float64Array, ofDays: number): number {
  const last = sums.length - 1;
  const days = Math.min(TAIL_DAYS, last);
  const mean = days > 0 ? (sums[last] - sums[last - days]) / days : 0;
  return mean > LEAST_RATE ? mean : ofDays;
}
