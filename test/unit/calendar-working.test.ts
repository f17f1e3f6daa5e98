/** The working of calendars and coefficients: every special case tells its numbers, and they lead to the coefficient of the day. */
import { describe, expect, test } from 'vitest';
import type { Crop, WorkingStep } from '../../lib/season/types.ts';
import { explainDay } from '../../lib/season/working.ts';
import { BEAN, BEAN_DAYS, oneParcel, planting, type StripOptions } from '../support/drawn-strip.ts';

/** Day of the run; a bean of 22 May (day 141) is in its 60th day. */
const DAY = 200;

function told(
  options: Partial<StripOptions>,
  day = DAY,
): { steps: readonly WorkingStep[]; basal: number; step: (symbol: string) => WorkingStep } {
  const { steps, results } = explainDay(oneParcel({ plantings: [planting()], ...options }), 0, day);
  return {
    steps,
    basal: results.basal_crop_coefficient,
    step(symbol) {
      const found = steps.filter((each) => each.symbol === symbol).at(-1);
      if (!found) throw new Error(`no step ${symbol} among ${steps.map((each) => each.symbol).join(' ')}`);
      return found;
    },
  };
}

const input = (step: WorkingStep, symbol: string) => step.inputs.find((each) => each.symbol === symbol)?.value ?? Number.NaN;

describe('calendar', () => {
  test('degree days since the planting: 60 days of 15 °C d', () => {
    const thermal = { base: 6, ceiling: 40, initial: 375, development: 375, mid: 450, late: 300 };
    const { step } = told({ plantings: [planting({ calendar: { ...BEAN_DAYS, thermal } })] });
    expect(step('ΣGDD').result).toBeCloseTo(60 * 15, 9);
    expect(step('ΣGDD').name).toContain('mid stage');
    expect(step('ΣGDD').name).toContain('2023-05-22');
    expect(input(step('ΣGDD'), 'sum of the mid stage')).toBe(450);
  });

  test('a start rule with the day it was met on', () => {
    const calendar = { ...BEAN_DAYS, start: { kind: 'air-temperature', threshold: 18, days: 1, latest: 60, offset: 2 } } as const;
    const weather = (d: number) => (d < 160 ? { max: 20, min: 8 } : { max: 26, min: 12 });
    const { step } = told({ plantings: [planting({ calendar })], weather });
    expect(step('start').result).toBe(162);
    expect(step('start').expression).toContain('met on 2023-06-10');
    expect(step('start').expression).toContain('2 days after it');
    expect(input(step('start'), 'mean of the days')).toBe(19);
  });

  test('a rule not met says so', () => {
    const calendar = { ...BEAN_DAYS, start: { kind: 'rain', depth: 30, days: 3, latest: 20 } } as const;
    const { step } = told({ plantings: [planting({ calendar })] });
    expect(step('start').result).toBe(161);
    expect(step('start').expression).toContain('not met by 2023-06-11');
  });

  test('a killing frost', () => {
    const calendar = { ...BEAN_DAYS, killingFrost: { threshold: -2, notBefore: 30 } };
    const weather = (d: number) => ({ max: 20, min: d === 210 ? -3 : 8 });
    const { step } = told({ plantings: [planting({ calendar })], weather });
    expect(step('frost').result).toBe(210);
    expect(input(step('frost'), 'Tmin')).toBe(-3);
  });
});

describe('coefficients', () => {
  test('the plain case ends in the coefficient of the day, adjusted to its stage', () => {
    const { step, basal } = told({});
    expect(step('Kcb').result).toBe(basal);
    expect(step('Kcb mid').result).toBe(basal);
    expect(step('Kcb mid').source).toBe('FAO-56 Eq. 70');
  });

  test('a canopy is told equation by equation, and can be followed on a calculator', () => {
    const crop: Crop = { ...BEAN, type: 'orchard', basalMid: 0.9, basalEnd: 0.65, heightMax: 4, rootDepthMin: 0.8 };
    const canopy = { cover: 0.3, height: 3, stomatalFactor: 0.9 };
    const { step, basal } = told({ plantings: [planting({ crop, canopy })] });
    const mid = step('Kcb mid');
    const [full, density] = [step('Kcb full').result, step('Kd').result];
    expect(density).toBeCloseTo(0.6, 12);
    const byHand = input(mid, 'Kcb ground') + density * (input(mid, 'Fr') * full - input(mid, 'Kcb ground'));
    expect(mid.result).toBeCloseTo(byHand, 12);
    expect(basal).toBe(mid.result);
    expect(step('h').result).toBe(3);
  });

  test('coefficients of a cutting cycle', () => {
    const crop: Crop = { ...BEAN, type: 'forage-cut', rootDepthMin: 0.8 };
    const cycles = [
      { basalInitial: 0.3, basalMid: 1, basalEnd: 0.4 },
      { basalInitial: 0.2, basalMid: 0.8, basalEnd: 0.4 },
    ];
    const calendar = { ...BEAN_DAYS, cycles, laterCycle: { initial: 5, development: 10, mid: 10, late: 5 } };
    const { step } = told({ plantings: [planting({ crop, calendar })] }, 141 + 100 + 16);
    expect(step('Kcb,table').name).toContain('cycle 2');
    expect(input(step('Kcb,table'), 'Kcb mid')).toBe(0.8);
    expect(input(step('Kcb mid'), 'Kcb mid,table')).toBe(0.8);
  });

  test('a table on tall reference ET is not adjusted, and brought over by the ratio of the day', () => {
    const { step, steps, basal } = told({ plantings: [planting({ crop: { ...BEAN, surface: 'tall', basalMid: 0.95 } })] });
    expect(step('Kcb').result).toBe(0.95);
    expect(step('Kcb mid').expression).toContain('tall reference ET');
    expect(basal).toBeCloseTo(0.95 * step('K').result, 12);
    expect(steps.filter(({ name }) => name.includes('adjusted to the climate'))).toEqual([]);
  });

  test('observed cover', () => {
    const observedBasal = { days: [190, 210], values: [0.6, 0.8] };
    const { step, basal } = told({ parcel: { observedBasal } });
    expect(basal).toBeCloseTo(0.7, 12);
    expect(step('Kcb').name).toContain('observed');
    expect(step('Kcb').inputs.map(({ value }) => value)).toEqual([0.6, 0.8]);
  });

  test('mulch', () => {
    const { step } = told({ plantings: [planting({ mulch: { kind: 'organic', cover: 0.4 } })] });
    expect(step('fm').result).toBeCloseTo(0.8, 12);
  });

  test('single coefficients: wettings of the initial stage, Kc adjusted by Eq. 62', () => {
    const weather = (d: number) => ({ max: 28, min: 14, rain: d % 5 === 0 ? 12 : 0 });
    const settings = { coefficient: 'single', irrigate: false } as const;
    const { step, basal, steps } = told({ settings, weather }, 150);
    // rain of 12 mm on days 145, 150, 155, 160, 165: 5 events in 25 days
    expect(input(step('tw'), 'n')).toBe(5);
    expect(step('tw').result).toBeCloseTo(25 / 5.5, 12);
    expect(step('Kc ini').result).toBe(basal);
    expect(step('Kc mid').source).toBe('FAO-56 Eq. 62 and 65');
    expect(steps.some(({ symbol }) => symbol === 'Kcb')).toBe(false);
  });

  test('single coefficients: bare ground has the Kc of its rain, block by block', () => {
    const weather = (d: number) => ({ max: 28, min: 14, rain: d % 6 === 0 ? 12 : 0 });
    const settings = { coefficient: 'single', irrigate: false } as const;
    // days 30 … 59: rain on 30, 36, 42, 48, 54
    const { step, basal } = told({ settings, weather }, 40);
    expect(input(step('tw'), 'L')).toBe(30);
    expect(input(step('tw'), 'n')).toBe(5);
    expect(step('Kc').result).toBe(basal);
    expect(basal).toBeGreaterThan(0.2);
    expect(basal).toBeLessThan(1.15);
  });
});
