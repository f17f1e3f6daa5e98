/** Regression of one record on another, with the limits within which FAO-56 lets it stand in. */

export interface Regression {
  /** pairs of days with both values */
  readonly count: number;
  /** b of y = a + b x */
  readonly slope: number;
  /** a of y = a + b x */
  readonly intercept: number;
  /** r² */
  readonly rSquared: number;
  /** s_y,x = √[Σ(y − ŷ)² / (n − 2)], in the unit of y */
  readonly residualDeviation: number;
  readonly meanX: number;
  /** Σ(x − x̄)² */
  readonly squaresX: number;
}

/** Limits of an acceptable regression. Source: FAO-56 Annex 4. */
export const ACCEPTABLE = { rSquared: 0.7, slopeLow: 0.7, slopeHigh: 1.3 } as const;

/**
 * Least-squares line of y on x over the pairs that have both; pairs that `leaveOut` names are not counted.
 *   b = Σ(x − x̄)(y − ȳ) / Σ(x − x̄)²,  a = ȳ − b x̄,  r² = [Σ(x − x̄)(y − ȳ)]² / [Σ(x − x̄)² Σ(y − ȳ)²]
 *
 * @returns null for fewer than 3 pairs or x without spread
 * @example regressionOf(Float64Array.of(1, 2, 3, 4), Float64Array.of(2, 4, 5, 9)).slope // 2.2
 * Source: FAO-56 Annex 4, regression of incomplete on complete records.
 */
export function regressionOf(x: Float64Array, y: Float64Array, leaveOut?: (index: number) => boolean): Regression | null {
  let [count, sumX, sumY] = [0, 0, 0];
  const used = (i: number) => !Number.isNaN(x[i]) && !Number.isNaN(y[i]) && !leaveOut?.(i);
  for (let i = 0; i < x.length; i++) {
    if (!used(i)) continue;
    count++;
    sumX += x[i];
    sumY += y[i];
  }
  if (count < 3) return null;
  const [meanX, meanY] = [sumX / count, sumY / count];
  let [squaresX, squaresY, products] = [0, 0, 0];
  for (let i = 0; i < x.length; i++) {
    if (!used(i)) continue;
    const [dx, dy] = [x[i] - meanX, y[i] - meanY];
    squaresX += dx * dx;
    squaresY += dy * dy;
    products += dx * dy;
  }
  if (!(squaresX > 0)) return null;
  const slope = products / squaresX;
  const residual = Math.max(0, squaresY - slope * products);
  return {
    ...{ count, slope, intercept: meanY - slope * meanX, meanX, squaresX },
    rSquared: squaresY > 0 ? (products * products) / (squaresX * squaresY) : 1,
    residualDeviation: Math.sqrt(residual / (count - 2)),
  };
}

/** True within r² ≥ 0.7 and 0.7 ≤ b ≤ 1.3. Source: FAO-56 Annex 4. */
export function isAcceptable({ rSquared, slope }: Regression): boolean {
  return rSquared >= ACCEPTABLE.rSquared && slope >= ACCEPTABLE.slopeLow && slope <= ACCEPTABLE.slopeHigh;
}

/** What the line gives at x. */
export function predicted({ intercept, slope }: Regression, x: number): number {
  return intercept + slope * x;
}

/**
 * Standard error of a single new value at x.
 *   s = s_y,x √[1 + 1/n + (x − x̄)² / Σ(x − x̄)²]
 *
 * Source: any text on linear regression, e.g. Draper and Smith 1998, Applied Regression Analysis, section 1.4 (recalled).
 */
export function predictionError({ residualDeviation, count, meanX, squaresX }: Regression, x: number): number {
  return residualDeviation * Math.sqrt(1 + 1 / count + ((x - meanX) * (x - meanX)) / squaresX);
}
