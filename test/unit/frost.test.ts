/** Frost nights: the night's course, what is learnt from a record, stages, and the working. Expected values are reckoned here or follow from definitions. */
import { describe, expect, it } from 'vitest';
import { BUD_BASE, findCriticalTable } from '../../db/library/frost.ts';
import { mulberry32 } from '../../lib/base/random.ts';
import type { WorkingStep } from '../../lib/base/working.ts';
import { completeWeather } from '../../lib/energy/complete-weather.ts';
import { bruntMinimum, FROST_GROUNDS, hoursUntil, nightTemperature, thermalAdmittance } from '../../lib/energy/frost-cooling.ts';
import { sunsetTemperature } from '../../lib/energy/frost-evening.ts';
import { type Evening, nightEstimate } from '../../lib/energy/frost-night.ts';
import { type ParcelNight, plantNight, plantProtection } from '../../lib/energy/frost-plant.ts';
import { frostRisk, stageReached } from '../../lib/energy/frost-stage.ts';
import { siteHours } from '../../lib/energy/hourly-day.ts';
import { budThermalTime, countStart, eveningOf, isLeafless } from '../../lib/jobs/frost-evening.ts';
import { stationNights } from '../../lib/jobs/frost-site.ts';
import { chosenCrops, parseStages, plantingStage } from '../../lib/jobs/frost-stages.ts';
import type { FrostRecord } from '../../lib/jobs/frost-weather.ts';
import { near } from '../support/near.ts';

const PLACE = { longitude: -116, latitude: 43.6, elevation: 800, windHeight: 2, zoneHours: -7 };
const OPTIONS = { sky: 'fao56', ground: 'moist', method: 'auto' } as const;

/** Two years of days whose evenings and minima follow a line exactly; every tenth day is overcast, with a line of its own. */
function record(hours = false): FrostRecord {
  const dayCount = 730;
  const random = mulberry32(7);
  const values = Object.fromEntries(
    ['air_temperature_max_c', 'air_temperature_min_c', 'dew_point_c', 'wind_speed_m_s', 'solar_radiation_mj_m2_d'].map((name) => [
      name,
      new Float64Array(dayCount),
    ]),
  );
  let minimum = 0;
  for (let day = 0; day < dayCount; day++) {
    const overcast = day % 10 === 0;
    const maximum = 12 + 6 * random();
    const dew = -9 + 5 * random();
    values.air_temperature_max_c[day] = maximum;
    values.air_temperature_min_c[day] = minimum;
    values.dew_point_c[day] = dew;
    values.wind_speed_m_s[day] = 1.5;
    values.solar_radiation_mj_m2_d[day] = overcast ? 1 : 60;
    minimum = (overcast ? 3 : -5) + 0.2 * (dew + 5);
  }
  const site = { code: 'S', name: 'S', ...PLACE };
  const observed = { sites: [site], startDate: '2022-01-01', dayCount, values };
  const completed = completeWeather(observed, { defaultElevation: 0, radiationCoefficient: 0.16 });
  const days = { firstDay: 18993, dayCount };
  const temperature = Float64Array.from({ length: dayCount * 24 }, (_, hour) => 20 - (hour % 24));
  const stored = {
    hour_air_temperature_c: temperature,
    hour_dew_point_c: temperature.map(() => -4),
    hour_wind_speed_m_s: temperature.map(() => 2),
  };
  return {
    ...{ source: 'made', role: 'observed', observed, completed },
    stations: [
      { site, zoneHours: PLACE.zoneHours, elevation: PLACE.elevation, hours: hours ? siteHours(PLACE, days, stored, null) : null },
    ],
  };
}

describe('the night’s course', () => {
  const night = { airTemperature: 8, minimum: -4, nightLength: 12 };
  it('comes down by the root of time and back', () => {
    for (const hours of [0, 1, 5.5, 12]) near(hoursUntil(night, nightTemperature(night, hours)), hours, 1e-9);
    expect(nightTemperature(night, 3)).toBe(2);
    expect(hoursUntil(night, 9)).toBe(0);
    expect(hoursUntil(night, -4.1)).toBe(Number.POSITIVE_INFINITY);
    expect(hoursUntil(night, Number.NaN)).toBeNaN();
  });

  it('slows at the frost point: moister air never ends colder, all else alike', () => {
    const admittance = thermalAdmittance(FROST_GROUNDS.moist);
    const given = { airTemperature: 6, netRadiation: -80, admittance, nightLength: 12, pressure: 95 };
    let before = Number.NEGATIVE_INFINITY;
    for (let dewPoint = -25; dewPoint <= 6; dewPoint += 0.5) {
      const minimum = bruntMinimum({ ...given, dewPoint });
      expect(minimum).toBeGreaterThanOrEqual(before - 1e-9);
      before = minimum;
    }
    expect(bruntMinimum({ ...given, dewPoint: Number.NaN })).toBeNaN();
    expect(bruntMinimum({ ...given, dewPoint: -3, netRadiation: 5 })).toBe(6);
  });
});

describe('what a record teaches', () => {
  it('is the line of nights of the same kind, the night itself left out', () => {
    const made = record();
    // 2023-04-02 is day 456, clear; 2023-04-06 is day 460, overcast
    const [clear] = stationNights({ record: made, date: '2023-04-02', given: null, options: OPTIONS });
    // days 411 to 501 without 456, and 46 to 135 of the year before: 180 nights, of which 18 are overcast
    expect(clear.past.line).toMatchObject({ nights: 162 });
    near(clear.past.line?.ofDewPoint ?? Number.NaN, 0.2, 1e-6);
    near(clear.estimate.minimum, clear.observed, 1e-6);
    near(clear.estimate.error, 0, 1e-6);
    expect(clear.estimate.method).toBe('regression');
    const overcast = stationNights({ record: made, date: '2023-04-06', given: null, options: OPTIONS })[0];
    expect(overcast.past.brunt.nights).toBe(17);
    // 17 overcast nights are too few for a line
    expect(overcast.estimate).toMatchObject({ method: 'brunt', errorFrom: 'record' });
  });

  it('has an assumed error where there is no record', () => {
    const evening: Evening = { airTemperature: 5, dewPoint: -4, windSpeed: 1, cloudFactor: 1 };
    const found = nightEstimate(evening, { elevation: 0, nightLength: 11 }, { line: null, bruntError: Number.NaN }, OPTIONS);
    expect(found).toMatchObject({ method: 'brunt', error: 4, errorFrom: 'assumed' });
  });

  it('takes the evening from the hour of sunset where there are hours', () => {
    const day = 456;
    const found = eveningOf({ record: record(true), station: 0, day });
    expect(found.from).toBe('hours');
    // mean of the hour h is 20 − h at h + 0.5, so at sunset t it is 20.5 − t; sunset of 2 April at 43.6° N, 116° W, zone −7
    near(found.evening.airTemperature, 20.5 - sunsetOf(92), 1e-3);
    near(found.evening.dewPoint, Math.min(-4, found.evening.airTemperature), 1e-6);
    near(found.evening.windSpeed, 2, 1e-9);
  });

  it('estimates it from the day otherwise, never moister than saturated', () => {
    const made = record();
    const { evening, from } = eveningOf({ record: made, station: 0, day: 456 });
    expect(from).toBe('daily');
    const { air_temperature_max_c: high, air_temperature_min_c: low } = made.observed.values as Record<string, Float64Array>;
    near(evening.airTemperature, sunsetTemperature(high[456], low[456], daylightOf(92)), 1e-6);
    near(evening.windSpeed, 1, 1e-9);
    expect(evening.dewPoint).toBeLessThanOrEqual(evening.airTemperature);
  });
});

/** FAO-56 Eq. 24, 25, 34 at 43.6° N. */
function daylightOf(dayOfYear: number): number {
  const delta = 0.409 * Math.sin((2 * Math.PI * dayOfYear) / 365 - 1.39);
  return (24 / Math.PI) * Math.acos(-Math.tan((43.6 * Math.PI) / 180) * Math.tan(delta));
}

/** Standard clock at 116° W, zone −7 h: FAO-56 Eq. 31 to 33. */
function sunsetOf(dayOfYear: number): number {
  const b = (2 * Math.PI * (dayOfYear - 81)) / 364;
  const season = 0.1645 * Math.sin(2 * b) - 0.1255 * Math.cos(b) - 0.025 * Math.sin(b);
  return 12 - (0.06667 * (105 - 116) + season) + daylightOf(dayOfYear) / 2;
}

describe('thermal time', () => {
  it('is summed from the first of January, from July in the south', () => {
    expect(countStart(19449, 40)).toBe(19358); // 2023-04-02, 2023-01-01
    expect(countStart(19449, -35)).toBe(19174); // 2022-07-01
    const made = record();
    const { air_temperature_max_c: high, air_temperature_min_c: low } = made.observed.values as Record<string, Float64Array>;
    let sum = 0;
    for (let day = 365; day <= 456; day++) sum += Math.max(0, (high[day] + low[day]) / 2 - (43 - 32) / 1.8);
    near(budThermalTime({ record: made, station: 0, day: 456 }, BUD_BASE), sum, 1e-6);
  });
  it('is not told where more than a week is missing', () => {
    const made = record();
    expect(budThermalTime({ record: made, station: 0, day: 730 + 10 }, BUD_BASE)).toBeNaN();
  });
  it('leaves are off in November and December, in May and June in the south', () => {
    expect([isLeafless('2023-11-01', 40), isLeafless('2023-10-31', 40), isLeafless('2023-05-01', -30)]).toEqual([true, false, true]);
  });
});

describe('stages', () => {
  const apple = findCriticalTable('apple')?.stages ?? [];
  it('are reached in order', () => {
    expect(stageReached(apple, 0)).toBeNull();
    expect(stageReached(apple, 1e4)?.name).toBe('Bloom and post bloom');
    expect(stageReached(apple, Number.NaN)).toBeNull();
    for (const { stages } of [findCriticalTable('pear'), findCriticalTable('peach')].flatMap((table) => table ?? []))
      expect(stages.map(({ begins }) => begins)).toEqual(stages.map(({ begins }) => begins).toSorted((a, b) => a - b));
  });

  const of = (choices: string, more: { crop?: string; frostTable?: string | null; thermalTime?: number; leafless?: boolean } = {}) =>
    plantingStage(parseStages(choices), { crop: 'apple-x', frostTable: 'apple', thermalTime: 130, leafless: false, ...more });
  it('are those chosen for the crop, then for the table, then by thermal time', () => {
    expect(of('').stage).toBe('tight-cluster');
    expect(of('apple:full-pink')).toMatchObject({ stage: 'full-pink', from: 'chosen' });
    expect(of('apple:full-pink,apple-x:sweet-cherry.first-white')).toMatchObject({ table: 'sweet-cherry', stage: 'first-white' });
    expect(of('apple-x:-1.1')).toMatchObject({ stage: 'own', tenthKilled: -1.1, mostKilled: Number.NaN });
    expect(of('', { leafless: true })).toMatchObject({ from: 'dormant', tenthKilled: Number.NaN });
    expect(of('', { thermalTime: 1 })).toMatchObject({ from: 'dormant' });
    expect(of('', { thermalTime: Number.NaN })).toMatchObject({ from: 'unknown' });
    expect(of('', { frostTable: null })).toMatchObject({ from: 'unknown', table: null });
    expect(chosenCrops(parseStages('apple:auto,grape-wine:-1'))).toEqual(['grape-wine']);
  });
  it.each([
    ['apple', /crop:stage/],
    ['apple:ripe', /no stage of apple/],
    ['grape-wine:bloom', /names no table/],
    ['grape-wine:-99', /outside limits/],
  ])('%s is refused', (text, message) => expect(() => parseStages(text)).toThrow(message));

  it('bear what the table says', () => {
    const stage = { tenthKilled: -2, mostKilled: -4 };
    const risks = [
      [-4, -6],
      [-2, -3],
      [-1.9, -2],
      [-1, -1.9],
      [Number.NaN, -3],
    ].map(([expected, low]) => frostRisk({ expected, low }, stage));
    expect(risks).toEqual(['severe', 'damaging', 'possible', 'none', null]);
    expect(frostRisk({ expected: -9, low: -9 }, { tenthKilled: -2, mostKilled: Number.NaN })).toBe('damaging');
  });
});

describe('the working', () => {
  it('has the numbers of the computation, for any evening', () => {
    const random = mulberry32(11);
    for (let i = 0; i < 200; i++) {
      const airTemperature = -2 + 14 * random();
      const evening = {
        airTemperature,
        dewPoint: airTemperature - 12 * random(),
        windSpeed: 3 * random(),
        cloudFactor: 0.2 + 0.8 * random(),
      };
      const steps: WorkingStep[] = [];
      const trace = { step: (step: WorkingStep) => steps.push(step) };
      const sky = (['fao56', 'brunt', 'idso', 'brutsaert', 'swinbank'] as const)[i % 5];
      const options = { ...OPTIONS, sky };
      const place = { elevation: 1500 * random(), nightLength: 9 + 5 * random() };
      const none = { line: null, bruntError: Number.NaN };
      const told = nightEstimate(evening, place, none, options, trace);
      expect(told).toEqual(nightEstimate(evening, place, none, options));
      const night: ParcelNight = { ...evening, ...place, minimum: told.minimum, error: told.error };
      const plant = plantNight(night, sky, trace);
      expect(plant).toEqual(plantNight(night, sky));
      const protection = plantProtection(night, plant.start, { area: 1e4, height: 'tall', rotation: 60 }, trace);
      const last = (symbol: string) => steps.findLast((step) => step.symbol === symbol)?.result;
      expect(last('Tmin')).toBe(told.minimum);
      expect(last('Rn')).toBe(plant.netRadiation);
      expect(last('Tl')).toBe(plant.leaf);
      expect(last('V')).toBe(protection.volume);
      // what a reader reckons from the numbers put in
      const given = (symbol: string, input: string) =>
        steps.findLast((step) => step.symbol === symbol)?.inputs.find((each) => each.symbol === input)?.value ?? Number.NaN;
      near(-(1 - given('Rn', 'ε')) * given('Rn', 'σ') * given('Rn', 'TK') ** 4 * given('Rn', 'f'), plant.netRadiation, 1e-9);
      near(given('Tl', 'Tmin') + given('Tl', 'Rn') / (2 * given('Tl', 'cp') * (given('Tl', 'gHa') + given('Tl', 'gr'))), plant.leaf, 1e-9);
      expect(plant.leaf).toBeLessThan(night.minimum);
    }
  });
});
