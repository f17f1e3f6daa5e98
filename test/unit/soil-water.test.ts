/** Soil profile, opening and closing water, capillary rows, soil temperature: small cases reckoned by hand. */
import { describe, expect, it } from 'vitest';
import { mostCapillaryRise, textureProperties } from '../../lib/crop/capillary-rise.ts';
import { fillSoilTemperature } from '../../lib/crop/soil-temperature.ts';
import { datedValue, fillCapillaryRise } from '../../lib/season/capillary.ts';
import { closingWater, openState } from '../../lib/season/initial-water.ts';
import { mixedSoil } from '../../lib/season/mixed-soil.ts';
import { availableTo, depthHolding, profileOf } from '../../lib/season/soil-profile.ts';
import type { InitialWater, ParcelInput, Soil } from '../../lib/season/types.ts';

const LOAM: Soil = {
  code: 'loam',
  name: 'Loam',
  fieldCapacity: 0.25,
  wiltingPoint: 0.1,
  evaporationDepth: 0.1,
  readilyEvaporableWater: 9,
  totalEvaporableWater: 20,
  curveNumber: 78,
  rootLimit: Number.NaN,
};
/** 60 mm to 0.3 m, 90 mm to 0.6 m, then 50 mm m⁻¹ for good. */
const LAYERED: Soil = {
  ...LOAM,
  code: 'layered',
  name: 'Layered',
  layers: [
    { top: 0, bottom: 0.3, fieldCapacity: 0.3, wiltingPoint: 0.1 },
    { top: 0.3, bottom: 0.6, fieldCapacity: 0.2, wiltingPoint: 0.1 },
    { top: 0.6, bottom: 1, fieldCapacity: 0.1, wiltingPoint: 0.05 },
  ],
};
const SETTINGS = { initialDepletion: 0.4 };

describe('soil profile', () => {
  it.each([
    [0, 0],
    [0.15, 30],
    [0.3, 60],
    [0.5, 80],
    [0.6, 90],
    [1, 110],
    [2, 160],
  ])('holds to %d m %d mm', (depth, water) => {
    expect(availableTo(profileOf(LAYERED), depth)).toBeCloseTo(water, 10);
    expect(depthHolding(profileOf(LAYERED), water)).toBeCloseTo(depth, 12);
  });

  it('of a soil without layers is Eq. 82 to the last bit', () => {
    for (const depth of [0.1, 0.37, 1.23]) expect(availableTo(profileOf(LOAM), depth)).toBe(1000 * (0.25 - 0.1) * depth);
  });

  it('is made once for each soil', () => expect(profileOf(LAYERED)).toBe(profileOf(LAYERED)));

  it('gives NaN for NaN', () => {
    expect(availableTo(profileOf(LAYERED), Number.NaN)).toBeNaN();
    expect(depthHolding(profileOf(LAYERED), Number.NaN)).toBeNaN();
  });
});

describe('layers of mixed soils', () => {
  it('are means by depth: 0.75 of the layered soil, 0.25 of the loam', () => {
    const soils = { layered: LAYERED, loam: LOAM };
    const mixed = mixedSoil(
      [
        { soil: 'loam', share: 0.25 },
        { soil: 'layered', share: 0.75 },
      ],
      soils,
    ) as Soil;
    expect(mixed.layers?.map(({ top, bottom }) => [top, bottom])).toEqual([
      [0, 0.3],
      [0.3, 0.6],
      [0.6, 1],
    ]);
    expect(mixed.layers?.[1].fieldCapacity).toBeCloseTo(0.75 * 0.2 + 0.25 * 0.25, 12);
    for (const depth of [0.1, 0.3, 0.45, 0.8, 1.7]) {
      const expected = 0.75 * availableTo(profileOf(LAYERED), depth) + 0.25 * 150 * depth;
      expect(availableTo(profileOf(mixed), depth)).toBeCloseTo(expected, 9);
    }
  });

  it('cut where either soil changes', () => {
    const other: Soil = { ...LOAM, layers: [{ top: 0, bottom: 0.45, fieldCapacity: 0.4, wiltingPoint: 0.2 }] };
    const mixed = mixedSoil(
      [
        { soil: 'a', share: 0.5 },
        { soil: 'b', share: 0.5 },
      ],
      { a: LAYERED, b: other },
    );
    expect(mixed?.layers?.map(({ bottom }) => bottom)).toEqual([0.3, 0.45, 0.6, 1]);
  });

  it('leave the other members to the classes that have them', () => {
    const clay: Soil = {
      ...LOAM,
      code: 'clay',
      texture: 'fine',
      saturation: 0.5,
      percolationRate: 2,
      capillary: textureProperties('clay'),
    };
    const shares = (clayShare: number) => [
      { soil: 'clay', share: clayShare },
      { soil: 'loam', share: 1 - clayShare },
    ];
    const mostly = mixedSoil(shares(0.6), { clay, loam: LOAM });
    expect(mostly?.texture).toBe('fine');
    expect(mostly?.saturation).toBeCloseTo(0.6 * 0.5 + 0.4 * 0.45, 12);
    expect(mostly?.percolationRate).toBe(2);
    expect(mostly?.capillary).toBe(clay.capillary);
    const little = mixedSoil(shares(0.4), { clay, loam: LOAM });
    expect(little?.texture).toBeUndefined();
    expect(little?.percolationRate).toBeUndefined();
    expect(little?.capillary).toBeUndefined();
    expect(mixedSoil(shares(0.4), { clay: LOAM, loam: LOAM })).not.toHaveProperty('layers');
  });
});

describe('opening water', () => {
  const depths = { rootDepth: 0.4, deepestRoot: 1.2 };

  it('by the share of the settings', () => {
    const opening = openState({ soil: LAYERED }, SETTINGS, depths);
    expect(opening.rootDepletion).toBeCloseTo(0.4 * 70, 10);
    expect(opening.belowDepletion).toBeCloseTo(0.4 * (120 - 70), 10);
    expect(opening.surfaceDepletion).toBeCloseTo(8, 12);
    expect(opening.pond).toBe(0);
  });

  it('by a measured profile, spread by what the layers hold, and by the share below it', () => {
    // 30 mm short to 0.3 m, 12 mm short from there to 0.9 m, which holds 30 mm to 0.6 and 15 mm to 0.9
    const initialWater: InitialWater = {
      profile: [
        { bottom: 0.3, depletion: 30 },
        { bottom: 0.9, depletion: 12 },
      ],
    };
    const opening = openState({ soil: LAYERED, initialWater }, SETTINGS, depths);
    expect(opening.rootDepletion).toBeCloseTo(30 + (12 * 10) / 45, 10);
    expect(opening.belowDepletion).toBeCloseTo((12 * 35) / 45 + 0.4 * 15, 10);
    expect(opening.surfaceDepletion).toBeCloseTo(0.5 * 20, 10);
  });

  it('takes a given dryness of the surface', () => {
    const initialWater: InitialWater = { profile: [{ bottom: 1, depletion: 20 }], surfaceShare: 0.9 };
    expect(openState({ soil: LOAM, initialWater }, SETTINGS, depths).surfaceDepletion).toBeCloseTo(18, 12);
  });

  it('holds a profile between wilting point and field capacity', () => {
    const initialWater: InitialWater = {
      profile: [
        { bottom: 0.4, depletion: 500 },
        { bottom: 1.2, depletion: -40 },
      ],
    };
    expect(openState({ soil: LOAM, initialWater }, SETTINGS, depths)).toMatchObject({ rootDepletion: 60, belowDepletion: 0 });
  });
});

describe('closing water', () => {
  const strip = { rootDepth: 0.4, deepestRoot: 1, rootDepletion: 30, belowDepletion: 9, surfaceDepletion: 10 };

  it('of one strip is its two stores', () => {
    const closing = closingWater({ soil: LOAM }, SETTINGS, [{ ...strip, share: 1 }], 3);
    expect(closing).toEqual({
      profile: [
        { bottom: 0.4, depletion: 30 },
        { bottom: 1, depletion: 9 },
      ],
      surfaceShare: 0.5,
      snow: 3,
    });
  });

  it('of two strips is their mean by area; below the shallower one the soil is as the run found it', () => {
    const shallow = { share: 0.25, rootDepth: 0.4, deepestRoot: 0.4, rootDepletion: 12, belowDepletion: 0, surfaceDepletion: 20 };
    const closing = closingWater({ soil: LOAM }, SETTINGS, [{ ...strip, share: 0.75 }, shallow], 0);
    expect(closing.profile.map(({ bottom }) => bottom)).toEqual([0.4, 1]);
    expect(closing.profile[0].depletion).toBeCloseTo(0.75 * 30 + 0.25 * 12, 12);
    expect(closing.profile[1].depletion).toBeCloseTo(0.75 * 9 + 0.25 * 0.4 * 90, 12);
    expect(closing.surfaceShare).toBeCloseTo((0.75 * 10 + 0.25 * 20) / 20, 12);
  });

  it('follows percolation into the soil below: 27 mm refill 0.75 m that lack 36 mm to the metre', () => {
    const closing = closingWater({ soil: LOAM }, { initialDepletion: 0.24 }, [{ ...strip, share: 1, percolation: 27 }], 0);
    expect(closing.profile[2].bottom).toBeCloseTo(1.75, 10);
    expect(closing.profile[2].depletion).toBe(0);
    const much = closingWater({ soil: LOAM }, { initialDepletion: 0.24 }, [{ ...strip, share: 1, percolation: 900 }], 0);
    expect(much.profile[2]).toEqual({ bottom: 3, depletion: 0 });
  });

  it('keeps what was measured below every root', () => {
    const initialWater: InitialWater = {
      profile: [
        { bottom: 0.5, depletion: 10 },
        { bottom: 2, depletion: 45 },
      ],
    };
    const closing = closingWater({ soil: LOAM, initialWater }, SETTINGS, [{ ...strip, share: 1 }], 0);
    expect(closing.profile.map(({ bottom }) => bottom)).toEqual([0.4, 0.5, 1, 2]);
    expect(closing.profile[3].depletion).toBeCloseTo(30, 10); // a third of the 1.5 m lies above 1 m
  });
});

describe('rise from the water table', () => {
  it('follows the table between its dates', () => {
    const table = { days: [-10, 10, 20], values: [1, 2, 1.5] };
    expect([-20, -10, 0, 10, 15, 30].map((day) => datedValue(table, day))).toEqual([1, 1, 1.5, 2, 1.75, 1.5]);
    expect(datedValue({ days: [], values: [] }, 0)).toBeNaN();
  });

  it('is that of the height over the table on each day', () => {
    const capillary = textureProperties('silt-loam');
    const parcel = { soil: { ...LOAM, capillary }, waterTable: { days: [0, 2], values: [2, 1.6] } };
    const into = fillRise(parcel, [0.5, 0.5, 0.6, 0.6]);
    expect([...into]).toEqual([1.5, 1.3, 1, 1].map((height) => expect.closeTo(mostCapillaryRise(capillary, height), 9)));
  });

  it('is nothing without a table or without properties of the soil', () => {
    expect([...fillRise({ soil: LOAM, waterTable: { days: [0], values: [1] } }, [1, 1])]).toEqual([0, 0]);
    expect([...fillRise({ soil: { ...LOAM, capillary: textureProperties('clay') } }, [1, 1])]).toEqual([0, 0]);
  });

  function fillRise(parcel: Pick<ParcelInput, 'soil' | 'waterTable'>, rootDepth: number[]): Float64Array {
    const into = new Float64Array(rootDepth.length).fill(Number.NaN);
    fillCapillaryRise(parcel, Float64Array.from(rootDepth), into);
    return into;
  }
});

describe('estimated soil temperature', () => {
  it('is the mean of the last days, the day itself with them, without the days that are missing', () => {
    const air = [10, 12, Number.NaN, 20, 2];
    expect(fillSoilTemperature(air, [0, 0, 0, 0, 0], 3)).toEqual([10, 11, 11, 16, 11]);
    expect(fillSoilTemperature([Number.NaN, 4], [0, 0], 1)).toEqual([Number.NaN, 4]);
  });
});
