/** The crop library, soils and methods against the printed tables. */
import { describe, expect, test } from 'vitest';
import { plantingDay } from '../../db/library/calendars.ts';
import { cropLibrary } from '../../db/library/crops.ts';
import { LIBRARY_METHODS } from '../../db/library/methods.ts';
import { LIBRARY_SOILS } from '../../db/library/soils.ts';
import { MATURE_COVER } from '../../lib/crop/canopy.ts';

const library = cropLibrary();
const crop = (code: string) => library.crops.find((each) => each.code === code);
const stages = (code: string) => {
  const calendar = library.calendars.find((each) => each.calendar.code === code)?.calendar;
  return calendar && [calendar.initial, calendar.development, calendar.mid, calendar.late];
};

describe('crops', () => {
  // FAO-56 Table 17 (Kcb ini, mid, end), Table 12 (height), Table 22 (root depth, p), Table 24 (Ky); middle of printed ranges.
  test.each([
    ['bean-dry', [0.15, 1.1, 0.25], 0.4, 0.75, 0.45, 1.15],
    ['maize-grain', [0.15, 1.15, 0.325], 2, 1.35, 0.55, 1.25],
    ['cotton', [0.15, 1.125, 0.45], 1.35, 1.35, 0.65, 0.85],
    ['tomato', [0.15, 1.1, 0.7], 0.6, 1.1, 0.4, 1.05],
    ['alfalfa-hay', [0.3, 1.15, 1.1], 0.7, 1.5, 0.55, 1.1],
    ['onion-dry', [0.15, 0.95, 0.65], 0.4, 0.45, 0.3, 1.1],
  ] as const)('%s', (code, [initial, mid, end], height, root, p, ky) => {
    expect(crop(code)).toMatchObject({
      basalInitial: initial,
      basalMid: mid,
      basalEnd: end,
      heightMax: height,
      rootDepthMax: root,
      depletionFraction: p,
      yieldResponse: ky,
    });
  });

  // FAO-56 Table 18: Kcb mid and end = Kc − 0.05. Season-averaged alfalfa, Table 12: Kc 0.40, 0.95, 0.90.
  test('basal values where only Kc is printed', () => {
    expect(crop('alfalfa-hay-season-averaged')).toMatchObject({ basalInitial: 0.3, basalMid: 0.9, basalEnd: 0.85 });
    expect(library.sources['alfalfa-hay-season-averaged'].basalMid).toContain('Table 18');
  });

  test('winter wheat keeps its two printed starts apart', () => {
    expect(crop('winter-wheat-frozen-soils')?.basalInitial).toBe(0.15);
    expect(crop('winter-wheat-non-frozen-soils')?.basalInitial).toBe(0.5);
  });

  test('crops that dry off stop early, the others are watered to the end (FAO-56 Annex 8)', () => {
    expect(crop('bean-dry')?.lastIrrigation).toBe(0.5);
    expect(crop('sugar-beet')?.lastIrrigation).toBe(1);
  });

  test('every crop is whole, once, and says where each value is from', () => {
    expect(new Set(library.crops.map(({ code }) => code)).size).toBe(library.crops.length);
    for (const each of library.crops) {
      expect(each.code).toMatch(/^[a-z0-9-]+$/);
      for (const value of [each.basalInitial, each.basalMid, each.basalEnd]) expect(value > 0 && value < 1.3).toBe(true);
      expect(each.heightMax > 0 && each.heightMax <= 10).toBe(true);
      expect(each.rootDepthMin > 0 && each.rootDepthMin <= each.rootDepthMax).toBe(true);
      expect(each.depletionFraction >= 0.2 && each.depletionFraction <= 0.7).toBe(true);
      for (const member of [
        'basalInitial',
        'basalMid',
        'basalEnd',
        'heightMax',
        'rootDepthMin',
        'rootDepthMax',
        'depletionFraction',
        'lastIrrigation',
      ] as const) {
        expect(library.sources[each.code][member]).toBeTruthy();
      }
      expect(library.sources[each.code].yieldResponse === undefined).toBe(Number.isNaN(each.yieldResponse));
    }
  });

  // FAO-56 Table 12: Kc ini, mid, end (maize grain: end 0.60 to 0.35, middle taken).
  test.each([
    ['bean-dry', 0.4, 1.15, 0.35],
    ['tomato', 0.6, 1.15, 0.8],
    ['citrus-70-canopy-no-cover', 0.7, 0.65, 0.7],
    ['rice-paddy', 1.05, 1.2, 0.75],
  ])('single coefficients of %s', (code, initial, mid, end) => {
    expect(crop(code)?.single).toEqual({ initial, mid, end });
    expect(library.sources[code].single).toContain('Table 12');
  });

  // FAO-33 Table 24, recalled: vegetative, flowering, yield formation, ripening.
  test.each([
    ['maize-grain', { development: 0.4, mid: 1.5, late: 0.2 }],
    ['winter-wheat-frozen-soils', { development: 0.2, mid: 0.6 }],
    ['soybean', { development: 0.2, mid: 1 }],
    ['potato', { initial: 0.45, development: 0.8, mid: 0.7, late: 0.2 }],
    ['onion-dry', { development: 0.45, mid: 0.8, late: 0.3 }],
    ['lettuce', undefined],
  ])('response by stage of %s', (code, expected) => {
    expect(crop(code)?.stageResponse).toEqual(expected);
    expect(library.sources[code].stageResponse === undefined).toBe(expected === undefined);
  });

  test('ponding, canopies and tables of critical temperatures go to the crops they are for', () => {
    const having = (member: 'paddy' | 'canopy' | 'frostTable') => library.crops.filter((each) => each[member]).map(({ code }) => code);
    expect(having('paddy')).toEqual(['rice-paddy']);
    expect(having('canopy')).toEqual(
      library.crops.filter(({ type, code }) => type === 'orchard' && !code.includes('active-cover')).map(({ code }) => code),
    );
    expect(['citrus-50-canopy-no-cover', 'olive-40-60-cover', 'walnut'].map((code) => crop(code)?.canopy?.cover)).toEqual([
      0.5,
      0.5,
      MATURE_COVER,
    ]);
    expect(having('frostTable').map((code) => crop(code)?.frostTable)).toEqual(['apple', 'apple', 'peach', 'peach']);
    expect(crop('citrus-70-canopy-no-cover')?.canopy).toEqual({ cover: 0.7, height: 4 });
  });

  test('every part has a source', () => {
    for (const each of library.crops) {
      for (const member of ['single', 'salinity', 'stageResponse', 'paddy', 'canopy', 'dormantBasal', 'frostTable'] as const) {
        expect(library.sources[each.code][member] !== undefined, `${each.code} ${member}`).toBe(each[member] !== undefined);
      }
    }
  });

  // FAO-56 Table 23: threshold dS/m and slope %/(dS/m).
  test.each([
    ['maize-grain', 1.7, 12],
    ['cotton', 7.7, 5.2],
    ['bean-dry', 1, 19],
  ])('salt tolerance of %s', (code, threshold, slope) => {
    expect(library.salinity[code]).toEqual({ threshold, slope });
    expect(crop(code)?.salinity).toEqual({ threshold, slope });
  });
});

describe('calendars', () => {
  // FAO-56 Table 11: initial, development, mid, late [d].
  test.each([
    ['bean-dry-idaho', [25, 25, 30, 20]],
    ['maize-grain-idaho', [30, 40, 50, 50]],
    ['maize-grain-spain-california', [30, 40, 50, 30]],
    ['sugar-beet-idaho', [50, 40, 50, 40]],
    ['winter-wheat-frozen-soils-idaho', [160, 75, 75, 25]],
    ['alfalfa-hay-idaho', [10, 30, 25, 10]],
    ['pasture-rotated-grazing-all-year', [0, 0, 365, 0]],
  ])('%s', (code, expected) => {
    expect(stages(code)).toEqual(expected);
  });

  // FAO-56 Figure 35: southern Idaho alfalfa, later cycles 5/20/10/10 d.
  test('alfalfa starts a shorter cycle after each cut', () => {
    const calendar = library.calendars.find((each) => each.calendar.code === 'alfalfa-hay-idaho')?.calendar;
    expect(calendar?.laterCycle).toEqual({ initial: 5, development: 20, mid: 10, late: 10 });
    expect(
      library.calendars
        .filter(({ calendar }) => calendar.laterCycle !== null && !calendar.start)
        .map((each) => each.cropCode)
        .sort(),
    ).toEqual(['alfalfa-hay', 'alfalfa-hay', 'sudan-grass-hay']);
  });

  // FAO-56 chapter 6: winter wheat at 17 °C or on 1 December, spring wheat 5 °C, maize 13 °C, alfalfa and pasture by −4 °C, pasture 7 days around.
  test.each([
    ['winter-wheat-frozen-soils-autumn-start', '09-01', { kind: 'air-temperature', threshold: 17, days: 10, falling: true, latest: 91 }],
    ['spring-wheat-spring-start', '02-01', { kind: 'air-temperature', threshold: 5, days: 10, latest: 100 }],
    ['maize-grain-spring-start', '03-01', { kind: 'air-temperature', threshold: 13, days: 10, latest: 100 }],
    ['alfalfa-hay-frost-to-frost', '01-01', { kind: 'frost-free', threshold: -4, latest: 150 }],
    ['pasture-rotated-grazing-frost-to-frost', '01-01', { kind: 'frost-free', threshold: -4, latest: 150, offset: -7 }],
  ])('start of %s', (code, plantingDay, start) => {
    expect(library.calendars.find(({ calendar }) => calendar.code === code)).toMatchObject({ plantingDay, calendar: { start } });
  });

  test('1 December is 91 days after 1 September', () => {
    expect((Date.UTC(2023, 11, 1) - Date.UTC(2023, 8, 1)) / 86400000).toBe(91);
  });

  test('calendars by weather come after those of fixed days, so that no default changes', () => {
    const byWeather = library.calendars.map(({ calendar }) => Boolean(calendar.start || calendar.thermal));
    const first = byWeather.indexOf(true);
    expect(first).toBeGreaterThan(60);
    expect(byWeather.slice(first).every(Boolean)).toBe(true);
    expect(byWeather.length - first).toBe(9);
  });

  // Where Table 11 prints a total that its stages do not sum to, the stages stand: sorghum 130, sesame 100, green gram 110 as printed.
  test.each([
    ['sorghum-grain', 125],
    ['sesame', 110],
    ['green-gram-and-cowpea', 100],
  ])('stages of %s sum to %i', (code, total) => {
    const calendar = library.calendars.find((each) => each.cropCode === code && !each.calendar.start)?.calendar;
    expect((calendar?.initial ?? 0) + (calendar?.development ?? 0) + (calendar?.mid ?? 0) + (calendar?.late ?? 0)).toBe(total);
  });

  test('codes are unique and name a crop of the library', () => {
    expect(new Set(library.calendars.map(({ calendar }) => calendar.code)).size).toBe(library.calendars.length);
    for (const { cropCode } of library.calendars) expect(crop(cropCode)).toBeDefined();
  });

  test.each([
    ['Apr', '04-15'],
    ['Mar-Apr', '04-01'],
    ['Dec; May', '12-15'],
    ['Apr (1st yr)', '04-15'],
    ['dry season', null],
    ['', null],
  ])('planting day of %j', (printed, expected) => {
    expect(plantingDay(printed)).toBe(expected);
  });
});

describe('soils and methods', () => {
  // FAO-56 Table 19, middle of the printed ranges.
  test.each([
    ['sand', 0.12, 0.045, 4.5, 9],
    ['sandy-loam', 0.23, 0.11, 8, 17.5],
    ['silt-loam', 0.29, 0.15, 9.5, 21.5],
    ['clay', 0.36, 0.22, 10, 25.5],
  ])('%s', (code, fieldCapacity, wiltingPoint, readilyEvaporableWater, totalEvaporableWater) => {
    expect(LIBRARY_SOILS.find((soil) => soil.code === code)).toMatchObject({
      fieldCapacity,
      wiltingPoint,
      readilyEvaporableWater,
      totalEvaporableWater,
      evaporationDepth: 0.1,
    });
  });

  // FAO-56 Table 20: furrow, narrow bed 0.6–1.0; trickle 0.3–0.4; sprinkler, basin, border 1.0.
  test.each([
    ['furrow', 0.8],
    ['drip', 0.35],
    ['pivot', 1],
    ['border', 1],
  ])('wetted fraction of %s', (code, wettedFraction) => {
    expect(LIBRARY_METHODS.find((method) => method.code === code)?.wettedFraction).toBe(wettedFraction);
  });

  test('every method is possible and says what has no source', () => {
    for (const method of LIBRARY_METHODS) {
      expect(method.efficiency > 0.5 && method.efficiency <= 1).toBe(true);
      expect(method.triggerFraction > 0 && method.triggerFraction <= 1).toBe(true);
      expect(method.source).toContain('common practice, no source');
    }
  });
});
