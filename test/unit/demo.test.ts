/** The invented district: made the same way every time, and physically possible. */
import { createHash } from 'node:crypto';
import { beforeAll, describe, expect, test } from 'vitest';
import { cropLibrary } from '../../db/library/crops.ts';
import { LIBRARY_METHODS } from '../../db/library/methods.ts';
import { LIBRARY_SOILS } from '../../db/library/soils.ts';
import { dayNumber } from '../../lib/base/civil-date.ts';
import { mulberry32 } from '../../lib/base/random.ts';
import { lossCoefficients } from '../../lib/canal/loss-rule.ts';
import { buildTree } from '../../lib/canal/tree.ts';
import { harmonicAt, RAIN } from '../../lib/jobs/demo/climate.ts';
import { type DemoDistrict, demoDistrict } from '../../lib/jobs/demo/district.ts';
import { DEMO_SEED } from '../../lib/jobs/demo/load-demo.ts';
import { DRIVE, demoWeather, LAG_ONE, normalShare } from '../../lib/jobs/demo/weather.ts';
import type { SiteObservations, WeatherVariable } from '../../lib/weather/variable.ts';

const SEED = DEMO_SEED;
const sha = (value: unknown) => createHash('sha256').update(JSON.stringify(value)).digest('hex');

describe('district', () => {
  let demo: DemoDistrict;
  beforeAll(() => {
    demo = demoDistrict(SEED);
  });

  test('is the same for the same seed and another for another', () => {
    expect(sha(demoDistrict(SEED))).toBe(sha(demo));
    expect(sha(demoDistrict(SEED + 1))).not.toBe(sha(demo));
  });

  test('says that it is invented, and has the size of a real one', () => {
    expect(demo.district.invented).toBe(true);
    expect(demo.parcels.length).toBeGreaterThan(1050);
    expect(demo.parcels.length).toBeLessThan(1350);
    expect(demo.reaches.length).toBeGreaterThanOrEqual(55);
    expect(demo.turnouts.length).toBeGreaterThan(420);
    expect(demo.turnouts.length).toBeLessThan(600);
    expect(demo.seasons.map(({ startDate, endDate }) => dayNumber(endDate) - dayNumber(startDate) + 1)).toEqual([366, 365]);
  });

  test('parcels measure 2 to 75 ha and do not share a shape', () => {
    for (const parcel of demo.parcels) {
      expect(parcel.area).toBeGreaterThan(19_500);
      expect(parcel.area).toBeLessThan(750_000);
    }
    const corners = demo.parcels.map((parcel) => parcel.geometry.coordinates[0].length);
    expect(new Set(corners).size).toBeGreaterThan(8);
    expect(corners.filter((count) => count > 40).length).toBeGreaterThanOrEqual(15);
  });

  test('no point lies in two parcels', () => {
    const random = mulberry32(5);
    const boxes = demo.parcels.map(({ geometry: { coordinates } }) => ({ ring: coordinates[0], box: boxOf(coordinates[0]) }));
    let inside = 0;
    for (let i = 0; i < 6000; i++) {
      const { box } = boxes[Math.floor(random() * boxes.length)];
      const point = [box[0] + random() * (box[2] - box[0]), box[1] + random() * (box[3] - box[1])] as const;
      const owners = boxes.filter((each) => inBox(each.box, point) && inRing(each.ring, point)).length;
      expect(owners).toBeLessThanOrEqual(1);
      inside += owners;
    }
    expect(inside).toBeGreaterThan(4000);
  });

  test('rings are closed, counter-clockwise and inside the boundary', () => {
    for (const { geometry } of demo.parcels) {
      const [ring] = geometry.coordinates;
      expect(ring[0]).toEqual(ring.at(-1));
      expect(shoelace(ring)).toBeGreaterThan(0);
      expect(inRing(demo.district.boundary.coordinates[0], ring[0])).toBe(true);
    }
  });

  test('canals form a tree, flow downhill in the tree, and are sized', () => {
    const tree = buildTree(demo.reaches);
    expect(tree.codes[tree.head]).toBe('M1');
    for (const reach of demo.reaches) {
      expect(reach.capacity).toBeGreaterThan(0);
      expect(reach.length).toBeGreaterThan(300);
      expect(lossCoefficients(reach.lossRule, reach.length).perOutflow).toBeGreaterThanOrEqual(1);
    }
    expect(new Set(demo.reaches.map((reach) => reach.lossRule.kind)).size).toBe(4);
    expect(Math.max(...demo.reaches.map((reach) => reach.capacity))).toBe(demo.reaches[tree.head].capacity);
  });

  test('a reach starts where the one that feeds it ends', () => {
    const byCode = new Map(demo.reaches.map((reach) => [reach.code, reach]));
    for (const { parentCode, geometry, code } of demo.reaches) {
      const feeder = parentCode === null ? null : byCode.get(parentCode);
      if (!feeder) continue;
      const [longitude, latitude] = geometry.coordinates[0];
      const [x, y] = feeder.geometry.coordinates.at(-1) as [number, number];
      expect(Math.hypot(longitude - x, latitude - y), `${code} from ${parentCode}`).toBeLessThan(2e-3);
    }
  });

  test('every reference is to something that is there', () => {
    const library = cropLibrary();
    const has = {
      reach: new Set(demo.reaches.map(({ code }) => code)),
      turnout: new Map(demo.turnouts.map(({ code, reachCode }) => [code, reachCode])),
      soil: new Set(LIBRARY_SOILS.map(({ code }) => code)),
      method: new Set(LIBRARY_METHODS.map(({ code }) => code)),
      parcel: new Set(demo.parcels.map(({ code }) => code)),
      calendar: new Map(library.calendars.map(({ calendar, cropCode }) => [calendar.code, cropCode])),
      crop: new Set(library.crops.map(({ code }) => code)),
    };
    demo.parcels.forEach((parcel, i) => {
      expect(parcel.ordinal).toBe(i);
      expect(has.reach.has(parcel.reachCode)).toBe(true);
      expect(has.turnout.get(parcel.turnoutCode)).toBe(parcel.reachCode);
      expect(has.soil.has(parcel.soilCode)).toBe(true);
      expect(has.method.has(parcel.methodCode)).toBe(true);
    });
    for (const planting of demo.plantings) {
      expect(has.parcel.has(planting.parcelCode)).toBe(true);
      expect(has.crop.has(planting.cropCode)).toBe(true);
      expect(has.calendar.get(planting.calendarCode)).toBe(planting.cropCode);
    }
  });

  test('plantings lie in their season, in order, and never share more than the parcel', () => {
    for (const season of demo.seasons) {
      const plantings = demo.plantings.filter(({ seasonCode }) => seasonCode === season.code);
      expect(new Set(plantings.map(({ parcelCode }) => parcelCode)).size).toBe(demo.parcels.length);
      for (const { plantingDate, harvestDate, cutDates, areaShare } of plantings) {
        expect(plantingDate >= season.startDate && plantingDate <= season.endDate).toBe(true);
        if (harvestDate) expect(harvestDate > plantingDate).toBe(true);
        expect([plantingDate, ...cutDates]).toEqual([plantingDate, ...cutDates].sort());
        expect(areaShare).toBeGreaterThan(0);
        expect(areaShare).toBeLessThanOrEqual(1);
      }
      for (const [first, second] of doubled(plantings)) {
        const apart = first.harvestDate !== null && first.harvestDate <= second.plantingDate;
        expect(apart || first.areaShare + second.areaShare <= 1).toBe(true);
      }
    }
  });

  test('some land is cropped twice and annual crops rotate', () => {
    const cropsOf = (season: string) =>
      new Map(
        demo.plantings.filter((each) => each.seasonCode === season && each.sequence === 1).map((each) => [each.parcelCode, each.cropCode]),
      );
    const [one, two] = [cropsOf('2024'), cropsOf('2025')];
    expect([...one].filter(([code, crop]) => two.get(code) !== crop).length).toBeGreaterThan(300);
    expect(demo.plantings.filter(({ sequence, areaShare }) => sequence === 2 && areaShare === 1).length).toBeGreaterThan(60);
  });
});

function doubled(plantings: DemoDistrict['plantings']) {
  const first = new Map(plantings.filter(({ sequence }) => sequence === 1).map((each) => [each.parcelCode, each]));
  return plantings
    .filter(({ sequence }) => sequence === 2)
    .map((second) => [first.get(second.parcelCode) as (typeof plantings)[number], second] as const);
}

type Ring = readonly (readonly [number, number])[];

function boxOf(ring: Ring): [number, number, number, number] {
  const [xs, ys] = [ring.map(([x]) => x), ring.map(([, y]) => y)];
  return [Math.min(...xs), Math.min(...ys), Math.max(...xs), Math.max(...ys)];
}

function inBox(box: readonly number[], [x, y]: readonly [number, number]): boolean {
  return x >= box[0] && y >= box[1] && x <= box[2] && y <= box[3];
}

/** Crossing number. */
function inRing(ring: Ring, [x, y]: readonly [number, number]): boolean {
  let inside = false;
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    const [[xi, yi], [xj, yj]] = [ring[i], ring[j]];
    if (yi > y !== yj > y && x < ((xj - xi) * (y - yi)) / (yj - yi) + xi) inside = !inside;
  }
  return inside;
}

function shoelace(ring: Ring): number {
  const [x0, y0] = ring[0];
  return ring.slice(1).reduce((sum, [x, y], i) => sum + (ring[i][0] - x0) * (y - y0) - (x - x0) * (ring[i][1] - y0), 0);
}

describe('weather', () => {
  const weather = demoWeather(SEED);
  const series = (from: SiteObservations, name: WeatherVariable, site: number) =>
    (from.values[name] as Float64Array).subarray(site * from.dayCount, (site + 1) * from.dayCount);

  test('is the same for the same seed', () => {
    const bytes = (from: SiteObservations) => Object.values(from.values).map((values) => sha([...values]));
    expect(bytes(demoWeather(SEED))).toEqual(bytes(weather));
    expect(bytes(demoWeather(SEED + 1))).not.toEqual(bytes(weather));
    expect(weather.dayCount).toBe(731);
  });

  test('minimum below maximum, dew point below minimum, radiation within the clear sky', () => {
    weather.sites.forEach((site, s) => {
      const [max, min, dew, sun] = (
        ['air_temperature_max_c', 'air_temperature_min_c', 'dew_point_c', 'solar_radiation_mj_m2_d'] as const
      ).map((name) => series(weather, name, s));
      for (let day = 0; day < weather.dayCount; day++) {
        expect(min[day] >= max[day]).toBe(false);
        expect(dew[day] > min[day]).toBe(false);
        expect(sun[day] > clearSky(site.latitude, site.elevation, day)).toBe(false);
      }
    });
  });

  test('has the outages of a real network, but few', () => {
    const missing = Object.values(weather.values).reduce((sum, values) => sum + values.filter(Number.isNaN).length, 0);
    expect(missing).toBeGreaterThan(30);
    expect(missing).toBeLessThan(0.01 * 6 * 6 * weather.dayCount);
  });

  // FAO-56 Table 2: temperate arid regions, 4–7 mm/d at about 20 °C; Hargreaves–Samani (FAO-56 Eq. 52) on the generated temperatures.
  test('a July day asks for what an arid temperate valley asks for', () => {
    const [max, min] = (['air_temperature_max_c', 'air_temperature_min_c'] as const).map((name) => series(weather, name, 2));
    const july = Array.from({ length: 31 }, (_, i) => dayNumber('2024-07-01') - dayNumber('2023-10-01') + i);
    const ra = (day: number) => clearSky(weather.sites[2].latitude, 0, day) / 0.75;
    const evaporation = july.map((day) => 0.0023 * ((max[day] + min[day]) / 2 + 17.8) * Math.sqrt(max[day] - min[day]) * 0.408 * ra(day));
    expect(mean(evaporation)).toBeGreaterThan(4);
    expect(mean(evaporation)).toBeLessThan(9);
  });

  test('neighbours see the same storms and the same warm spells', () => {
    const [a, b] = [0, 1].map((site) => series(weather, 'air_temperature_max_c', site));
    expect(correlation(a, b)).toBeGreaterThan(0.95);
    const [wetA, wetB] = [2, 3].map((site) => series(weather, 'precipitation_mm', site).map((depth) => (depth > 0 ? 1 : 0)));
    expect(correlation(wetA, wetB)).toBeGreaterThan(0.5);
  });

  test('wet days come as often as the chain says, and wet as it says', () => {
    // Stationary share of a two-state chain: p01 / (1 + p01 − p11) (Richardson 1981), over the year.
    const share = mean(
      days((j) => harmonicAt(RAIN.wetAfterDry, j) / (1 + harmonicAt(RAIN.wetAfterDry, j) - harmonicAt(RAIN.wetAfterWet, j))),
    );
    const depths = Array.from({ length: 24 }, (_, seed) =>
      [...series(demoWeather(seed), 'precipitation_mm', 2)].filter((depth) => !Number.isNaN(depth)),
    );
    const all = depths.flat();
    const wet = all.filter((depth) => depth > 0);
    // 24 records of 731 days: standard error of the share about 0.004, of the mean depth about 2 %
    expect(Math.abs(wet.length / all.length - share)).toBeLessThan(0.015);
    const stated = mean(days((j) => harmonicAt(RAIN.meanDepth, j)));
    expect(Math.abs(mean(wet) / stated - 1)).toBeLessThan(0.08);
    // exponential: standard deviation equals mean
    expect(Math.abs(deviation(wet) / mean(wet) - 1)).toBeLessThan(0.08);
  });

  // Richardson & Wright (1984) (recalled): lag-zero correlations 0.633 Tmax–Tmin, 0.186 Tmax–Rs, −0.193 Tmin–Rs.
  test('the residual matrices give back the published correlations', () => {
    let m0 = [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ];
    for (let i = 0; i < 200; i++) m0 = add(times(times(LAG_ONE, m0), transpose(LAG_ONE)), times(DRIVE, transpose(DRIVE)));
    const expected = [
      [1, 0.633, 0.186],
      [0.633, 1, -0.193],
      [0.186, -0.193, 1],
    ];
    for (const [r, row] of expected.entries())
      for (const [c, value] of row.entries()) expect(Math.abs(m0[r][c] - value)).toBeLessThan(0.01);
  });

  // Standard normal table: Φ(1) = 0.8413447, Φ(1.96) = 0.9750021, Φ(−2.5) = 0.0062097.
  test.each([
    [0, 0.5],
    [1, 0.8413447],
    [1.96, 0.9750021],
    [-2.5, 0.0062097],
  ])('normal distribution at %d', (z, expected) => {
    expect(normalShare(z)).toBeCloseTo(expected, 6);
  });
});

/** Rso by FAO-56 Eq. 21, 23, 24, 25, 37. */
function clearSky(latitude: number, elevation: number, day: number): number {
  const date = new Date(Date.UTC(2023, 9, 1 + day));
  const j = Math.round((date.getTime() - Date.UTC(date.getUTCFullYear(), 0, 1)) / 86400000) + 1;
  const phi = (latitude * Math.PI) / 180;
  const delta = 0.409 * Math.sin((2 * Math.PI * j) / 365 - 1.39);
  const omega = Math.acos(-Math.tan(phi) * Math.tan(delta));
  const distance = 1 + 0.033 * Math.cos((2 * Math.PI * j) / 365);
  const ra =
    ((24 * 60) / Math.PI) *
    0.082 *
    distance *
    (omega * Math.sin(phi) * Math.sin(delta) + Math.cos(phi) * Math.cos(delta) * Math.sin(omega));
  return (0.75 + 2e-5 * elevation) * ra;
}

function days(of: (dayOfYear: number) => number): number[] {
  return Array.from({ length: 365 }, (_, i) => of(i + 1));
}

function mean(values: ArrayLike<number>): number {
  return Array.from(values).reduce((sum, value) => sum + value, 0) / values.length;
}

function deviation(values: readonly number[]): number {
  const centre = mean(values);
  return Math.sqrt(mean(values.map((value) => (value - centre) ** 2)));
}

/** Pearson, over days that both have. */
function correlation(a: Float64Array, b: Float64Array): number {
  const both = Array.from(a, (value, i) => [value, b[i]] as const).filter(([x, y]) => !Number.isNaN(x + y));
  const [ma, mb] = [mean(both.map(([x]) => x)), mean(both.map(([, y]) => y))];
  const product = mean(both.map(([x, y]) => (x - ma) * (y - mb)));
  return product / (deviation(both.map(([x]) => x)) * deviation(both.map(([, y]) => y)));
}

type Matrix = readonly (readonly number[])[];

function times(a: Matrix, b: Matrix): number[][] {
  return a.map((row) => b[0].map((_, c) => row.reduce((sum, value, k) => sum + value * b[k][c], 0)));
}

function add(a: Matrix, b: Matrix): number[][] {
  return a.map((row, r) => row.map((value, c) => value + b[r][c]));
}

function transpose(a: Matrix): number[][] {
  return a[0].map((_, c) => a.map((row) => row[c]));
}
