/**
 * Regression of one site's daily values on another's, by which gaps are completed.
 *
 * Source: FAO-56 Annex 4, "Statistical analysis of weather data sets", completing of data by regression on a nearby station and the limits within which
 * two records count as alike: r² ≥ 0.7 and 0.7 ≤ b ≤ 1.3. The Annex asks for a common period of sufficient length; how many days, and from when, are
 * the product's own: at least 30 common days within 60 days of the gap, so that a regression belongs to its time of the year.
 */

import { ACCEPTABLE, regressionOf } from './quality/regression.ts';

/** Limits within which a neighbour may complete a record. */
export const REGRESSION_LIMITS = {
  leastR2: ACCEPTABLE.rSquared,
  leastSlope: ACCEPTABLE.slopeLow,
  greatestSlope: ACCEPTABLE.slopeHigh,
  leastDays: 30,
  /** days on either side of the gap */
  reach: 60,
} as const;

/** y = a + b x over the common days. */
export interface Regression {
  /** common days */
  readonly n: number;
  /** b; NaN where x does not vary */
  readonly slope: number;
  /** a, in the unit of the values */
  readonly intercept: number;
  /** r² */
  readonly r2: number;
}

/**
 * Least squares of y on x over the days on which both have a value.
 *
 *   b = Σ(x − x̄)(y − ȳ) / Σ(x − x̄)², a = ȳ − b x̄, r² = [Σ(x − x̄)(y − ȳ)]² / [Σ(x − x̄)² Σ(y − ȳ)²]
 *
 * @param x of the neighbour, [day]
 * @param y of the site, [day], as long as x
 * @param spans days looked at, as [first, end) pairs that may reach beyond the record
 * @returns NaN figures for fewer than 3 common days, or where the neighbour does not vary
 */
export function regression(x: ArrayLike<number>, y: ArrayLike<number>, spans: readonly (readonly [number, number])[]): Regression {
  const [xs, ys]: [number[], number[]] = [[], []];
  eachCommon(x, y, spans, (a, b) => {
    xs.push(a);
    ys.push(b);
  });
  const line = regressionOf(Float64Array.from(xs), Float64Array.from(ys));
  if (!line) return { n: xs.length, slope: Number.NaN, intercept: Number.NaN, r2: Number.NaN };
  return { n: line.count, slope: line.slope, intercept: line.intercept, r2: line.rSquared };
}

/** Whether the regression lies within `REGRESSION_LIMITS`. */
export function isAccepted({ n, slope, r2 }: Regression): boolean {
  const { leastDays, leastR2, leastSlope, greatestSlope } = REGRESSION_LIMITS;
  return n >= leastDays && r2 >= leastR2 && slope >= leastSlope && slope <= greatestSlope;
}

/** Why a regression is not accepted, in words; null when it is. */
export function refusalOf({ n, slope, r2 }: Regression): string | null {
  const { leastDays, leastR2, leastSlope, greatestSlope } = REGRESSION_LIMITS;
  if (n < leastDays) return `${n} common days, at least ${leastDays} are needed`;
  if (!(r2 >= leastR2)) return `r² ${r2.toFixed(2)} below ${leastR2}`;
  if (slope >= leastSlope && slope <= greatestSlope) return null;
  return `slope ${slope.toFixed(2)} outside ${leastSlope} to ${greatestSlope}`;
}

/** Sums over the common days: what a mean difference or a ratio is made of. */
export function commonSums(x: ArrayLike<number>, y: ArrayLike<number>, spans: readonly (readonly [number, number])[]) {
  let [n, sumX, sumY] = [0, 0, 0];
  eachCommon(x, y, spans, (a, b) => {
    n++;
    sumX += a;
    sumY += b;
  });
  return { n, sumX, sumY };
}

/** Mean length of a civil year [d]: the same day of another year, to within a day. */
const YEAR = 365.25;

/** Days around a gap in its own year; and the same days in every year of the record, for where the first are too few. */
export function spansAround(start: number, end: number, dayCount: number): { own: [number, number][]; everyYear: [number, number][] } {
  const { reach } = REGRESSION_LIMITS;
  const own: [number, number] = [start - reach, end + reach];
  const everyYear: [number, number][] = [];
  let last = 0;
  for (let year = -Math.ceil(own[1] / YEAR); own[0] + year * YEAR < dayCount; year++) {
    const shift = Math.round(year * YEAR);
    const span: [number, number] = [Math.max(last, own[0] + shift), Math.min(dayCount, own[1] + shift)];
    if (span[1] <= span[0]) continue;
    everyYear.push(span);
    last = span[1];
  }
  return { own: [own], everyYear };
}

function eachCommon(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  spans: readonly (readonly [number, number])[],
  visit: (x: number, y: number) => void,
): void {
  for (const [first, end] of spans) {
    for (let day = Math.max(0, first); day < Math.min(end, x.length); day++) {
      if (!Number.isNaN(x[day]) && !Number.isNaN(y[day])) visit(x[day], y[day]);
    }
  }
}
