/**
 * Frost against published forms and tables. Forms of sky radiation, application rates and the psychrometric slope are recalled; critical temperatures
 * stand as two extension services reprint them. Expected values were reckoned apart from this project.
 */
import { describe, expect, test } from 'vitest';
import { CRITICAL_TABLES, findCriticalTable } from '../../db/library/frost.ts';
import { bruntFall } from '../../lib/energy/frost-cooling.ts';
import { airTemperatureOfWetBulb, STANDARD_PRESSURE, saturationPoint, wetBulbTemperature } from '../../lib/energy/frost-humidity.ts';
import { leafTemperature } from '../../lib/energy/frost-leaf.ts';
import { applicationRate, heatOfFreezing, RATES, VINE_RATES, windRates } from '../../lib/energy/frost-protection.ts';
import { fitMinimumLine } from '../../lib/energy/frost-regression.ts';
import { blackBodyFlux, clearNightNetRadiation, cloudFactorOfShare, type SkyFormula } from '../../lib/energy/frost-sky.ts';
import { cloudFactor } from '../../lib/energy/radiation.ts';
import { near } from '../support/near.ts';
import { validation } from '../support/validation.ts';

const check = validation(import.meta.url, {
  title: 'Frost: night radiation, wet bulb, heat of freezing, critical temperatures',
  source:
    'Brunt, Idso 1981, Brutsaert, Swinbank, FAO-56 Eq. 39; psychrometer equation; Washington State University critical temperatures (extension reprints)',
  provenance: 'recomputed',
});

describe('Net long-wave radiation of a clear night', () => {
  const FORMULAS: readonly SkyFormula[] = ['brunt', 'idso', 'brutsaert', 'swinbank', 'fao56'];
  describe.each([
    [0, 0.4, 315.7, [-110.5, -76.5, -101.6, -99.0, -79.4]],
    [0, 0.61, 315.7, [-100.8, -66.9, -88.3, -99.0, -72.8]],
    [-2, 0.4, 306.5, [-107.3, -73.5, -98.4, -99.2, -77.1]],
    [5, 0.6, 339.4, [-108.9, -75.2, -96.1, -97.8, -78.6]],
  ] as const)('%s °C, ea %s kPa', (temperature, vapour, black, expected) => {
    test('black body', () => check.held(blackBodyFlux(temperature), black, 0.05, { unit: 'W m⁻²' }));
    test.each(FORMULAS.map((formula, at) => [formula, expected[at]] as const))('%s', (formula, net) => {
      check.held(clearNightNetRadiation(formula, temperature, vapour), net, 0.05, { unit: 'W m⁻²' });
    });
  });

  test('a typical radiation frost loses 70 to 110 W m⁻² by any of the forms', () => {
    for (const formula of FORMULAS) {
      const net = clearNightNetRadiation(formula, 0, 0.5);
      expect(net).toBeLessThan(-70);
      expect(net).toBeGreaterThan(-110);
    }
  });

  test('cloud of a share is FAO-56 Eq. 35 in Eq. 39: n/N = 0.4 gives Rs/Rso 0.6', () => {
    near(cloudFactorOfShare(0.6), cloudFactor((0.25 + 0.5 * 0.4) / 0.75), 1e-12);
    near(cloudFactorOfShare(0.6), 0.46, 1e-12);
  });
});

describe('Air temperature at which to start and stop so that the wet bulb stands at 0, −1, −2 °C', () => {
  const TABLE: readonly (readonly [number, readonly (number | null)[]])[] = [
    [0, [0.0, null, null]],
    [-1, [0.6, -1.0, null]],
    [-2, [1.2, -0.4, -2.0]],
    [-3, [1.8, 0.2, -1.4]],
    [-4, [2.3, 0.7, -0.9]],
    [-5, [2.8, 1.2, -0.4]],
    [-6, [3.3, 1.7, 0.1]],
    [-8, [4.1, 2.5, 0.9]],
    [-10, [4.9, 3.2, 1.6]],
  ];
  const rows = TABLE.flatMap(([dew, temperatures]) => temperatures.map((air, at) => [dew, -at, air] as const));
  test.each(rows)('dew point %s, wet bulb %s', (dew, wet, air) => {
    const found = airTemperatureOfWetBulb(wet, dew, STANDARD_PRESSURE);
    if (air === null) {
      expect(found).toBeNaN();
      return;
    }
    check.held(found, air, 0.05, { unit: '°C' });
    near(wetBulbTemperature(found, dew, STANDARD_PRESSURE), wet, 1e-5);
  });
});

test('frost point lies above dew point below freezing: −10 °C over water is −8.9 °C over ice (Smithsonian tables, recalled)', () => {
  check.held(saturationPoint(-10), -8.9, 0.05, { unit: '°C', provenance: 'recalled' });
  expect(saturationPoint(2)).toBe(2);
});

describe('Heat of freezing water', () => {
  test.each([
    [1, 92.9, 0.05],
    [2.5, 232, 0.5],
  ])('%s mm/h', (rate, heat, half) => check.held(heatOfFreezing(rate), heat, half, { unit: 'W m⁻²' }));
});

describe('Brunt’s square-root law', () => {
  test('is the surface of a half-space that loses a constant flux: its heat, integrated numerically, is the flux times the time', () => {
    // Carslaw & Jaeger: T(z, t) = (2 F/k) [√(κt/π) exp(−z²/4κt) − (z/2) erfc(z / 2√(κt))]; here by finite differences
    const [capacity, diffusivity, flux, hours] = [2.1e6, 5e-7, -80, 12];
    near(bruntFall(flux, hours, capacity * Math.sqrt(diffusivity)), surfaceFall({ capacity, diffusivity, flux: -flux, hours }), 0.05);
  });
});

/** Fall at the surface of a half-space by explicit finite differences, with none of the closed form. */
function surfaceFall({ capacity, diffusivity, flux, hours }: { capacity: number; diffusivity: number; flux: number; hours: number }) {
  const [step, count] = [0.005, 200];
  const dt = (0.4 * step * step) / diffusivity;
  let temperature = new Float64Array(count);
  for (let time = 0; time < hours * 3600; time += dt) {
    const next = temperature.slice();
    for (let i = 0; i + 1 < count; i++) {
      const below = (temperature[i + 1] - temperature[i]) / step;
      const above = i === 0 ? flux / (capacity * diffusivity) : (temperature[i] - temperature[i - 1]) / step;
      // half a cell at the surface
      next[i] = temperature[i] + (diffusivity * dt * (below - above)) / (i === 0 ? step / 2 : step);
    }
    temperature = next;
  }
  return -temperature[0];
}

describe('Leaf under a clear sky (Campbell & Norman 1998, recalled)', () => {
  test('one to three degrees below the air on a still night, as field manuals say', () => {
    const still = leafTemperature({ airTemperature: 0, netRadiation: -85, windSpeed: 0.3, width: 0.05 });
    expect(still).toBeLessThan(-1);
    expect(still).toBeGreaterThan(-3);
  });
  test('its own balance closes: loss to the sky is what air and ground bring to both sides', () => {
    const [air, net, wind, width] = [-1, -80, 0.7, 0.05];
    const below = air - leafTemperature({ airTemperature: air, netRadiation: net, windSpeed: wind, width });
    const convection = 2 * 1.4 * 0.135 * Math.sqrt(wind / (0.72 * width)) * 29.3 * below;
    const radiation = 2 * 4 * 5.670374419e-8 * 272.15 ** 3 * below;
    near(convection + radiation, 80, 1e-6);
  });
});

describe('Line of the minimum', () => {
  test('gives back a plane, and the leave-one-out error of a hand-made refit', () => {
    const nights = 24;
    const airTemperature = Array.from({ length: nights }, (_, i) => 4 + ((i * 7) % 11));
    const dewPoint = Array.from({ length: nights }, (_, i) => -8 + ((i * 5) % 9));
    const plane = airTemperature.map((t, i) => 0.5 * t + 0.3 * dewPoint[i] - 4);
    const exact = fitMinimumLine({ airTemperature, dewPoint, minimum: plane });
    near(exact?.ofAirTemperature ?? Number.NaN, 0.5, 1e-9);
    near(exact?.ofDewPoint ?? Number.NaN, 0.3, 1e-9);
    near(exact?.constant ?? Number.NaN, -4, 1e-9);
    const minimum = plane.map((value, i) => value + Math.sin(3 * i));
    let squares = 0;
    for (let out = 0; out < nights; out++) {
      const keep = (_: number, i: number) => i !== out;
      const [a, b, c] = planeOf(airTemperature.filter(keep), dewPoint.filter(keep), minimum.filter(keep));
      squares += (minimum[out] - a * airTemperature[out] - b * dewPoint[out] - c) ** 2;
    }
    near(fitMinimumLine({ airTemperature, dewPoint, minimum })?.error ?? Number.NaN, Math.sqrt(squares / nights), 1e-9);
  });
  test('is not fitted to 19 nights, nor where dew point and temperature move as one', () => {
    const some = Array.from({ length: 19 }, (_, i) => i);
    expect(fitMinimumLine({ airTemperature: some, dewPoint: some.map((i) => (i * 7) % 5), minimum: some })).toBeNull();
    const more = Array.from({ length: 30 }, (_, i) => i);
    expect(fitMinimumLine({ airTemperature: more, dewPoint: more.map((i) => i - 4), minimum: more })).toBeNull();
  });
});

/** Normal equations of three unknowns by elimination. */
function planeOf(x: readonly number[], y: readonly number[], z: readonly number[]): readonly [number, number, number] {
  const columns = [x, y, x.map(() => 1)];
  const rows = columns.map((a) => [...columns, z].map((b) => a.reduce((sum, value, i) => sum + value * b[i], 0)));
  for (let p = 0; p < 3; p++) {
    for (let r = 0; r < 3; r++) {
      if (r === p) continue;
      const factor = rows[r][p] / rows[p][p];
      rows[r] = rows[r].map((value, c) => value - factor * rows[p][c]);
    }
  }
  return [rows[0][3] / rows[0][0], rows[1][3] / rows[1][1], rows[2][3] / rows[2][2]];
}

describe('Critical temperatures, °F printed at 10 % and 90 % kill', () => {
  const PRINTED: Readonly<Record<string, string>> = {
    apple: '15/2 18/10 23/15 27/21 28/24 28/25 28/25',
    peach: '18/1 21/5 23/9 25/15 26/21 27/24 28/25',
    pear: '15/0 20/6 24/15 25/19 26/22 27/23 28/24',
    'sweet-cherry': '17/5 22/9 25/14 26/17 27/21 27/24 28/25',
    apricot: '27/22 28/25',
    plum: '27/23 28/25',
  };
  test.each(Object.entries(PRINTED))('%s', (code, printed) => {
    const stages = findCriticalTable(code)?.stages ?? [];
    expect(stages.map((stage) => `${stage.tenthKilledPrinted}/${stage.mostKilledPrinted}`).join(' ')).toBe(printed);
  });
  test('every table is here', () => expect(CRITICAL_TABLES.map(({ code }) => code)).toEqual(Object.keys(PRINTED)));
  test.each([
    [28, -2.22],
    [25, -3.89],
    [15, -9.44],
    [2, -16.67],
  ])('%s °F is %s °C', (fahrenheit, celsius) => {
    const all = CRITICAL_TABLES.flatMap(({ stages }) =>
      stages.flatMap((s) => [
        [s.tenthKilledPrinted, s.tenthKilled],
        [s.mostKilledPrinted, s.mostKilled],
      ]),
    );
    const found = all.find(([printed]) => printed === fahrenheit);
    check.held(found?.[1] ?? Number.NaN, celsius, 0.005, { unit: '°C' });
  });
});

describe('Application rates (recalled)', () => {
  test('tables as recalled', () => {
    expect(RATES).toEqual({
      tall: { 30: [2.5, 3.8, 5.1], 60: [3.2, 4.5, 5.8] },
      short: { 30: [1.8, 3, 4.2], 60: [2.3, 3.5, 4.7] },
    });
    expect(VINE_RATES.map(({ rates }) => rates)).toEqual([
      [2, 2.8, 3.8],
      [2.5, 3.3, 4.3],
      [2.5, 3.3, 4.6],
      [3, 3.8, 5.1],
    ]);
  });
  test('read off between the printed temperatures, and not beyond them', () => {
    const wanted = { windSpeed: 1, height: 'tall', rotation: 30 } as const;
    near(applicationRate({ ...wanted, minimum: -5 }), 4.45, 1e-12);
    near(applicationRate({ ...wanted, minimum: -1 }), 2.5, 1e-12);
    near(applicationRate({ ...wanted, minimum: -6 }), 5.1, 1e-12);
    expect(applicationRate({ ...wanted, minimum: -6.1 })).toBeNaN();
    expect(applicationRate({ ...wanted, minimum: -3, windSpeed: 2.6 })).toBeNaN();
    expect(applicationRate({ ...wanted, minimum: Number.NaN })).toBeNaN();
  });
  test('26 °F at 5–8 mph: 0.14 in/h is 3.556 mm/h at −3.33 °C', () => {
    const row = windRates()[1];
    near(row.leafTemperature, -3.3333, 1e-4);
    near(row.rates[2], 3.556, 1e-9);
  });
});
