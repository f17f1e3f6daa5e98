/**
 * Weights from sites to parcels: what holds for any set of sites, and one published worked case.
 */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import { lapseCorrection } from '../../lib/season/mix.ts';
import type { ParcelInput } from '../../lib/season/types.ts';
import { inverseDistanceWeights, nearestWeights, nearSites, placeSites } from '../../lib/weather/interpolation.ts';
import type { Site, SiteWeight } from '../../lib/weather/variable.ts';
import { between } from '../support/between.ts';

const SEEDED = { seed: 20260401, numRuns: 400 };

function siteAt(code: string, longitude: number, latitude: number): Site {
  return { code, name: `Site ${code} (invented)`, longitude, latitude, elevation: 100, windHeight: 2 };
}

const sitesNearby = fc
  .array(fc.tuple(between(-120, -118), between(35, 37)), { minLength: 1, maxLength: 14 })
  .map((places) => places.map(([longitude, latitude], i) => siteAt(`S${i}`, longitude, latitude)));

const asked = fc.record({
  longitude: between(-120, -118),
  latitude: between(35, 37),
  sites: sitesNearby,
  power: between(0.2, 6),
  maximumSites: fc.integer({ min: 1, max: 8 }),
});

/** Great-circle distance [m] on the sphere of R = 6 371 008.8 m. Source: Sinnott (1984), Sky and Telescope 68, 159. */
function haversine(from: readonly [number, number], to: readonly [number, number]): number {
  const [lambda, phi, lambda2, phi2] = [...from, ...to].map((degrees) => (degrees * Math.PI) / 180);
  const a = Math.sin((phi2 - phi) / 2) ** 2 + Math.cos(phi) * Math.cos(phi2) * Math.sin((lambda2 - lambda) / 2) ** 2;
  return 2 * 6371008.8 * Math.asin(Math.sqrt(a));
}

function total(weights: readonly SiteWeight[]): number {
  return weights.reduce((sum, { weight }) => sum + weight, 0);
}

function byCode(weights: readonly SiteWeight[], sites: readonly Site[]): Map<string, number> {
  return new Map(weights.map(({ site, weight }) => [sites[site].code, weight]));
}

describe('inverse distance', () => {
  test('weights are not negative, sum to 1, and are at most as many as asked for', () => {
    fc.assert(
      fc.property(asked, (input) => {
        const weights = inverseDistanceWeights(input);
        expect(weights.every(({ weight }) => weight >= 0)).toBe(true);
        expect(Math.abs(total(weights) - 1)).toBeLessThan(1e-12);
        expect(weights.length).toBeLessThanOrEqual(Math.min(input.maximumSites, input.sites.length));
      }),
      SEEDED,
    );
  });
  test('a constant field comes back as that constant', () => {
    fc.assert(
      fc.property(asked, between(-40, 50), (input, value) => {
        const field = inverseDistanceWeights(input).reduce((sum, { weight }) => sum + weight * value, 0);
        expect(Math.abs(field - value)).toBeLessThan(1e-10);
      }),
      SEEDED,
    );
  });
  test('the order of the sites does not matter', () => {
    fc.assert(
      fc.property(asked, fc.infiniteStream(fc.nat()), (input, keys) => {
        const order = input.sites.map((site) => ({ site, key: keys.next().value as number }));
        const shuffled = order.toSorted((a, b) => a.key - b.key).map(({ site }) => site);
        const here = byCode(inverseDistanceWeights(input), input.sites);
        const there = byCode(inverseDistanceWeights({ ...input, sites: shuffled }), shuffled);
        expect(there).toEqual(here);
      }),
      SEEDED,
    );
  });
  test('a parcel on a site has that site alone', () => {
    fc.assert(
      fc.property(asked, fc.nat(), (input, pick) => {
        const site = input.sites[pick % input.sites.length];
        const weights = inverseDistanceWeights({ ...input, longitude: site.longitude, latitude: site.latitude });
        expect(weights).toHaveLength(1);
        expect(weights[0].weight).toBe(1);
        const chosen = input.sites[weights[0].site];
        expect([chosen.longitude, chosen.latitude]).toEqual([site.longitude, site.latitude]);
      }),
      SEEDED,
    );
  });
  test('sites made ready once give the same weights', () => {
    fc.assert(
      fc.property(asked, (input) => {
        expect(inverseDistanceWeights({ ...input, sites: placeSites(input.sites) })).toEqual(inverseDistanceWeights(input));
      }),
      SEEDED,
    );
  });
  test('a nearer site never weighs less', () => {
    fc.assert(
      fc.property(asked, (input) => {
        const weights = inverseDistanceWeights(input).map(({ weight }) => weight);
        expect(weights).toEqual(weights.toSorted((a, b) => b - a));
      }),
      SEEDED,
    );
  });
});

describe('inverse distance on the seven samples of Isaaks & Srivastava (1989), chapter 11', () => {
  // Samples recalled from the book, not re-read; estimates recomputed independently. Metres of the book stand as ten-thousandths of a degree at the equator, where the sphere is as good as flat.
  const samples: [x: number, y: number, value: number][] = [
    [61, 139, 477],
    [63, 140, 696],
    [64, 129, 227],
    [68, 128, 646],
    [71, 140, 606],
    [73, 141, 791],
    [75, 128, 783],
  ];
  const sites = samples.map(([x, y], i) => siteAt(`V${i}`, x / 1e4, y / 1e4));
  const rows: [power: number, estimate: number][] = [
    [0.2, 600.6],
    [0.5, 597.0],
    [1, 594.0],
    [2, 597.6],
    [5, 635.4],
    [10, 673.0],
  ];
  test.each(rows)('power %d: %d', (power, estimate) => {
    const weights = inverseDistanceWeights({ longitude: 65 / 1e4, latitude: 137 / 1e4, sites, power, maximumSites: 8 });
    const value = weights.reduce((sum, { site, weight }) => sum + weight * samples[site][2], 0);
    expect(Math.abs(value - estimate)).toBeLessThanOrEqual(0.06);
  });
});

describe('nearest site', () => {
  test('no other site is nearer', () => {
    fc.assert(
      fc.property(asked, ({ longitude, latitude, sites }) => {
        const [{ site, weight }] = nearestWeights([longitude, latitude], sites);
        const distances = sites.map((s) => haversine([longitude, latitude], [s.longitude, s.latitude]));
        expect(weight).toBe(1);
        expect(distances[site] - Math.min(...distances)).toBeLessThan(1e-3);
      }),
      SEEDED,
    );
  });
});

describe('the index over many sites', () => {
  const many = (seed: number) => {
    const random = mulberry32(seed);
    return Array.from({ length: 400 }, (_, i) => siteAt(`M${i}`, -120 + 2 * random(), 35 + 2 * random()));
  };
  test('finds the same nearest sites as looking at every one', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 8 }),
        between(-120.5, -117.5),
        between(34.5, 37.5),
        fc.nat(50),
        (count, longitude, latitude, seed) => {
          const sites = many(seed);
          const byDistance = sites
            .map((site) => [site.code, haversine([longitude, latitude], [site.longitude, site.latitude])] as const)
            .sort((a, b) => a[1] - b[1])
            .slice(0, count);
          const found = nearSites([longitude, latitude], placeSites(sites), count);
          expect(found.map(({ site }) => sites[site].code)).toEqual(byDistance.map(([code]) => code));
          found.forEach(({ distance }, i) => {
            expect(Math.abs(distance - byDistance[i][1])).toBeLessThan(1e-3);
          });
        },
      ),
      { ...SEEDED, numRuns: 100 },
    );
  });
  test('across the 180th meridian and near a pole every site is looked at', () => {
    const around = Array.from({ length: 360 }, (_, i) => siteAt(`R${String(i).padStart(3, '0')}`, i - 180, 60));
    expect(nearSites([179.9, 60], placeSites(around), 2).map(({ site }) => around[site].longitude)).toEqual([-180, 179]);
    const north = around.map((site) => ({ ...site, latitude: 88 }));
    expect(nearSites([10.2, 88.5], placeSites(north), 1).map(({ site }) => north[site].longitude)).toEqual([10]);
  });
});

describe('refusals name the value and the limit', () => {
  const sites = [siteAt('A', 0, 0)];
  test('power', () => {
    expect(() => inverseDistanceWeights({ longitude: 0, latitude: 0, sites, power: 0, maximumSites: 1 })).toThrow('limit 0');
  });
  test('number of sites', () => {
    expect(() => inverseDistanceWeights({ longitude: 0, latitude: 0, sites, power: 2, maximumSites: 9 })).toThrow('limits 1–8');
  });
  test('no site with a place', () => {
    expect(() => nearestWeights([0, 0], [siteAt('A', Number.NaN, 0)])).toThrow('no site with a known place');
  });
});

describe('lapse', () => {
  const at = (elevation: number) => ({ ...siteAt('A', 0, 0), elevation });
  const parcel = (elevation: number) => ({ elevation }) as ParcelInput;
  test('the standard atmosphere loses 6.5 °C in 1000 m (ISO 2533)', () => {
    expect(15 + lapseCorrection(at(0), parcel(1000), 0.0065)).toBe(8.5);
  });
  test('there and back again returns the temperature', () => {
    fc.assert(
      fc.property(between(-100, 3000), between(-100, 3000), (low, high) => {
        const [up, down] = [lapseCorrection(at(low), parcel(high), 0.0065), lapseCorrection(at(high), parcel(low), 0.0065)];
        expect(Math.abs(up + down)).toBeLessThan(1e-9);
      }),
      SEEDED,
    );
  });
});
