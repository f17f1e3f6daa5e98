/** Packed days come back as they were, whatever they hold, and plain arrays of earlier kernels are still read. */
import { describe, expect, test } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import { packParcelDays, storedArray, storedFlags } from '../../lib/season/daily-store.ts';
import { isPacked, mostPackedBytes, packDays, packFlags, unpackDays, unpackFlags } from '../../lib/season/day-pack.ts';
import { runSeason } from '../../lib/season/kernel.ts';
import { DAILY_VARIABLE_COUNT } from '../../lib/season/types.ts';
import { randomSeason } from '../support/random-season.ts';

function packed(plain: Uint16Array, days: number, like: number[]): Uint8Array {
  const into = new Uint8Array(mostPackedBytes(like.length, days) + 3);
  return into.slice(3, packDays(plain, 0, days, like, into, 3));
}

describe('packed days', () => {
  test('every kind of row: zero, still, wild, at the ends of the range, like another', () => {
    const days = 97;
    const random = mulberry32(7);
    const rows = [
      () => 0,
      () => 10000,
      () => Math.floor(65536 * random()),
      (d: number) => (d % 2) * 65535,
      (d: number) => 3 * d,
      (d: number) => (d === 50 ? 120 : 0),
      (d: number) => (d < 40 ? 7 : 8),
      () => Math.floor(300 * random()),
    ];
    const plain = Uint16Array.from({ length: rows.length * days }, (_, i) => rows[Math.floor(i / days)](i % days));
    for (const like of [rows.map(() => -1), [-1, -1, -1, 2, 0, -1, 5, 7 - 1]]) {
      const bytes = packed(plain, days, like);
      expect(isPacked(bytes)).toBe(true);
      expect(unpackDays(bytes)).toEqual(plain);
    }
  });

  test('steps on both sides of every length of code', () => {
    const steps = [0, 1, -1, 79, 80, -80, -81, 8271, 8272, -8272, -8273, 32767, -32768];
    const values = [30000];
    for (const step of steps) values.push((values[values.length - 1] + step) & 0xffff, 30000);
    const plain = Uint16Array.from(values);
    expect(unpackDays(packed(plain, plain.length, [-1]))).toEqual(plain);
  });

  test('still days of every count up to three runs', () => {
    for (let still = 0; still <= 100; still++) {
      const plain = Uint16Array.from({ length: still + 2 }, (_, d) => (d === 0 ? 5 : d <= still ? 5 : 6));
      expect(unpackDays(packed(plain, plain.length, [-1]))).toEqual(plain);
    }
  });

  test('a season of the kernel comes back to the last bit in less than half its bytes, in any place of a buffer', () => {
    const days = 200;
    const { daily } = runSeason(randomSeason({ seed: 3, parcels: 12, days }));
    const size = DAILY_VARIABLE_COUNT * days;
    const into = new Uint8Array(mostPackedBytes(DAILY_VARIABLE_COUNT, days) + 1);
    let sum = 0;
    for (let parcel = 0; parcel < 12; parcel++) {
      const bytes = into.slice(1, packParcelDays(daily, parcel, days, into, 1));
      sum += bytes.byteLength;
      expect(storedArray(bytes)).toEqual(daily.slice(parcel * size, (parcel + 1) * size));
    }
    expect(sum).toBeLessThan(12 * size);
  });

  test('plain arrays of earlier kernels are read as they are, sixteen variables and all', () => {
    const plain = Uint16Array.from({ length: 16 * 30 }, (_, i) => (i * 977) % 65536);
    expect(storedArray(new Uint8Array(plain.buffer))).toEqual(plain);
  });
});

describe('packed flags', () => {
  test('come back as they were; without days, in one run, and in as many runs as days', () => {
    for (const flags of [[], [0, 0, 0], [1 << 31, 1 << 30, 5, 5, 0]]) {
      const from = Uint32Array.from([9, ...flags]);
      const bytes = packFlags(from, 1, flags.length);
      expect([...(unpackFlags(bytes, flags.length) ?? [])]).toEqual(flags.map((bits) => bits >>> 0));
      expect(storedFlags(bytes, flags.length)).toEqual(Uint32Array.from(flags));
    }
  });
});
