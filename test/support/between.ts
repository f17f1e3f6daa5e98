import fc from 'fast-check';

/** A number between two limits, never NaN. */
export function between(min: number, max: number): fc.Arbitrary<number> {
  return fc.double({ min, max, noNaN: true });
}
