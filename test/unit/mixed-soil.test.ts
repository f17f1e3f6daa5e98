import { describe, expect, it } from 'vitest';
import { mixedSoil, soilsOfParcels } from '../../lib/season/mixed-soil.ts';
import type { Soil } from '../../lib/season/types.ts';

const soil = (code: string, name: string, more: Partial<Soil>): Soil => ({
  code,
  name,
  fieldCapacity: 0.2,
  wiltingPoint: 0.1,
  evaporationDepth: 0.1,
  readilyEvaporableWater: 8,
  totalEvaporableWater: 15,
  curveNumber: Number.NaN,
  rootLimit: Number.NaN,
  ...more,
});

const SOILS = {
  loam: soil('loam', 'Loam', {
    fieldCapacity: 0.28,
    wiltingPoint: 0.12,
    readilyEvaporableWater: 9,
    totalEvaporableWater: 22,
    curveNumber: 78,
  }),
  clay: soil('clay', 'Clay', {
    fieldCapacity: 0.36,
    wiltingPoint: 0.22,
    evaporationDepth: 0.15,
    readilyEvaporableWater: 10,
    totalEvaporableWater: 25,
    curveNumber: 86,
    rootLimit: 0.8,
  }),
  sand: soil('sand', 'Sand', { fieldCapacity: 0.12, wiltingPoint: 0.04 }),
};

describe('mixedSoil', () => {
  it('is the mean by area, reckoned by hand', () => {
    const mixed = mixedSoil(
      [
        { soil: 'clay', share: 0.25 },
        { soil: 'loam', share: 0.75 },
      ],
      SOILS,
    );
    // 0.75 × 0.28 + 0.25 × 0.36 = 0.30; 0.75 × 0.12 + 0.25 × 0.22 = 0.145; 0.075 + 0.0375 = 0.1125; 6.75 + 2.5; 16.5 + 6.25; 58.5 + 21.5
    expect(mixed?.fieldCapacity).toBeCloseTo(0.3, 12);
    expect(mixed?.wiltingPoint).toBeCloseTo(0.145, 12);
    expect(mixed?.evaporationDepth).toBeCloseTo(0.1125, 12);
    expect(mixed?.readilyEvaporableWater).toBeCloseTo(9.25, 12);
    expect(mixed?.totalEvaporableWater).toBeCloseTo(22.75, 12);
    expect(mixed?.curveNumber).toBeCloseTo(80, 12);
    expect(mixed?.rootLimit).toBeNaN();
    expect(mixed?.name).toBe('75 % Loam + 25 % Clay');
  });

  it('takes ground that is not mapped to be like the rest', () => {
    const half = mixedSoil(
      [
        { soil: 'loam', share: 0.3 },
        { soil: 'clay', share: 0.1 },
      ],
      SOILS,
    );
    expect(half?.fieldCapacity).toBeCloseTo(0.3, 12);
    expect(half?.code).toBe('loam 0.750 + clay 0.250');
  });

  it('limits roots where classes with a limit cover half of the ground, by their mean', () => {
    const half = mixedSoil(
      [
        { soil: 'clay', share: 0.5 },
        { soil: 'sand', share: 0.5 },
      ],
      SOILS,
    );
    expect(half?.rootLimit).toBeCloseTo(0.8, 12);
    expect(half?.curveNumber).toBeCloseTo(86, 12);
  });

  it('is the class itself where it has nearly all, and null where no class is known', () => {
    expect(
      mixedSoil(
        [
          { soil: 'loam', share: 0.996 },
          { soil: 'clay', share: 0.004 },
        ],
        SOILS,
      ),
    ).toBe(SOILS.loam);
    expect(mixedSoil([{ soil: 'peat', share: 1 }], SOILS)).toBeNull();
    expect(mixedSoil([], SOILS)).toBeNull();
  });
});

describe('soilsOfParcels', () => {
  it('puts the own code before the polygons, and these before the soil of the district', () => {
    const shares = [
      { soil: 'loam', share: 0.6 },
      { soil: 'sand', share: 0.4 },
    ];
    const { codes, soils } = soilsOfParcels(
      [
        { soilCode: 'clay', soilShares: shares },
        { soilCode: null, soilShares: shares },
        { soilCode: null, soilShares: null },
        { soilCode: null, soilShares: [{ soil: 'gone', share: 1 }] },
      ],
      SOILS,
      'sand',
    );
    expect(codes).toEqual(['clay', 'loam 0.600 + sand 0.400', 'sand', 'sand']);
    // 0.6 × 0.28 + 0.4 × 0.12
    expect(soils[codes[1]].fieldCapacity).toBeCloseTo(0.216, 12);
    expect(Object.keys(soils).sort()).toEqual(['clay', 'loam', 'loam 0.600 + sand 0.400', 'sand']);
  });
});
