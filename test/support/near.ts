import { expect } from 'vitest';

/** Within a tolerance of what was printed, both ends included. */
export function near(actual: number, expected: number, tolerance: number): void {
  expect(Math.abs(actual - expected), `${actual} against ${expected}`).toBeLessThanOrEqual(tolerance);
}
