/** A run asked for without settings runs on the defaults, whether it is asked through the API or by the service itself. */
import { describe, expect, expectTypeOf, test } from 'vitest';
import type { z } from 'zod';
import { runRequest, runSettings } from '../../lib/http/contract/run.ts';
import { DEFAULT_RUN_SETTINGS, type RunSettings } from '../../lib/jobs/run-settings.ts';

describe('settings of a run', () => {
  test('left out of a request, are the defaults of the service', () => {
    expect(runSettings.parse({})).toEqual(DEFAULT_RUN_SETTINGS);
    expectTypeOf<z.infer<typeof runSettings>>().toEqualTypeOf<RunSettings>();
  });

  test('the defaults lie within the limits of the request', () => {
    expect(runRequest.parse({ season: '2024', settings: DEFAULT_RUN_SETTINGS }).settings).toEqual(DEFAULT_RUN_SETTINGS);
  });

  // ISO 2533:1975: 6.5 °C per km. FAO-56 is the reference method of FAO Irrigation and Drainage Paper 56. Shepard (1968): exponent 2.
  test('the published ones have their published values', () => {
    expect(runSettings.parse({})).toMatchObject({ lapse_rate_c_per_m: 0.0065, method: 'fao56', power: 2 });
  });
});
