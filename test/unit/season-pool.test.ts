/** The season pool: the same numbers as one thread, its errors, abort and close. */

import { afterAll, describe, expect, test } from 'vitest';
import { RangeViolation } from '../../lib/base/errors.ts';
import { makeSeasonPool } from '../../lib/jobs/season-pool.ts';
import { runSeason } from '../../lib/season/kernel.ts';
import { DAILY_VARIABLE_COUNT } from '../../lib/season/types.ts';
import { randomSeason } from '../support/random-season.ts';

const pool = makeSeasonPool(2);
afterAll(() => pool.close());

describe('season pool', () => {
  const input = randomSeason({ seed: 21, parcels: 150, days: 120 });

  test('two threads give what one gives, to the last bit', async () => {
    const expected = runSeason(input);
    const got = await pool.run(input);
    expect(got.daily).toEqual(expected.daily);
    expect(got.flags).toEqual(expected.flags);
    expect(got.stageEt).toEqual(expected.stageEt);
    expect(got.stageDays).toEqual(expected.stageDays);
    expect(got.closing).toEqual(expected.closing);
    expect(got.maxBalanceResidual).toBe(expected.maxBalanceResidual);
  });

  test('a refusal crosses the thread with its class and message, and the thread goes on', async () => {
    const wrong = { ...input, parcels: [{ ...input.parcels[0], latitude: 120 }] };
    const refusal = await pool.run(wrong).catch((error: unknown) => error);
    expect(refusal).toBeInstanceOf(RangeViolation);
    expect((refusal as Error).message).toMatch(/latitude 120 is not within -90 … 90 \(parcel P1\)/);
    expect((await pool.run({ ...input, parcels: input.parcels.slice(0, 1) })).daily.length).toBe(DAILY_VARIABLE_COUNT * 120);
  });

  test('an aborted season rejects with the reason, and the pool serves the next', async () => {
    const controller = new AbortController();
    const running = pool.run({ ...input, parcels: [...input.parcels, ...input.parcels, ...input.parcels] }, controller.signal);
    controller.abort(new Error('nobody waits'));
    await expect(running).rejects.toThrow('nobody waits');
    expect((await pool.run(input)).daily).toEqual(runSeason(input).daily);
  });

  test('closing rejects what is under way', async () => {
    const brief = makeSeasonPool(1);
    const running = brief.run(input);
    const outcome = expect(running).rejects.toThrow('closed');
    await brief.close();
    await outcome;
  });
});
