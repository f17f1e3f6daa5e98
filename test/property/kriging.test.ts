/** Ordinary kriging and semivariograms: what holds for any set of sites. */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { nearSites, placeSites } from '../../lib/weather/interpolation.ts';
import { krigingWeights, prepareKriging } from '../../lib/weather/kriging.ts';
import type { Site } from '../../lib/weather/variable.ts';
import { fitVariogram, semivariance, VARIOGRAM_KINDS, type VariogramModel } from '../../lib/weather/variogram.ts';
import { between } from '../support/between.ts';

const SEEDED = { seed: 20260402, numRuns: 300, endOnFailure: true };

function siteAt(code: string, longitude: number, latitude: number): Site {
  return { code, name: `Site ${code} (invented)`, longitude, latitude, elevation: 100, windHeight: 2 };
}

/** Sites at thousandths of a degree, so that no two are on one place. */
const sites = fc
  .uniqueArray(fc.tuple(fc.integer({ min: 0, max: 1000 }), fc.integer({ min: 0, max: 1000 })), {
    minLength: 2,
    maxLength: 14,
    selector: ([x, y]) => `${x}/${y}`,
  })
  .map((places) => places.map(([x, y], i) => siteAt(`S${i}`, -120 + x / 1000, 35 + y / 1000)));

const model: fc.Arbitrary<VariogramModel> = fc.record({
  kind: fc.constantFrom('linear', 'spherical', 'exponential'),
  nugget: between(0, 3),
  partialSill: between(0.1, 10),
  range: between(2_000, 200_000),
});

const place = fc.tuple(between(-120.2, -118.8), between(34.8, 36.2));

function kriged(given: readonly Site[], by: VariogramModel, at: readonly [number, number]) {
  const placed = placeSites(given);
  return krigingWeights(prepareKriging(placed, by), nearSites(at, placed, 8));
}

describe('ordinary kriging', () => {
  test('weights sum to 1, are at most eight, and the variance is not negative', () => {
    fc.assert(
      fc.property(sites, model, place, (given, by, at) => {
        const { weights, variance, solved } = kriged(given, by, at);
        expect(solved).toBe(true);
        expect(Math.abs(weights.reduce((sum, { weight }) => sum + weight, 0) - 1)).toBeLessThan(1e-8);
        expect(weights.length).toBe(Math.min(8, given.length));
        expect(variance).toBeGreaterThanOrEqual(0);
      }),
      SEEDED,
    );
  });
  test('is exact at a site, with variance 0', () => {
    fc.assert(
      fc.property(sites, model, fc.nat(), (given, by, pick) => {
        const own = given[pick % given.length];
        const { weights, variance } = kriged(given, by, [own.longitude, own.latitude]);
        expect(variance).toBe(0);
        const total = weights.filter(({ site }) => given[site].longitude === own.longitude).reduce((sum, { weight }) => sum + weight, 0);
        expect(total).toBe(1);
      }),
      SEEDED,
    );
  });
  test('does not depend on the order of the sites', () => {
    fc.assert(
      fc.property(sites, model, place, (given, by, at) => {
        const turned = given.toReversed();
        const here = new Map(kriged(given, by, at).weights.map(({ site, weight }) => [given[site].code, weight]));
        for (const { site, weight } of kriged(turned, by, at).weights) {
          expect(Math.abs(weight - (here.get(turned[site].code) ?? Number.NaN))).toBeLessThan(1e-8);
        }
      }),
      SEEDED,
    );
  });
  test('two sites on one place share the weight of one', () => {
    fc.assert(
      fc.property(sites, model, place, (given, by, at) => {
        fc.pre(given.length <= 7);
        const [first] = given;
        const doubled = [...given, siteAt('Z', first.longitude, first.latitude)];
        const [one, two] = [kriged(given, by, at), kriged(doubled, by, at)];
        const weightOf = ({ weights }: typeof one, site: number) => weights.find((each) => each.site === site)?.weight ?? Number.NaN;
        expect(two.solved).toBe(true);
        expect(Math.abs(weightOf(two, 0) - weightOf(two, given.length))).toBeLessThan(1e-12);
        expect(Math.abs(2 * weightOf(two, 0) - weightOf(one, 0))).toBeLessThan(1e-8);
        expect(Math.abs(two.variance - one.variance)).toBeLessThan(1e-8 * (1 + one.variance));
      }),
      SEEDED,
    );
  });
  test('nothing but nugget gives every site the same', () => {
    fc.assert(
      fc.property(sites, place, (given, at) => {
        const { weights } = kriged(given, { kind: 'nugget', nugget: 2, partialSill: 0, range: Number.NaN }, at);
        for (const { weight } of weights) expect(Math.abs(weight - 1 / weights.length)).toBeLessThan(1e-9);
      }),
      SEEDED,
    );
  });
  test('a system that cannot be solved falls to inverse distance and says so', () => {
    // all semivariances nought: every set of weights is as good as another
    const given = [siteAt('A', -120, 35), siteAt('B', -119.9, 35), siteAt('C', -119.8, 35.1)];
    const { weights, variance, solved } = kriged(given, { kind: 'nugget', nugget: 0, partialSill: 0, range: Number.NaN }, [-119.95, 35.02]);
    expect(solved).toBe(false);
    expect(variance).toBeNaN();
    expect(weights.every(({ weight }) => weight > 0)).toBe(true);
    expect(weights.reduce((sum, { weight }) => sum + weight, 0)).toBeCloseTo(1, 12);
  });
});

describe('semivariograms', () => {
  test('begin at nought, jump by the nugget, and never fall', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...VARIOGRAM_KINDS),
        between(0, 3),
        between(0, 9),
        between(1, 1e5),
        between(1, 1e6),
        (kind, nugget, partialSill, range, h) => {
          const any = { kind, nugget, partialSill, range };
          expect(semivariance(any, 0)).toBe(0);
          expect(semivariance(any, 1e-9)).toBeGreaterThanOrEqual(nugget);
          expect(semivariance(any, 1.1 * h)).toBeGreaterThanOrEqual(semivariance(any, h));
        },
      ),
      SEEDED,
    );
  });
  test('a fit finds the model its classes were drawn from', () => {
    fc.assert(
      fc.property(
        fc.constantFrom('spherical', 'exponential'),
        between(0, 2),
        between(1, 9),
        between(300, 1200),
        (kind, nugget, partialSill, range) => {
          const drawn: VariogramModel = { kind, nugget, partialSill, range };
          const classes = Array.from({ length: 15 }, (_, i) => {
            const distance = 100 * (i + 1);
            return { pairCount: 50 + 10 * i, distance, semivariance: semivariance(drawn, distance) };
          });
          const { model: found } = fitVariogram(classes, kind);
          expect(Math.abs(found.range / range - 1)).toBeLessThan(1e-3);
          expect(Math.abs(found.partialSill / partialSill - 1)).toBeLessThan(1e-3);
          expect(Math.abs(found.nugget - nugget)).toBeLessThan(1e-3 * (nugget + partialSill));
        },
      ),
      SEEDED,
    );
  });
});
