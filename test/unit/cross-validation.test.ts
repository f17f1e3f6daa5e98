/** Leave-one-out on sites few enough to reckon by hand: three on the equator at 0, 1 and 3 hundredths of a degree. */
import { describe, expect, test } from 'vitest';
import { type CheckedSeries, chooseMethods, crossValidate, type SeriesToCheck } from '../../lib/weather/cross-validation.ts';
import { estimateBits, measuredWhere } from '../../lib/weather/measured-values.ts';
import { FALLBACK, type Site } from '../../lib/weather/variable.ts';

const NaN_ = Number.NaN;

function siteAt(code: string, longitude: number, elevation = NaN_): Site {
  return { code, name: code, longitude, latitude: 0, elevation, windHeight: 2 };
}

function check(sites: readonly Site[], series: SeriesToCheck, dayCount: number): CheckedSeries {
  return crossValidate({ sites, dayCount, series: [series], maximumSites: 8, lapseRate: 0.0065 })[0];
}

function errorsOf({ methods }: CheckedSeries, id: string) {
  const found = methods.find((method) => method.id === id);
  if (!found) throw new Error(`no ${id} among ${methods.map((method) => method.id)}`);
  return found;
}

const THREE = [siteAt('A', 0), siteAt('B', 0.01), siteAt('C', 0.03)];

describe('leave-one-out', () => {
  test('nearest and inverse distance on one day', () => {
    const found = check(THREE, { series: 'solarRadiation', values: Float64Array.from([10, 13, 19]) }, 1);
    // nearest: A from B +3, B from A −3, C from B −6
    expect(errorsOf(found, 'nearest')).toMatchObject({ n: 3 });
    expect(errorsOf(found, 'nearest').bias).toBeCloseTo(-2, 9);
    expect(errorsOf(found, 'nearest').rmse).toBeCloseTo(Math.sqrt(18), 9);
    expect(errorsOf(found, 'nearest').mae).toBeCloseTo(4, 9);
    // power 1: A from B (1) and C (3): (13·3 + 19)/4 = 14.5; B from A (1) and C (2): (10·2 + 19)/3 = 13; C from B (2) and A (3): (13·3 + 10·2)/5 = 11.8
    const power1 = errorsOf(found, 'inverse-distance-1');
    expect(power1.sites.map(({ bias }) => bias)).toEqual([expect.closeTo(4.5, 6), expect.closeTo(0, 6), expect.closeTo(-7.2, 6)]);
    expect(power1.rmse).toBeCloseTo(Math.sqrt((4.5 ** 2 + 7.2 ** 2) / 3), 6);
  });
  test('a missing neighbour drops out of its day; a missing target is not compared', () => {
    const values = Float64Array.from([10, 10, 13, NaN_, 19, 19]);
    const found = errorsOf(check(THREE, { series: 'solarRadiation', values }, 2), 'nearest');
    // second day: A from C (B is missing) +9, C from A −9
    expect(found.sites.map(({ n }) => n)).toEqual([2, 1, 2]);
    expect(found.sites[0].bias).toBeCloseTo((3 + 9) / 2, 9);
    expect(found.sites[2].bias).toBeCloseTo((-6 - 9) / 2, 9);
  });
  test('estimated values serve as neighbours and are not held against', () => {
    const measured = Uint8Array.from([1, 0, 1]);
    const found = errorsOf(check(THREE, { series: 'solarRadiation', values: Float64Array.from([10, 13, 19]), measured }, 1), 'nearest');
    expect(found.sites.map(({ n }) => n)).toEqual([1, 0, 1]);
    expect(found.bias).toBeCloseTo(-1.5, 9);
    expect(found.sites[1].bias).toBeNaN();
  });
  test('the lapse rate is for temperature, and takes the difference in height out', () => {
    const hill = [siteAt('A', 0, 0), siteAt('B', 0.01, 1000), siteAt('C', 0.03, 2000)];
    const values = Float64Array.from([20, 13.5, 7]);
    const temperature = check(hill, { series: 'airTemperatureMax', values }, 1);
    expect(errorsOf(temperature, 'nearest-lapse-rate').rmse).toBeCloseTo(0, 9);
    expect(errorsOf(temperature, 'nearest').rmse).toBeCloseTo(6.5, 9);
    expect(check(hill, { series: 'windSpeed2m', values }, 1).methods.map(({ id }) => id)).not.toContain('nearest-lapse-rate');
  });
  test('a fitted trend is fitted without the site it is held against', () => {
    // four on a line of −1 per 100 m and one far off it: without that one the slope of the others is exact
    const hill = [0, 100, 200, 300, 400].map((elevation, i) => siteAt(`H${i}`, i / 100, elevation));
    const values = Float64Array.from([10, 9, 8, 7, 30]);
    const found = errorsOf(check(hill, { series: 'windSpeed2m', values }, 1), 'nearest-fitted');
    expect(found.sites[4].bias).toBeCloseTo(6 - 30, 9);
  });
  test('a rain below nought is taken as none', () => {
    const hill = [0, 100, 200, 300, 400].map((elevation, i) => siteAt(`H${i}`, i / 100, elevation));
    const found = errorsOf(check(hill, { series: 'windSpeed2m', values: Float64Array.from([4, 3, 2, 1, 0]) }, 1), 'nearest-fitted');
    expect(found.rmse).toBeCloseTo(0, 9);
    const steep = check(hill, { series: 'windSpeed2m', values: Float64Array.from([4, 3, 2, 1, 0.5]) }, 1);
    // the fifth from the fourth: 1 − 1 = 0, which is 0.5 short
    expect(errorsOf(steep, 'nearest-fitted').sites[4].bias).toBeCloseTo(-0.5, 9);
  });
  test('kriging needs six sites', () => {
    const line = (count: number) => Array.from({ length: count }, (_, i) => siteAt(`L${i}`, (i * i) / 100));
    const ids = (count: number) =>
      check(
        line(count),
        { series: 'precipitation', values: Float64Array.from({ length: count }, (_, i) => i + Math.sin(i)) },
        1,
      ).methods.map(({ id }) => id);
    expect(ids(5)).not.toContain('kriging');
    expect(ids(6)).toContain('kriging');
  });
});

describe('the choice', () => {
  const method = (id: string, rmse: number, n = 5) => ({ id, rmse, n }) as CheckedSeries['methods'][number];
  const series = (methods: CheckedSeries['methods']): CheckedSeries => ({ series: 'windSpeed2m', gradient: NaN_, methods, variograms: [] });
  test('is the lowest RMSE, and the simpler where two tie', () => {
    expect(chooseMethods([series([method('a', 2), method('b', 1), method('c', 1.5)])]).windSpeed2m?.id).toBe('b');
    expect(chooseMethods([series([method('a', 1), method('b', 1)])]).windSpeed2m?.id).toBe('a');
  });
  test('is none where nothing could be compared', () => {
    expect(chooseMethods([series([method('a', NaN_, 0)])])).toEqual({});
  });
});

describe('measured values', () => {
  test('an assumed wind is no measurement, a dew point is', () => {
    const flags = [0, FALLBACK.windAssumed, FALLBACK.humidityFromDewPoint, FALLBACK.windHeightAssumed];
    expect([...measuredWhere(flags, 'windSpeed2m')]).toEqual([1, 0, 1, 1]);
    expect([...measuredWhere(flags, 'actualVapourPressure')]).toEqual([1, 1, 1, 1]);
    expect([...measuredWhere(flags, 'referenceEt')]).toEqual([1, 0, 1, 1]);
  });
  test('reference ET does not rest on rain', () => {
    expect(estimateBits('referenceEt') & FALLBACK.precipitationAssumedZero).toBe(0);
    expect(estimateBits('precipitation')).not.toBe(0);
  });
});
