/** Hours and days of readings, for any record (seeded). */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  bridgeHours,
  dailyExtremes,
  dailyMeans,
  dailySums,
  HOURS_PER_DAY,
  hourlyMeans,
  hourlySums,
  usableHours,
} from '../../lib/weather/hours.ts';

const DAYS = 3;
const SPAN = { firstDay: 19_000, dayCount: DAYS };
const steps = fc.constantFrom(1, 5, 10, 15, 20, 30, 60, 120, 180);

/** A whole record with one reading each step, some missing. */
const records = steps.chain((step) => {
  const count = (DAYS * 1440) / step;
  const reading = fc.oneof(
    { weight: 9, arbitrary: fc.double({ min: -50, max: 50, noNaN: true }) },
    { weight: 1, arbitrary: fc.constant(Number.NaN) },
  );
  return fc.array(reading, { minLength: count, maxLength: count }).map((values) => ({
    step,
    centres: Float64Array.from(values, (_, i) => SPAN.firstDay * 1440 + (i + 0.5) * step),
    values: Float64Array.from(values),
  }));
});

describe('hours', () => {
  it('means lie within the readings of the day, extremes are readings', () => {
    fc.assert(
      fc.property(records, (record) => {
        const hours = hourlyMeans(record, SPAN);
        const means = dailyMeans(hours, 1);
        const [high, low] = [dailyExtremes(record, SPAN, 'max'), dailyExtremes(record, SPAN, 'min')];
        for (let day = 0; day < DAYS; day++) {
          if (Number.isNaN(means[day])) continue;
          expect(means[day]).toBeLessThanOrEqual(high[day] + 1e-9);
          expect(means[day]).toBeGreaterThanOrEqual(low[day] - 1e-9);
          expect(record.values).toContain(high[day]);
        }
      }),
      { seed: 11, numRuns: 60 },
    );
  });

  it('no amount is lost or made: hours of a whole record sum to its readings', () => {
    fc.assert(
      fc.property(records, (record) => {
        const whole = { ...record, values: record.values.map((value) => (Number.isNaN(value) ? 0 : Math.abs(value))) };
        const total = whole.values.reduce((sum, value) => sum + value, 0);
        expect(dailySums(hourlySums(whole, SPAN), 24).reduce((sum, value) => sum + value, 0)).toBeCloseTo(total, 6);
      }),
      { seed: 12, numRuns: 60 },
    );
  });

  it('bridging changes no measured hour, fills at most what it may, and stays between the neighbours', () => {
    const series = fc.array(
      fc.oneof({ weight: 5, arbitrary: fc.double({ min: 0, max: 4, noNaN: true }) }, { weight: 1, arbitrary: fc.constant(Number.NaN) }),
      {
        minLength: DAYS * HOURS_PER_DAY,
        maxLength: DAYS * HOURS_PER_DAY,
      },
    );
    fc.assert(
      fc.property(series, fc.integer({ min: 0, max: 6 }), (values, most) => {
        const hours = Float64Array.from(values);
        const { hours: filled, bridged } = bridgeHours(hours, most);
        const counts = usableHours(hours);
        for (let hour = 0; hour < hours.length; hour++) {
          if (!Number.isNaN(hours[hour])) expect(filled[hour]).toBe(hours[hour]);
          else if (!Number.isNaN(filled[hour])) expect(filled[hour] >= 0 && filled[hour] <= 4).toBe(true);
        }
        for (let day = 0; day < DAYS; day++) {
          expect(bridged[day]).toBeLessThanOrEqual(most);
          if (HOURS_PER_DAY - counts[day] > most) expect(bridged[day]).toBe(0);
          expect(usableHours(filled)[day]).toBe(counts[day] + bridged[day]);
        }
      }),
      { seed: 13, numRuns: 100 },
    );
  });
});
