/** Units of errors and the little map of the interpolation screen. Conversions are exact (NIST SP 811, Appendix B). */
import { describe, expect, test } from 'vitest';
import { errorUnit, inSentence, squareOf } from '../../app/(desk)/weather/desk/interpolation/error-units.ts';
import { mapFrame } from '../../app/(desk)/weather/desk/interpolation/map-frame.ts';
import { interpolationRows, trendOf } from '../../lib/http/contract/interpolation.ts';

describe('units of an error', () => {
  test('a difference of temperature is a Fahrenheit degree 1.8 times, without the offset', () => {
    expect(errorUnit('°C', 'us')).toMatchObject({ unit: '°F', factor: 1.8 });
    expect(errorUnit('°C', 'metric')).toMatchObject({ unit: '°C', factor: 1 });
  });
  test('depth and wind by their exact factors; the rest stays metric', () => {
    expect(25.4 * errorUnit('mm', 'us').factor).toBeCloseTo(1, 12);
    expect(0.44704 * errorUnit('m/s', 'us').factor).toBeCloseTo(1, 12);
    expect(errorUnit('MJ m⁻² d⁻¹', 'us')).toMatchObject({ unit: 'MJ m⁻² d⁻¹', factor: 1 });
  });
  test('squares and sentences', () => {
    expect([squareOf('mm'), squareOf('m/s'), squareOf('MJ m⁻² d⁻¹')]).toEqual(['mm²', '(m/s)²', '(MJ m⁻² d⁻¹)²']);
    expect(inSentence('Reference ET')).toBe('reference ET');
  });
});

describe('the map', () => {
  const places = [
    { longitude: 10, latitude: 59 },
    { longitude: 11, latitude: 61 },
  ];
  test('east and north measure alike in the middle: at 60° a degree of longitude is half one of latitude', () => {
    const { point } = mapFrame(places, null, 760);
    const [west, south] = point(10, 59);
    expect((point(11, 59)[0] - west) / (south - point(10, 60)[1])).toBeCloseTo(0.5, 2);
  });
  test('holds the boundary too, and draws its rings', () => {
    const boundary = {
      type: 'Polygon',
      coordinates: [
        [
          [9, 58],
          [12, 58],
          [12, 62],
          [9, 58],
        ],
      ],
    };
    const frame = mapFrame(places, boundary, 760);
    expect(frame.outline).toHaveLength(1);
    expect(frame.point(9, 62)[0]).toBeGreaterThanOrEqual(0);
    expect(frame.point(12, 58)[1]).toBeLessThanOrEqual(frame.height);
    expect(mapFrame(places, null, 760).outline).toEqual([]);
  });
  test('one place makes a map as well', () => {
    expect(mapFrame([places[0]], null, 760).point(10, 59).every(Number.isFinite)).toBe(true);
  });
});

describe('the table', () => {
  test('kriging rows carry the semivariogram of their trend', () => {
    const method = (name: string) => ({ method: name, name, chosen: false, n: 1, bias: 0, rmse: 0, mae: 0, msdr: null });
    const variogram = (trend: string, nugget: number) =>
      ({ trend, model: 'linear', nugget, partial_sill: 1, range_km: 2, classes: [] }) as const;
    const rows = interpolationRows({
      items: [
        {
          variable: 'precipitation_mm',
          unit: 'mm',
          methods: [method('nearest'), method('kriging'), method('kriging-fitted')],
          variograms: [variogram('none', 3), variogram('fitted', 4)],
        },
      ],
    } as never);
    expect(rows.map(({ nugget }) => nugget)).toEqual([null, 3, 4]);
    expect(trendOf('kriging-lapse-rate')).toBe('lapse-rate');
  });
});
