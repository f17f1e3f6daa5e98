/** The screen of a frost night, as a browser gets it. */
import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, it } from 'vitest';
import { FrostView } from '../../app/(desk)/frost/frost-view.tsx';
import { difference, sprinkling, sprinklingUnit } from '../../app/(desk)/frost/frost-words.ts';
import { frostAsked, type LoadedFrost } from '../../app/(desk)/frost/load-frost.ts';
import type { FrostAnswer, FrostRow } from '../../lib/http/contract/frost.ts';

const ROW: FrostRow = {
  ...{ parcel: 'P1', name: null, planting: 1, crop: 'apple', crop_name: 'Apple', area_ha: 2, reach: 'M' },
  ...{ critical_table: 'apple', stage: 'full-pink', stage_name: 'Full pink', stage_from: 'chosen', thermal_time_c_d: 180 },
  ...{ minimum_c: -2, minimum_low_c: -4, minimum_high_c: 0, leaf_minimum_c: -3, leaf_minimum_low_c: -5 },
  ...{ critical_10_c: -2.22, critical_90_c: -3.89, risk: 'damaging', start_air_temperature_c: 2 },
  ...{ sprinkling_rate_mm_h: 2.54, sprinkling_heat_w_m2: 236, sprinkling_flow_l_s: 14.1, sprinkling_flow_m3_h: 50.8 },
  ...{ sprinkling_hours_h: 8, sprinkling_volume_m3: 406 },
};
const NIGHT: FrostAnswer = {
  ...{
    date: '2024-04-10',
    morning: '2024-04-11',
    source: 'made',
    source_role: 'observed',
    evening: 'record',
    sky: 'fao56',
    ground: 'moist',
  },
  ...{ stations: [], counts: { severe: 0, damaging: 1, possible: 0, none: 0, unknown: 0 }, area_at_risk_ha: 2, sprinkling_flow_l_s: 14.1 },
  ...{ sprinkling_volume_m3: 406, beyond_table: 0, items: [ROW], next_cursor: null, total: 1, cautions: [] },
};
const SHAPE = {
  type: 'Polygon',
  coordinates: [
    [
      [0, 0],
      [0.01, 0],
      [0.01, 0.01],
      [0, 0],
    ],
  ],
};

function shown(night: FrostAnswer, units: 'metric' | 'us' = 'metric'): string {
  const loaded: LoadedFrost = {
    ...{ night, atRisk: night.items, shapes: new Map([['P1', SHAPE]]), nights: [], csv: '' },
    asked: frostAsked({}, night.date),
  };
  return renderToStaticMarkup(<FrostView loaded={loaded} boundary={null} query={{}} units={units} />);
}

describe('the screen of a frost night', () => {
  it('lists a planting at risk with its working, and marks the rates as recalled', () => {
    const text = shown(NIGHT);
    expect(text).toContain('date=2024-04-10&amp;parcel=P1&amp;planting=1');
    expect(text).toContain('Damaging');
    expect(text).toContain('Open the source before use.');
    expect(text).toContain('<path');
  });
  it('speaks the reader’s units: 2.54 mm/h is 0.10 in/h, −2.22 °C is 28.0 °F, 14.1 L/s is 223 gpm', () => {
    const text = shown(NIGHT, 'us');
    for (const part of ['0.10', '28.0', '223', 'gpm', 'in/h', '°F']) expect(text).toContain(part);
  });
  it('says what to do where nothing is grown that frost can hurt', () => {
    const text = shown({ ...NIGHT, items: [], total: 0 });
    expect(text).toContain('Nothing grown here that night has a table of critical temperatures');
    expect(text).toContain('href="/imports"');
  });
  it('says so where nothing is at risk', () => {
    const none = { ...NIGHT, items: [] };
    expect(shown(none)).toContain('None of the plantings is at risk');
  });
});

describe('what the address asks for', () => {
  it('is an evening in the units it was written in', () => {
    const us = frostAsked({ in: 'us', temperature: '41', dew: '23', wind: '10', cloud: '30' }, '2024-04-10');
    expect(us).toMatchObject({ air_temperature_c: 5, dew_point_c: -5, cloud_share: 0.3 });
    expect(us.wind_speed_m_s).toBeCloseTo(4.4704, 6);
    expect(frostAsked({ temperature: '5' }, '2024-04-10').air_temperature_c).toBe(5);
    expect(frostAsked({ temperature: '' }, '2024-04-10').air_temperature_c).toBeUndefined();
  });
  it('gathers stages, and passes over what it does not know', () => {
    const asked = frostAsked({ 'stage.apple': 'full-pink', 'stage.peach': 'auto', sky: 'none', ground: 'wet' }, '2024-04-10');
    expect(asked).toMatchObject({ stages: 'apple:full-pink', sky: 'fao56', ground: 'wet' });
  });
  it('differences have no zero of their own', () => {
    expect(difference(1, 'us')).toBe('1.8');
    expect([sprinkling(null, 'l_s', 'us'), sprinklingUnit('m3_h', 'us')]).toEqual(['–', 'cfs']);
  });
});
