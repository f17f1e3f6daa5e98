/** Water handed from season to season: over the depth that both seasons reach, what the first leaves the second finds. */
import { describe, expect, test } from 'vitest';
import { mulberry32, type Random } from '../../lib/base/random.ts';
import { closingWater, openState, type StripClosing } from '../../lib/season/initial-water.ts';
import { availableTo, profileOf } from '../../lib/season/soil-profile.ts';
import type { InitialWater, Soil } from '../../lib/season/types.ts';
import { makeSoil } from '../support/random-season.ts';

const between = (random: Random, low: number, high: number) => low + (high - low) * random();

function layeredSoil(random: Random): Soil {
  const soil = makeSoil(random);
  if (random() < 0.3) return soil;
  let top = 0;
  const layers = Array.from({ length: 1 + Math.floor(random() * 4) }, () => {
    const wiltingPoint = between(random, 0.02, 0.2);
    const layer = { top, bottom: top + between(random, 0.1, 0.6), wiltingPoint, fieldCapacity: wiltingPoint + between(random, 0.04, 0.2) };
    top = layer.bottom;
    return layer;
  });
  return { ...soil, layers };
}

/** Strips of one parcel, each with the two stores anywhere between field capacity and wilting point. */
function strips(random: Random, soil: Soil): StripClosing[] {
  const profile = profileOf(soil);
  const count = 1 + Math.floor(random() * 3);
  return Array.from({ length: count }, () => {
    const rootDepth = between(random, 0.1, 1);
    const deepestRoot = rootDepth + (random() < 0.2 ? 0 : between(random, 0, 1.2));
    const root = availableTo(profile, rootDepth);
    return {
      share: 1 / count,
      rootDepth,
      deepestRoot,
      rootDepletion: random() * root,
      belowDepletion: random() * (availableTo(profile, deepestRoot) - root),
      surfaceDepletion: random() * soil.totalEvaporableWater,
    };
  });
}

describe('carry-over', () => {
  test.each(Array.from({ length: 60 }, (_, seed) => [seed + 1]))('seed %d: one total, however the next season cuts the soil', (seed) => {
    const random = mulberry32(seed);
    const soil = layeredSoil(random);
    const settings = { initialDepletion: random() };
    const left = strips(random, soil);
    const initialWater = closingWater({ soil }, settings, left, 0);
    const common = Math.min(...left.map(({ deepestRoot }) => deepestRoot));
    const deepest = initialWater.profile[initialWater.profile.length - 1].bottom;
    expect(deepest).toBe(Math.max(...left.map(({ deepestRoot }) => deepestRoot)));

    // what the strips hold short of field capacity over the common depth, reckoned from their stores alone
    const profile = profileOf(soil);
    const within = ({ rootDepth, deepestRoot, rootDepletion, belowDepletion }: StripClosing, depth: number) => {
      const root = availableTo(profile, rootDepth);
      if (depth <= rootDepth) return (rootDepletion * availableTo(profile, depth)) / root;
      return rootDepletion + (belowDepletion * (availableTo(profile, depth) - root)) / (availableTo(profile, deepestRoot) - root);
    };
    const expected = left.reduce((sum, strip) => sum + strip.share * within(strip, common), 0);
    for (let k = 0; k < 5; k++) {
      const opening = openState({ soil, initialWater }, settings, { rootDepth: random() * common, deepestRoot: common });
      expect(Math.abs(opening.rootDepletion + opening.belowDepletion - expected)).toBeLessThan(1e-9);
      const surface = left.reduce((sum, strip) => sum + strip.share * strip.surfaceDepletion, 0);
      expect(Math.abs(opening.surfaceDepletion - surface)).toBeLessThan(1e-9);
    }
  });

  test.each([[71], [72], [73], [74]])('seed %d: a season that changes nothing hands on what it was given', (seed) => {
    const random = mulberry32(seed);
    const soil = layeredSoil(random);
    const settings = { initialDepletion: 0.5 };
    const given: InitialWater = closingWater({ soil }, settings, strips(random, soil), 7);
    const depths = { rootDepth: 0.35, deepestRoot: 0.8 };
    const opening = openState({ soil, initialWater: given }, settings, depths);
    const handed = closingWater({ soil, initialWater: given }, settings, [{ share: 1, ...depths, ...opening }], 7);
    const deepest = given.profile[given.profile.length - 1].bottom;
    for (const depth of [0.35, 0.8, Math.max(0.8, deepest)]) {
      const whole = { rootDepth: depth, deepestRoot: depth };
      const before = openState({ soil, initialWater: given }, settings, whole).rootDepletion;
      const after = openState({ soil, initialWater: handed }, settings, whole).rootDepletion;
      expect(Math.abs(after - before)).toBeLessThan(1e-9);
    }
    expect(handed.snow).toBe(7);
  });

  test('nothing ever opens drier than wilting point or wetter than field capacity', () => {
    const random = mulberry32(99);
    for (let k = 0; k < 200; k++) {
      const soil = layeredSoil(random);
      const profile = [
        { bottom: between(random, 0.05, 0.5), depletion: between(random, -50, 200) },
        { bottom: between(random, 0.5, 2), depletion: between(random, -50, 400) },
      ];
      const depths = { rootDepth: between(random, 0.05, 1), deepestRoot: between(random, 1, 2.5) };
      const { rootDepletion, belowDepletion } = openState({ soil, initialWater: { profile } }, { initialDepletion: random() }, depths);
      const root = availableTo(profileOf(soil), depths.rootDepth);
      const below = availableTo(profileOf(soil), depths.deepestRoot) - root;
      expect(rootDepletion).toBeGreaterThanOrEqual(0);
      expect(rootDepletion).toBeLessThanOrEqual(root + 1e-9);
      expect(belowDepletion).toBeGreaterThanOrEqual(0);
      expect(belowDepletion).toBeLessThanOrEqual(below + 1e-9);
    }
  });

  test.each(Array.from({ length: 40 }, (_, k) => [k + 101]))(
    'seed %d: what percolated past the roots refills the soil below, to the last drop or to 3 m',
    (seed) => {
      const random = mulberry32(seed);
      const soil = layeredSoil(random);
      const settings = { initialDepletion: random() < 0.2 ? 0 : random() };
      const profile = [
        { bottom: 0.6, depletion: random() * availableTo(profileOf(soil), 0.6) },
        { bottom: 1.4, depletion: random() * 30 },
      ];
      const initialWater: InitialWater | undefined = random() < 0.5 ? { profile } : undefined;
      const left = strips(random, soil).map((strip) => ({ ...strip, percolation: random() < 0.2 ? 0 : random() * 150 }));
      const handed = closingWater({ soil, initialWater }, settings, left, 0);

      const depth = 4;
      const whole = { rootDepth: depth, deepestRoot: depth };
      const after = openState({ soil, initialWater: handed }, settings, whole).rootDepletion;
      const expected = left.reduce((sum, { share, deepestRoot, rootDepletion, belowDepletion, percolation }) => {
        const { belowDepletion: found } = openState({ soil, initialWater }, settings, { rootDepth: deepestRoot, deepestRoot: depth });
        const { belowDepletion: deeper } = openState({ soil, initialWater }, settings, { rootDepth: 3, deepestRoot: depth });
        return sum + share * (rootDepletion + belowDepletion + found - Math.min(percolation, found - deeper));
      }, 0);
      expect(Math.abs(after - expected)).toBeLessThan(1e-9);
    },
  );
});
