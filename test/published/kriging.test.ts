/**
 * Semivariograms and kriging against published numbers and an outside tool.
 *
 * The meuse classes and their fit are those printed in the regression output of R gstat (also got again with R gstat 2.1-0 of Debian 12); the points
 * themselves come with R sp under the GPL and are not kept here. Other expected numbers were made with the same gstat on the twenty invented sites below.
 */
import { describe, expect, test } from 'vitest';
import { crossValidate } from '../../lib/weather/cross-validation.ts';
import { nearSites, placeOnPlane } from '../../lib/weather/interpolation.ts';
import { krigingWeights, prepareKriging } from '../../lib/weather/kriging.ts';
import { chooseVariogram, fitVariogram, type VariogramModel } from '../../lib/weather/variogram.ts';
import { experimentalVariogram } from '../../lib/weather/variogram-classes.ts';
import { validation } from '../support/validation.ts';

const check = validation(import.meta.url, {
  title: 'Kriging: variogram and predictions',
  source: 'Pebesma (2004), gstat, regression test on the open meuse data; Isaaks & Srivastava (1989), chapters 11–12',
  provenance: 'outside',
});

type Row = readonly [x: number, y: number, value: number];

function planeOf(rows: readonly Row[]) {
  return placeOnPlane(rows.map(([x, y], i) => ({ code: `V${String(i).padStart(2, '0')}`, x, y })));
}

function krigedAt(rows: readonly Row[], model: VariogramModel, place: readonly [number, number]) {
  const placed = planeOf(rows);
  const { weights, variance } = krigingWeights(prepareKriging(placed, model), nearSites(place, placed, 8));
  return { value: weights.reduce((sum, { site, weight }) => sum + weight * rows[site][2], 0), variance, weights };
}

const MEUSE_CLASSES = [
  [57, 79.29244, 0.1234479],
  [299, 163.97367, 0.2162185],
  [419, 267.36483, 0.3027859],
  [457, 372.73542, 0.4121448],
  [547, 478.4767, 0.4634128],
  [533, 585.34058, 0.5646933],
  [574, 693.14526, 0.5689683],
  [564, 796.18365, 0.6186769],
  [589, 903.1465, 0.6471479],
  [543, 1011.29177, 0.6915705],
  [500, 1117.86235, 0.7033984],
  [477, 1221.3281, 0.603877],
  [452, 1329.16407, 0.6517158],
  [457, 1437.2562, 0.5665318],
  [415, 1543.20248, 0.5748227],
].map(([pairCount, distance, semivariance]) => ({ pairCount, distance, semivariance }));

describe('fit to the classes of ln zinc at the Meuse', () => {
  test('spherical: nugget 0.05066, partial sill 0.59060, range 897.0, weighted squares 9.011e-6', () => {
    const { model, weightedSse } = fitVariogram(MEUSE_CLASSES, 'spherical');
    expect(model.nugget).toBeCloseTo(0.05066, 5);
    check.held(model.partialSill, 0.5906, 1e-5);
    expect(model.range).toBeCloseTo(897.0, 1);
    check.held(weightedSse, 9.011195e-6, 1e-11);
  });
  test('exponential, exp(−h/a): no nugget, sill 0.71865, a 449.76 (gstat)', () => {
    const { model, weightedSse } = fitVariogram(MEUSE_CLASSES, 'exponential');
    expect(model.nugget).toBe(0);
    check.held(model.partialSill, 0.7186525804, 1e-4);
    check.held(model.range, 449.7580025, 0.05);
    expect(weightedSse).toBeLessThanOrEqual(1.628328e-5);
  });
  test('no kind fits better than the spherical', () => {
    expect(chooseVariogram(MEUSE_CLASSES).model.kind).toBe('spherical');
  });
  test('forced to 0.5 1 2 3 3 the nugget stays at 0: sill 7.878195, range 1567.77', () => {
    // classes of 100 m up to 500 m: pairs and mean distances by gstat on the same points
    const forced = [
      [52, 77.01898, 0.5],
      [263, 156.23373, 1],
      [381, 252.07842, 2],
      [430, 351.32465, 3],
      [475, 449.81046, 3],
    ].map(([pairCount, distance, semivariance]) => ({ pairCount, distance, semivariance }));
    const { model, weightedSse } = fitVariogram(forced, 'spherical');
    expect(model.nugget).toBe(0);
    check.held(model.partialSill, 7.878195, 1e-5);
    expect(model.range).toBeCloseTo(1567.77, 2);
    expect(weightedSse).toBeCloseTo(0.001217055, 8);
  });
});

describe('the seven samples of Isaaks & Srivastava (1989), chapter 12', () => {
  // recalled from the book, not re-read; recomputed independently. Their 10 (1 − exp(−3h/10)) has a = 10/3 here.
  const samples: Row[] = [
    [61, 139, 477],
    [63, 140, 696],
    [64, 129, 227],
    [68, 128, 646],
    [71, 140, 606],
    [73, 141, 791],
    [75, 128, 783],
  ];
  const model: VariogramModel = { kind: 'exponential', nugget: 0, partialSill: 10, range: 10 / 3 };
  test('weights, estimate and variance', () => {
    const { value, variance, weights } = krigedAt(samples, model, [65, 137]);
    const bySample = weights.toSorted((a, b) => a.site - b.site).map(({ weight }) => Math.round(weight * 1000) / 1000);
    expect(bySample).toEqual([0.173, 0.318, 0.129, 0.086, 0.151, 0.057, 0.086]);
    check.held(value, 592.73, 0.01);
    check.held(variance, 8.956, 0.001);
  });
  test('twice the sill: the same estimate, variance 17.912', () => {
    const { value, variance } = krigedAt(samples, { ...model, partialSill: 20 }, [65, 137]);
    check.held(value, 592.73, 0.01);
    check.held(variance, 17.912, 0.002);
  });
});

/** Twenty invented sites on a plane [km] with an invented value. */
const SITES: Row[] = [
  [28.4, 22.3, 18.3],
  [30.6, 4.2, 21.84],
  [12.1, 27.5, 15.83],
  [37.3, 6.2, 21.46],
  [55, 20.9, 13.46],
  [30.3, 32.1, 15.25],
  [42.2, 8.6, 18.72],
  [0.2, 23.7, 13.31],
  [8.5, 8.5, 18.78],
  [33.2, 39.4, 15.32],
  [49.6, 12.9, 17.94],
  [33.2, 19, 18.16],
  [19.8, 26.4, 16.77],
  [22.2, 38, 14.91],
  [36.8, 25.8, 15.83],
  [25.6, 17.2, 18.9],
  [2.6, 35.2, 13.41],
  [16.7, 37.2, 14.98],
  [55.8, 29.7, 12.19],
  [42.1, 0.6, 20.29],
];

describe('twenty invented sites against R gstat 2.1-0 (krige, krige.cv, variogram; nmax = 8)', () => {
  test('classes of 5 km… to 30 km', () => {
    const classes = experimentalVariogram(
      planeOf(SITES),
      SITES.map(([, , value]) => value),
      { cutoff: 30, count: 6 },
    );
    const expected = [
      [18, 7.826207671, 1.641880556],
      [23, 12.745736541, 2.134093478],
      [32, 18.016964934, 4.649639062],
      [25, 22.816810327, 6.455378],
      [29, 27.582702169, 11.98012069],
    ];
    expect(classes.map(({ pairCount }) => pairCount)).toEqual(expected.map(([count]) => count));
    classes.forEach(({ distance, semivariance }, i) => {
      expect(distance).toBeCloseTo(expected[i][1], 8);
      expect(semivariance).toBeCloseTo(expected[i][2], 8);
    });
  });

  const PLACES: (readonly [number, number])[] = [
    [10, 10],
    [25.5, 20],
    [40, 5],
    [55, 35],
    [33, 38],
    [12.6, 27.7],
    [-15, 60],
    [30, 20],
  ];
  const MODELS: [VariogramModel, (readonly [value: number, variance: number])[]][] = [
    [
      { kind: 'spherical', nugget: 0.4, partialSill: 7, range: 30 },
      [
        [18.50397244, 2.010268213],
        [18.39149123, 1.720746953],
        [20.4315772, 1.693004826],
        [13.10790924, 3.966576632],
        [15.25825353, 1.475509928],
        [15.78520233, 1.060535108],
        [14.66600554, 9.89863508],
        [18.33830976, 1.584342213],
      ],
    ],
    [
      { kind: 'exponential', nugget: 0.4, partialSill: 7, range: 12 },
      [
        [18.43151679, 2.678443405],
        [18.38298457, 2.410268948],
        [20.39710187, 2.395172928],
        [13.59827092, 4.844240483],
        [15.32034272, 1.97488779],
        [15.80537686, 1.289553084],
        [14.60970193, 9.442555692],
        [18.33745114, 2.224211334],
      ],
    ],
    [
      { kind: 'gaussian', nugget: 0.4, partialSill: 7, range: 15 },
      [
        [18.62330214, 0.9369559695],
        [18.46356807, 0.6239425241],
        [20.43539939, 0.5835804186],
        [12.9958922, 1.9460611449],
        [15.13018699, 0.6899954731],
        [15.7071042, 0.6900143229],
        [14.67497439, 10.0590449751],
        [18.33198957, 0.58151661],
      ],
    ],
    [
      // no sill: 0.2 per km
      { kind: 'linear', nugget: 0.4, partialSill: 0.2, range: 1 },
      [
        [18.48313566, 1.4053867012],
        [18.37637366, 1.2096182564],
        [20.38298485, 1.1879756255],
        [12.6006042, 2.5675021386],
        [15.26099925, 1.1095806585],
        [15.75877824, 0.8840753975],
        [13.19116298, 12.1705155459],
        [18.30605828, 1.1271664451],
      ],
    ],
  ];
  test.each(MODELS)('predictions and variances at eight places: $kind', (model, expected) => {
    PLACES.forEach((place, i) => {
      const { value, variance } = krigedAt(SITES, model, place);
      check.held(value, expected[i][0], 2e-8);
      check.held(variance, expected[i][1], 2e-8);
    });
  });

  const checked = crossValidate({
    sites: SITES.map((_, i) => ({ code: `V${i}`, name: `V${i}`, longitude: 0, latitude: 0, elevation: Number.NaN, windHeight: 2 })),
    placed: planeOf(SITES),
    dayCount: 1,
    maximumSites: 6,
    lapseRate: 0.0065,
    series: [{ series: 'solarRadiation', values: Float64Array.from(SITES, ([, , value]) => value) }],
  })[0];
  test('leave-one-out by kriging, with the semivariogram fitted here given to gstat', () => {
    const found = checked.methods.find((method) => method.id === 'kriging');
    expect(checked.variograms[0].fit.model).toMatchObject({ kind: 'gaussian' });
    expect(checked.variograms[0].fit.model.range).toBeCloseTo(50.6391, 3);
    expect(found?.bias).toBeCloseTo(-0.01807881056, 8);
    expect(found?.rmse).toBeCloseTo(0.96042271437, 8);
    expect(found?.mae).toBeCloseTo(0.76976450039, 8);
    expect(found?.msdr).toBeCloseTo(1.18334801498, 8);
  });
  test.each([
    ['nearest', -0.0715, 1.706735187, 1.0925],
    ['inverse-distance-1', 0.3372853786, 1.6491355371, 1.3214473868],
    ['inverse-distance-2', 0.282025756, 1.408923621, 1.151549559],
    ['inverse-distance-3', 0.2296431512, 1.2486459019, 1.0095574496],
  ])('leave-one-out by %s: bias %d, RMSE %d, MAE %d', (id, bias, rmse, mae) => {
    const found = checked.methods.find((method) => method.id === id);
    expect(found?.n).toBe(20);
    expect(found?.bias).toBeCloseTo(bias, 8);
    expect(found?.rmse).toBeCloseTo(rmse, 8);
    expect(found?.mae).toBeCloseTo(mae, 8);
  });
});
