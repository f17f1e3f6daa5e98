/** Tables as CSV: RFC 4180 section 2. Formula defusing: OWASP, "CSV Injection". Units: NIST SP 811 Appendix B. */
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { answerIn, nameIn, valueIn } from '../../lib/http/border-units.ts';
import { begun, csvOf, csvStream } from '../../lib/http/table.ts';

const shape = {
  row: z.object({ parcel: z.string(), crop_et_mm: z.number().nullable(), tags: z.array(z.string()), inside: z.unknown() }),
  leaveOut: ['inside'],
};
const rows = [
  { parcel: '=HYPERLINK("x")', crop_et_mm: 25.4, tags: ['a', 'b'], inside: { x: 1 } },
  { parcel: 'Smith, "North"\nfield', crop_et_mm: null, tags: [], inside: null },
];

describe('csvOf', () => {
  it('quotes, doubles quotes, ends lines with CRLF, defuses formulas, leaves missing cells empty', () => {
    expect(csvOf(shape, rows, 'metric')).toBe(
      'parcel,crop_et_mm,tags\r\n"\'=HYPERLINK(""x"")",25.4,a b\r\n"Smith, ""North""\nfield",,\r\n',
    );
  });

  it('writes the header of an empty table in the asked units', () => {
    expect(csvOf(shape, [], 'us')).toBe('parcel,crop_et_in,tags\r\n');
  });

  it('does not defuse a negative number', () => {
    expect(csvOf({ row: z.object({ net_mm: z.number() }) }, [{ net_mm: -1.5 }], 'metric')).toBe('net_mm\r\n-1.5\r\n');
  });
});

describe('csvStream', () => {
  async function* pages() {
    yield [rows[0]];
    yield [rows[1]];
  }

  it('says in pieces what csvOf says at once', async () => {
    const text = await new Response(csvStream(shape, pages(), 'metric')).text();
    expect(text).toBe(csvOf(shape, rows, 'metric'));
  });

  it('turns a failure of the first page into a refusal before anything is sent', async () => {
    const failing = (async function* (): AsyncGenerator<object[]> {
      yield await Promise.reject(new Error('no'));
    })();
    await expect(begun(failing)).rejects.toThrow('no');
    expect(await new Response(csvStream(shape, await begun(pages()), 'metric')).text()).toBe(csvOf(shape, rows, 'metric'));
  });
});

describe('border units', () => {
  it.each([
    ['crop_et_mm', 'crop_et_in', 25.4, 1],
    ['gross_volume_m3', 'gross_volume_acft', 1233.48183754752, 1],
    ['mean_inflow_m3_s', 'mean_inflow_cfs', 0.028316846592, 1],
    ['area_ha', 'area_ac', 0.40468564224, 1],
    ['elevation_m', 'elevation_ft', 0.3048, 1],
    ['length_km', 'length_mi', 1.609344, 1],
    ['wind_speed_2m_m_s', 'wind_speed_2m_mph', 0.44704, 1],
    ['air_temperature_max_c', 'air_temperature_max_f', 100, 212],
  ])('%s becomes %s', (name, us, metric, expected) => {
    expect(nameIn('us', name)).toBe(us);
    expect(valueIn('us', name, metric)).toBeCloseTo(expected, 12);
    expect(nameIn('metric', name)).toBe(name);
    expect(valueIn('metric', name, metric)).toBe(metric);
  });

  it.each([
    'field_capacity_m3_m3',
    'lapse_rate_c_per_m',
    'solar_radiation_mj_m2_d',
    'specific_humidity_kg_kg',
    'vapour_pressure_kpa',
    'code',
    'fraction_per_km',
  ])('leaves %s as it is', (name) => {
    expect(nameIn('us', name)).toBe(name);
    expect(valueIn('us', name, 0.25)).toBe(0.25);
  });

  it('goes through lists and members, keeps null, and leaves settings to be sent back', () => {
    const answer = {
      items: [{ depth_mm: 50.8, other_mm: null, inside: { area_ha: 0 } }],
      settings: { depth_mm: 1 },
      flow_m3_s: [[0.028316846592, null]],
    };
    expect(answerIn('us', answer)).toEqual({
      items: [{ depth_in: 2, other_in: null, inside: { area_ac: 0 } }],
      settings: { depth_mm: 1 },
      flow_cfs: [[1, null]],
    });
  });

  it('leaves counts and shares that are named after quantities', () => {
    const answer = {
      coverage_days: { precipitation_mm: 30, air_temperature_max_c: 0 },
      fallback_shares: { depth_mm: 0.5 },
      loss_rule: { kind: 'seepage', depth_mm: 3 },
    };
    expect(answerIn('us', { items: [answer] })).toEqual({ items: [answer] });
  });
});
