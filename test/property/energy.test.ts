/**
 * What must hold for any input: inverse pairs, symmetry, monotony, missing values, and the batch against the single day.
 */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { atmosphericPressure, elevationFromPressure } from '../../lib/energy/air.ts';
import {
  actualVapourPressureFromDewPoint,
  actualVapourPressureFromSpecificHumidity,
  dewPointFromActualVapourPressure,
  meanSaturationVapourPressure,
  saturationVapourPressure,
  specificHumidityFromActualVapourPressure,
  vapourPressureSlope,
} from '../../lib/energy/humidity.ts';
import { energyBudgetDay, type ReferenceDayInput, referenceEtDay, referenceEtDays } from '../../lib/energy/reference-day.ts';
import {
  daylightHours,
  degreesFromRadians,
  extraterrestrialRadiationPeriod,
  hourAngle,
  radiansFromDegrees,
  solarGeometry,
  sunDay,
} from '../../lib/energy/sun.ts';
import { windSpeedAt2m, windSpeedFrom2m } from '../../lib/energy/wind.ts';
import { between } from '../support/between.ts';

const SEEDED = { seed: 20260401, numRuns: 400 };

/** A day that weather can bring: Tmin below Tmax, air not above saturation, radiation not above the clear sky. */
const physicalDay: fc.Arbitrary<ReferenceDayInput> = fc
  .record({
    method: fc.constantFrom('fao56' as const, 'asce2005' as const),
    dayOfYear: fc.integer({ min: 1, max: 366 }),
    latitude: between(-65, 65),
    elevation: between(-100, 3500),
    airTemperatureMin: between(-20, 28),
    range: between(1, 20),
    humidity: between(0.15, 1),
    clearness: between(0.2, 1),
    windSpeed2m: between(0, 8),
  })
  .map(({ range, humidity, clearness, ...day }) => {
    const airTemperatureMax = day.airTemperatureMin + range;
    const ra = sunDay(day.latitude, day.dayOfYear).extraterrestrialRadiation;
    return {
      ...day,
      surface: 'short',
      airTemperatureMax,
      actualVapourPressure: humidity * saturationVapourPressure(day.airTemperatureMin),
      solarRadiation: clearness * 0.75 * ra,
    };
  });

function close(actual: number, expected: number, relative: number): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(relative * Math.max(1, Math.abs(expected)));
}

describe('inverse pairs return what went in', () => {
  const pairs: [string, fc.Arbitrary<number>, (x: number) => number, (x: number) => number][] = [
    ['dew point', between(-60, 45), actualVapourPressureFromDewPoint, dewPointFromActualVapourPressure],
    ['pressure and elevation', between(-400, 6000), atmosphericPressure, elevationFromPressure],
    ['degrees and radians', between(-360, 360), radiansFromDegrees, degreesFromRadians],
    ['wind from 3 m', between(0, 40), (u) => windSpeedAt2m(u, 3), (u) => windSpeedFrom2m(u, 3)],
    [
      'specific humidity',
      between(0, 0.04),
      (q) => actualVapourPressureFromSpecificHumidity(q, 95),
      (e) => specificHumidityFromActualVapourPressure(e, 95),
    ],
  ];
  test.each(pairs)('%s', (_name, values, there, back) => {
    fc.assert(
      fc.property(values, (x) => close(back(there(x)), x, 1e-9)),
      SEEDED,
    );
  });
});

describe('sun', () => {
  const latitude = between(-89, 89);
  const day = fc.integer({ min: 1, max: 366 });
  test('daylight north and south of the equator sums to 24 h', () => {
    fc.assert(
      fc.property(latitude, day, (phi, j) => {
        const hours = [phi, -phi].map((side) => daylightHours(sunDay(side, j).sunsetAngle));
        close(hours[0] + hours[1], 24, 1e-10);
      }),
      SEEDED,
    );
  });
  test('hourly radiation sums to the day, wherever the clock stands', () => {
    fc.assert(
      fc.property(latitude, day, between(-180, 180), (phi, j, longitude) => {
        const sun = sunDay(phi, j);
        const zone = 15 * Math.round(longitude / 15);
        let sum = 0;
        for (let h = 0; h < 24; h++) sum += extraterrestrialRadiationPeriod(sun, hourAngle(j, h + 0.5, longitude, zone), 1);
        close(sum, sun.extraterrestrialRadiation, 1e-9);
      }),
      SEEDED,
    );
  });
  test('radiation is finite and not negative from pole to pole', () => {
    fc.assert(
      fc.property(between(-90, 90), day, (phi, j) => {
        const { extraterrestrialRadiation, sunsetAngle } = sunDay(phi, j);
        expect(extraterrestrialRadiation).toBeGreaterThanOrEqual(0);
        expect(extraterrestrialRadiation).toBeLessThan(50);
        expect(sunsetAngle).toBeGreaterThanOrEqual(0);
        expect(sunsetAngle).toBeLessThanOrEqual(Math.PI);
      }),
      SEEDED,
    );
  });
  test('the table of a latitude holds the same bits as the single day', () => {
    fc.assert(
      fc.property(latitude, day, (phi, j) => {
        const [table, single] = [solarGeometry(phi), sunDay(phi, j)];
        expect(table.extraterrestrialRadiation[j]).toBe(single.extraterrestrialRadiation);
        expect(table.sunsetAngle[j]).toBe(single.sunsetAngle);
        expect(table.declination[j]).toBe(single.declination);
      }),
      SEEDED,
    );
  });
});

describe('humidity', () => {
  test('the slope is the derivative of saturation vapour pressure within 1e-4', () => {
    // 4098 and 0.6108 are rounded in print (17.27 × 237.3 = 4098.171), which is 4e-5 of the slope
    fc.assert(
      fc.property(between(-30, 50), (t) => {
        const h = 1e-4;
        const numeric = (saturationVapourPressure(t + h) - saturationVapourPressure(t - h)) / (2 * h);
        expect(Math.abs(vapourPressureSlope(t) - numeric)).toBeLessThan(1e-4);
      }),
      SEEDED,
    );
  });
  test('the mean of e° at the extremes is not below e° of the mean', () => {
    fc.assert(
      fc.property(between(-20, 40), between(0, 25), (min, range) => {
        const mean = saturationVapourPressure(min + range / 2);
        expect(meanSaturationVapourPressure(min + range, min)).toBeGreaterThanOrEqual(mean - 1e-12);
      }),
      SEEDED,
    );
  });
});

describe('reference ET of a day', () => {
  test('lies within 0 … 25 mm for weather that can be', () => {
    fc.assert(
      fc.property(physicalDay, (day) => {
        const et = referenceEtDay(day, null);
        expect(et).toBeGreaterThanOrEqual(0);
        expect(et).toBeLessThanOrEqual(25);
      }),
      SEEDED,
    );
  });
  test('rises with net radiation', () => {
    fc.assert(
      fc.property(physicalDay, between(0.5, 5), (day, more) => {
        const brighter = { ...day, solarRadiation: day.solarRadiation + more };
        const gain = energyBudgetDay(brighter).netRadiation - energyBudgetDay(day).netRadiation;
        const rise = referenceEtDay(brighter, null) - referenceEtDay(day, null);
        // both may be floored at 0, so the sign may vanish but never turn
        expect(rise * gain).toBeGreaterThanOrEqual(0);
      }),
      SEEDED,
    );
  });
  test('rises with the vapour pressure deficit at the same net radiation', () => {
    fc.assert(
      fc.property(physicalDay, between(0.05, 0.9), (day, share) => {
        const wanted = energyBudgetDay(day).netRadiation;
        const drier = { ...day, actualVapourPressure: day.actualVapourPressure * share };
        // drier air lets more longwave out; sunshine is raised until net radiation is the same again
        fc.pre(energyBudgetDay(drier).netRadiation <= wanted);
        const et = referenceEtDay({ ...drier, solarRadiation: radiationFor(drier, wanted) }, null);
        const before = referenceEtDay(day, null);
        expect(et).toBeGreaterThanOrEqual(before - 1e-9);
        if (before > 0 && day.windSpeed2m >= 0.5) expect(et).toBeGreaterThan(before);
      }),
      SEEDED,
    );
  });
  test('NaN in any input gives NaN out', () => {
    const names = [
      'latitude',
      'elevation',
      'airTemperatureMax',
      'airTemperatureMin',
      'actualVapourPressure',
      'solarRadiation',
      'windSpeed2m',
      'dayOfYear',
    ] as const;
    fc.assert(
      fc.property(physicalDay, fc.constantFrom(...names), (day, name) => {
        expect(referenceEtDay({ ...day, [name]: Number.NaN }, null)).toBeNaN();
      }),
      SEEDED,
    );
  });
  test('the working gives the same bits as the silent run', () => {
    fc.assert(
      fc.property(physicalDay, (day) => {
        const results: number[] = [];
        const told = referenceEtDay(day, { step: ({ result }) => results.push(result) });
        expect(told).toBe(referenceEtDay(day, null));
        expect(results.at(-1)).toBe(told);
        expect(results.every(Number.isFinite)).toBe(true);
      }),
      SEEDED,
    );
  });
  test('the budget closes: Rn = G + λET + H', () => {
    fc.assert(
      fc.property(physicalDay, (day) => {
        const { netRadiation, soilHeatFlux, latentHeatFlux, sensibleHeatFlux, netShortwave, netLongwave } = energyBudgetDay(day);
        close(soilHeatFlux + latentHeatFlux + sensibleHeatFlux, netRadiation, 1e-12);
        close(netShortwave - netLongwave, netRadiation, 1e-12);
      }),
      SEEDED,
    );
  });
});

/** Solar radiation at which a day has the wanted net radiation, by bisection. */
function radiationFor(day: ReferenceDayInput, wanted: number): number {
  let [low, high] = [day.solarRadiation, day.solarRadiation + 100];
  for (let i = 0; i < 80; i++) {
    const middle = (low + high) / 2;
    if (energyBudgetDay({ ...day, solarRadiation: middle }).netRadiation <= wanted) low = middle;
    else high = middle;
  }
  return low;
}

describe('many days at one place', () => {
  const series = fc.array(physicalDay, { minLength: 1, maxLength: 40 });
  const place = fc.record({
    method: fc.constantFrom('fao56' as const, 'asce2005' as const),
    latitude: between(-89, 89),
    elevation: between(0, 3000),
  });
  test('each is bit for bit the single day, NaN days included', () => {
    fc.assert(
      fc.property(series, place, fc.nat(39), (days, here, hole) => {
        const list = days.map((day, i) => ({
          ...day,
          ...here,
          solarRadiation: i === hole ? Number.NaN : day.solarRadiation,
        }));
        const out = referenceEtDays(columnsOf(list), new Float64Array(list.length));
        list.forEach((day, i) => {
          expect(Object.is(out[i], referenceEtDay(day, null))).toBe(true);
        });
      }),
      SEEDED,
    );
  });
  test('lengths that differ are refused with both numbers', () => {
    fc.assert(
      fc.property(series, (list) => {
        expect(() => referenceEtDays(columnsOf(list), new Float64Array(list.length + 1))).toThrow(`${list.length} days`);
      }),
      { ...SEEDED, numRuns: 20 },
    );
  });
});

function columnsOf(days: ReferenceDayInput[]) {
  const column = (name: 'airTemperatureMax' | 'airTemperatureMin' | 'actualVapourPressure' | 'solarRadiation' | 'windSpeed2m') =>
    Float64Array.from(days, (day) => day[name]);
  return {
    method: days[0].method,
    surface: days[0].surface,
    sun: solarGeometry(days[0].latitude),
    elevation: days[0].elevation,
    dayOfYear: Uint16Array.from(days, (day) => day.dayOfYear),
    airTemperatureMax: column('airTemperatureMax'),
    airTemperatureMin: column('airTemperatureMin'),
    actualVapourPressure: column('actualVapourPressure'),
    solarRadiation: column('solarRadiation'),
    windSpeed2m: column('windSpeed2m'),
  };
}
