/** Soil water as measured, and the opening of a season from it. Depletions are by hand: 1000 (θFC − θ) Δz, FAO-56 Eq. 87. */
import { describe, expect, test } from 'vitest';
import { LIBRARY_SOILS } from '../../db/library/soils.ts';
import type { MeasurementRow } from '../../db/queries/field-measurements.ts';
import { textureProperties } from '../../lib/crop/capillary-rise.ts';
import { measuredWater } from '../../lib/jobs/run-initial-water.ts';
import { efficiencyAt, salinityAt, waterTableOf } from '../../lib/jobs/run-measurements.ts';
import { heldAtFieldCapacity, profileFromContents, profileFromDepletion } from '../../lib/season/measured-water.ts';
import type { Soil } from '../../lib/season/types.ts';

const loam: Soil = {
  code: 'l',
  name: 'Loam',
  fieldCapacity: 0.3,
  wiltingPoint: 0.1,
  evaporationDepth: 0.1,
  readilyEvaporableWater: 9,
  totalEvaporableWater: 20,
  curveNumber: Number.NaN,
  rootLimit: Number.NaN,
};
/** 0.4 m of loam over sand */
const layered: Soil = {
  ...loam,
  layers: [
    { top: 0, bottom: 0.4, fieldCapacity: 0.3, wiltingPoint: 0.1 },
    { top: 0.4, bottom: 1, fieldCapacity: 0.12, wiltingPoint: 0.04 },
  ],
};

describe('water contents by depth', () => {
  test('lack what field capacity holds more, piece by piece', () => {
    const pieces = profileFromContents(loam, [
      { bottom: 0.3, content: 0.2 },
      { bottom: 0.9, content: 0.25 },
    ]);
    expect(pieces.map(({ bottom }) => bottom)).toEqual([0.3, 0.9]);
    // (0.30 − 0.20) × 300 mm, (0.30 − 0.25) × 600 mm
    expect(pieces[0].depletion).toBeCloseTo(30, 9);
    expect(pieces[1].depletion).toBeCloseTo(30, 9);
  });

  test('go through the layers of a soil', () => {
    // 400 mm × 0.30 + 200 mm × 0.12, and on with the last layer: 400 × 0.30 + 800 × 0.12
    expect(heldAtFieldCapacity(layered, 0.6)).toBeCloseTo(144, 9);
    expect(heldAtFieldCapacity(layered, 1.2)).toBeCloseTo(216, 9);
    expect(heldAtFieldCapacity(layered, 0.2)).toBeCloseTo(60, 9);
    const [piece] = profileFromContents(layered, [{ bottom: 0.6, content: 0.15 }]);
    // 144 − 0.15 × 600
    expect(piece.depletion).toBeCloseTo(54, 9);
  });

  test('above field capacity count as at it, below wilting point as at it', () => {
    const [wet, dry] = profileFromContents(loam, [
      { bottom: 0.5, content: 0.42 },
      { bottom: 1, content: 0.03 },
    ]);
    expect(wet.depletion).toBe(0);
    expect(dry.depletion).toBeCloseTo(100, 9);
    expect(profileFromDepletion(loam, 999, 0.5)[0].depletion).toBeCloseTo(100, 9);
  });
});

const row = (date: string, quantity: MeasurementRow['quantity'], value: number, depth = 0): MeasurementRow => ({
  parcelCode: 'P',
  date,
  quantity,
  depth,
  value,
});

describe('the first morning', () => {
  test('is the latest day that was measured, contents before a depletion', () => {
    const rows = [
      row('2023-03-25', 'water_content_m3_m3', 0.15, 0.5),
      row('2023-03-30', 'root_zone_depletion_mm', 70, 1),
      row('2023-03-30', 'water_content_m3_m3', 0.25, 0.6),
      row('2023-03-30', 'water_content_m3_m3', 0.2, 0.3),
    ];
    const profile = measuredWater(rows, loam, 1)?.profile ?? [];
    expect(profile.map(({ bottom }) => bottom)).toEqual([0.3, 0.6]);
    expect(profile[0].depletion).toBeCloseTo(30, 9);
    expect(profile[1].depletion).toBeCloseTo(15, 9);
  });

  test('is a depletion of the depth it names, else of the crop’s roots, else of 1 m', () => {
    const at = (depth: number, roots: number, soil = loam) =>
      measuredWater([row('2023-03-30', 'root_zone_depletion_mm', 40, depth)], soil, roots)?.profile;
    expect(at(0.7, 1.2)).toEqual([{ bottom: 0.7, depletion: 40 }]);
    expect(at(0, 1.2)).toEqual([{ bottom: 1.2, depletion: 40 }]);
    expect(at(0, Number.NaN)).toEqual([{ bottom: 1, depletion: 40 }]);
    expect(at(0, 1.2, { ...loam, rootLimit: 0.5 })).toEqual([{ bottom: 0.5, depletion: 40 }]);
  });

  test('is not told by anything else', () => {
    expect(measuredWater([row('2023-03-30', 'efficiency', 0.8)], loam, 1)).toBeNull();
    expect(measuredWater([], loam, 1)).toBeNull();
  });
});

describe('salinity, water table and efficiency', () => {
  const settings = { water_salinity_ds_m: 1.2 };

  test('salinity is the latest up to the first day; the soil’s else by FAO-56 Eq. 93 with LF 0.15', () => {
    const rows = [
      row('2022-10-01', 'soil_salinity_ds_m', 2.5),
      row('2023-03-01', 'soil_salinity_ds_m', 3.1),
      row('2023-06-01', 'soil_salinity_ds_m', 9),
      row('2023-02-01', 'water_salinity_ds_m', 0.8),
    ];
    expect(salinityAt(rows, '2023-04-01', settings)).toEqual({ salinity: { soil: 3.1, water: 0.8 }, measured: true });
    const none = salinityAt([], '2023-04-01', settings);
    expect(none.measured).toBe(false);
    expect(none.salinity.water).toBe(1.2);
    // (1.15 / 0.15) × 1.2 / 5
    expect(none.salinity.soil).toBeCloseTo(1.84, 9);
  });

  test('a water table counts from a year before to the end, by days from the first one stepped', () => {
    const rows = [
      row('2021-01-01', 'water_table_depth_m', 9),
      row('2023-03-22', 'water_table_depth_m', 2.5),
      row('2023-05-01', 'water_table_depth_m', 1.5),
      row('2023-11-01', 'water_table_depth_m', 3),
    ];
    expect(waterTableOf(rows, '2023-04-01', '2023-10-31')).toEqual({ days: [-10, 30], values: [2.5, 1.5] });
    expect(waterTableOf([], '2023-04-01', '2023-10-31')).toBeNull();
  });

  test('an efficiency is the latest of the season or before', () => {
    const rows = [row('2022-01-01', 'efficiency', 0.7), row('2023-08-01', 'efficiency', 0.82), row('2024-01-01', 'efficiency', 0.9)];
    expect(efficiencyAt(rows, '2023-10-31')).toBe(0.82);
    expect(efficiencyAt([], '2023-10-31')).toBeNull();
  });
});

test('the soils of the library hold the printed properties of their texture', () => {
  for (const { code, saturation, capillary } of LIBRARY_SOILS) {
    if (code === 'silt') continue;
    const printed = textureProperties(code === 'silt-clay-loam' ? 'silty-clay-loam' : (code as 'loam'));
    expect(saturation, code).toBe(printed.saturation);
    expect(capillary?.conductivity, code).toBeCloseTo(printed.conductivity, 6);
    expect(capillary?.bubblingHead, code).toBeCloseTo(printed.bubblingHead, 9);
    expect(capillary?.exponent, code).toBeCloseTo(printed.exponent, 12);
  }
});
