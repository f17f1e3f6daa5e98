/**
 * The published parts of the quality desk: regression and ellipse of FAO-56 Annex 4, clear-sky curve of Annex 3 and of ASCE-EWRI 2005, limits
 * of Annex 5, and the adjustment of Annex 6. Hand calculation unless a row says otherwise.
 */
import { describe, expect, it } from 'vitest';
import { airOverReference } from '../../lib/energy/quality-aridity.ts';
import { upperQuartile } from '../../lib/energy/quality-pyranometer.ts';
import { clearSkyOfDay } from '../../lib/energy/quality-sky.ts';
import { ELLIPSE_DEVIATE, homogeneityOf } from '../../lib/weather/quality/homogeneity.ts';
import { ACCEPTABLE, isAcceptable, predictionError, type Regression, regressionOf } from '../../lib/weather/quality/regression.ts';
import { LOW, STILL } from '../../lib/weather/quality/wind.ts';

const X = Float64Array.of(1, 2, 3, 4);
const Y = Float64Array.of(2, 4, 5, 9);

describe('regression of FAO-56 Annex 4', () => {
  it('has the slope, intercept, r² and residual deviation of a hand calculation', () => {
    // Sxx 5, Sxy 11, Syy 26: b = 11/5, a = 5 − 2.2 × 2.5, r² = 121/130, s² = (26 − 2.2 × 11)/2
    const line = regressionOf(X, Y) as Regression;
    expect(line.slope).toBeCloseTo(2.2, 12);
    expect(line.intercept).toBeCloseTo(-0.5, 12);
    expect(line.rSquared).toBeCloseTo(121 / 130, 12);
    expect(line.residualDeviation).toBeCloseTo(Math.sqrt(0.9), 12);
    // s √(1 + 1/4 + 3.5²/5); R 4 predict(lm) gives the same 1.824829
    expect(predictionError(line, 6)).toBeCloseTo(1.824829, 6);
  });

  it('passes over days that either record lacks', () => {
    const x = Float64Array.of(1, 7, 2, 3, Number.NaN, 4);
    const y = Float64Array.of(2, Number.NaN, 4, 5, 8, 9);
    expect(regressionOf(x, y)).toEqual(regressionOf(X, Y));
    expect(regressionOf(Float64Array.of(1, 2), Float64Array.of(1, 2))).toBeNull();
    expect(regressionOf(Float64Array.of(3, 3, 3), Float64Array.of(1, 2, 3))).toBeNull();
  });

  it.each([
    [0.7, 0.7, true],
    [0.7, 1.3, true],
    [0.69, 1, false],
    [0.9, 0.69, false],
    [0.9, 1.31, false],
  ])('with r² %d and b %d is accepted: %s', (rSquared, slope, accepted) => {
    expect(isAcceptable({ rSquared, slope } as Regression)).toBe(accepted);
    expect(ACCEPTABLE).toEqual({ rSquared: 0.7, slopeLow: 0.7, slopeHigh: 1.3 });
  });
});

describe('ellipse of cumulative residuals, FAO-56 Annex 4', () => {
  it('has the printed deviates', () => {
    expect(ELLIPSE_DEVIATE).toEqual({ 75: 0.67, 80: 0.84, 85: 1.04, 90: 1.28, 95: 1.64 });
  });

  it('leaves a homogeneous pair alone', () => {
    // residuals 0.3, 0.1, −1.1, 0.7; E 0.3, 0.4, −0.7; s_y √(1 − r²) = 0.774597; β = 4 × 0.84 × 0.774597/√3
    const found = homogeneityOf(X, Y);
    expect(found).toMatchObject({ homogeneous: true, breakAfter: 2, halfLength: 2 });
    expect(found?.halfHeight).toBeCloseTo(1.502639, 5);
    expect(found?.cumulative).toBeCloseTo(-0.7, 10);
    expect(found?.bound).toBeCloseTo(1.502639 * Math.sqrt(0.75), 5);
  });

  it('finds the break of a record whose level jumps after the fifth value', () => {
    const x = Float64Array.of(10.2, 11.1, 9.4, 10.8, 12, 9.9, 10.5, 11.6, 10, 11.3);
    const y = Float64Array.of(10.28, 10.79, 9.61, 10.72, 11.7, 12.01, 12.25, 13.59, 11.9, 13.17);
    const found = homogeneityOf(x, y);
    // R 4.2.2: cumsum(resid(lm(y ~ x))) is −4.991982 at the fifth value, the ellipse by its formula 2.969783 there
    expect(found).toMatchObject({ homogeneous: false, breakAfter: 4 });
    expect(found?.cumulative).toBeCloseTo(-4.991982, 5);
    expect(found?.bound).toBeCloseTo(2.969783, 5);
  });
});

describe('clear-sky curve', () => {
  // FAO-56 Annex 3 form with the coefficients of ASCE-EWRI 2005 (recalled): KB + KD, recomputed by independent calculation
  it.each([
    [50.8, 187, 100, 1.409, 0.7284],
    [40.41, 183, 1462.4, 1.27, 0.7586],
  ])('at latitude %d on day %d, %d m, ea %d kPa lets %d through', (latitude, dayOfYear, elevation, vapourPressure, share) => {
    const input = { extraterrestrial: 1, latitude, dayOfYear, elevation };
    expect(Math.abs(clearSkyOfDay({ ...input, vapourPressure }) - share)).toBeLessThan(0.0001);
    // FAO-56 Eq. 37 where there is no humidity
    expect(clearSkyOfDay({ ...input, vapourPressure: Number.NaN })).toBeCloseTo(0.75 + 2e-5 * elevation, 12);
  });

  it('takes the quartile between the two nearest values', () => {
    // 0.75 × 3 = 2.25: a quarter of the way from the third to the fourth; R 4 quantile type 7 gives the same
    expect(upperQuartile([4, 1, 2, 8])).toBeCloseTo(5, 12);
  });
});

describe('limits of FAO-56 Annex 5 and ASCE-EWRI 2005 Appendix D', () => {
  it('for still and low wind', () => expect([STILL, LOW]).toEqual([0.5, 1]));
});

describe('adjustment of FAO-56 Annex 6', () => {
  it.each([
    // ΔT 10, Ko 2: half of the excess is 4
    [{ airTemperatureMax: 36, airTemperatureMin: 16, dewPoint: 6 }, 2, [32, 12, 10]],
    // a reference station nearby, Ko 0: half of 10
    [{ airTemperatureMax: 36, airTemperatureMin: 16, dewPoint: 6 }, 0, [31, 11, 11]],
    // ΔT 1.5 is within Ko 2
    [{ airTemperatureMax: 24, airTemperatureMin: 11, dewPoint: 9.5 }, 2, [24, 11, 9.5]],
  ])('of %o with Ko %d', (day, ko, expected) => {
    const { airTemperatureMax, airTemperatureMin, dewPoint } = airOverReference(day, ko);
    expect([airTemperatureMax, airTemperatureMin, dewPoint]).toEqual(expected);
  });
});
