/** The run form, what a run rested on, and the records of a field, as they are drawn. Figures in the tests are by hand. */
import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, test, vi } from 'vitest';
import { pointsText, readPoints } from '../../app/_components/method-form.tsx';
import { RunForm, requestOf } from '../../app/_components/run-form.tsx';
import { SETTINGS } from '../../app/_components/run-setting-words.ts';
import { settingText } from '../../app/_components/run-value-words.ts';
import { FieldRecords } from '../../app/(desk)/parcels/[code]/field-records.tsx';
import { RestedOn } from '../../app/(desk)/runs/[id]/rested-on.tsx';
import { MethodTable } from '../../app/(desk)/settings/method-table.tsx';
import { runRequest } from '../../lib/http/contract/run.ts';
import { DEFAULT_RUN_SETTINGS } from '../../lib/jobs/run-settings.ts';

vi.mock('next/navigation', () => ({ useRouter: () => ({ refresh: () => undefined, push: () => undefined }) }));

/** A form as a browser sends it: values of the fields, check boxes only where they are on. */
function sent(over: Record<string, string | null> = {}): FormData {
  const form = new FormData();
  form.set('season', '2024');
  for (const { key, control } of SETTINGS) {
    const value = key in over ? over[key] : control.kind === 'check' ? (control.usual ? 'on' : null) : control.usual;
    if (value !== null) form.set(key, value);
  }
  return form;
}

describe('the run form', () => {
  test('offers every setting of the API once', () => {
    expect(SETTINGS.map(({ key }) => key).sort()).toEqual(Object.keys(DEFAULT_RUN_SETTINGS).sort());
  });

  test('left as it is, asks for the defaults of the service', () => {
    const { settings } = runRequest.parse(requestOf(sent()));
    const { interpolation: _left, ...usual } = DEFAULT_RUN_SETTINGS;
    expect(settings).toEqual(usual);
  });

  test('asks for what was chosen', () => {
    const asked = requestOf(
      sent({
        initial_state: 'carry-over',
        water: 'recorded-then-rule',
        irrigate: null,
        snow: 'on',
        analogue_year: '2019',
        forecast_source: 'Model',
      }),
    );
    expect(runRequest.parse(asked).settings).toMatchObject({
      initial_state: 'carry-over',
      water: 'recorded-then-rule',
      irrigate: false,
      snow: true,
      analogue_year: 2019,
      forecast_source: 'Model',
    });
  });

  test('every choice is a value of the API, and has words', () => {
    for (const { key, control } of SETTINGS) {
      if (control.kind !== 'choice') continue;
      for (const value of control.values.filter((each) => each !== '')) {
        expect(() => runRequest.parse({ season: 's', settings: { [key]: value } }), `${key} ${value}`).not.toThrow();
        expect(settingText(value).length).toBeGreaterThan(1);
      }
    }
  });

  test('is grouped, with each control tied to its label and help', () => {
    const named = [{ code: 'loam', name: 'Loam' }];
    const html = renderToStaticMarkup(<RunForm seasons={named} soils={named} methods={named} sources={['A']} forecasts={['F']} />);
    for (const legend of ['Soil water at the start', 'Irrigation water', 'Salt', 'Days ahead', 'How sure the numbers are'])
      expect(html).toContain(`>${legend}</legend>`);
    for (const { key } of SETTINGS) expect(html).toContain(`aria-describedby="run-${key}-help"`);
  });
});

const run = {
  settings: { ...DEFAULT_RUN_SETTINGS, water: 'recorded-then-rule' },
  start_date: '2024-04-01',
  end_date: '2024-04-14',
} as unknown as Parameters<typeof RestedOn>[0]['run'];

describe('what a run rested on', () => {
  const start = {
    rule: 'spin-up',
    parcels_with_own: 0,
    parcels_by_fraction: 3,
    carried_from: null,
    lead_days: 31,
    lead_days_asked: 60,
    earlier_plantings: 1,
  };
  const deliveries = { days: 2, parcels: 2, volume_m3: 750, first_day: '2024-04-05', last_day: '2024-04-07', rule_from: '2024-04-08' };
  const told = (records: unknown) =>
    renderToStaticMarkup(<RestedOn run={{ ...run, manifest: { records } } as typeof run} units="metric" />).replaceAll(
      /[\u00a0\u202f]/g,
      ' ',
    );

  test('is told in words', () => {
    const html = told({ initial_state: start, deliveries, measured: { efficiency: 1, water_table: 0, soil_salinity: 0, images: 0 } });
    expect(html).toContain('after days stepped before the season');
    expect(html).toContain('31 days; 60 were asked for, weather is missing before them');
    expect(html).toContain('750 m³ on 2 parcels');
    expect(html).toContain('Efficiency of their own');
    expect(html).not.toContain('Water table measured');
  });

  test('names the run that it was carried over from', () => {
    const from = { run: 'r-1', season: 'spring', end_date: '2024-03-25', stale: true };
    const html = told({
      initial_state: { ...start, rule: 'carry-over', carried_from: from, lead_days: 6, lead_days_asked: 6, parcels_by_fraction: 1 },
      deliveries: null,
      measured: { efficiency: 0, water_table: 0, soil_salinity: 0, images: 0 },
    });
    expect(html).toContain('href="/runs/r-1"');
    expect(html).toContain('its inputs had changed since it was made');
    expect(html).toContain('1 begins with 30 % of its water missing');
  });

  test('is left out for a run of an earlier version', () => {
    expect(renderToStaticMarkup(<RestedOn run={{ ...run, manifest: {} } as typeof run} units="metric" />)).toBe('');
  });
});

describe('the records of a field', () => {
  const layers = [{ top_m: 0, bottom_m: 0.4, field_capacity_m3_m3: 0.3, wilting_point_m3_m3: 0.14 }];
  const season = { parcel: 'P 1', soil: { name: 'Two layers', layers } } as unknown as Parameters<typeof FieldRecords>[0]['season'];
  const deliveries = [{ parcel: 'P 1', date: '2024-04-05', volume_m3: 508, gross_depth_mm: 25.4 }];
  const measurements = [{ parcel: 'P 1', date: '2024-03-30', quantity: 'water_content_m3_m3' as const, soil_depth_m: 0.3, value: 0.215 }];

  test('show deliveries in the reader’s units, measurements and layers', () => {
    const html = renderToStaticMarkup(
      <FieldRecords run={run} season={season} deliveries={deliveries} measurements={measurements} units="us" mayWrite={false} />,
    );
    expect(html).toContain('1.00');
    expect(html).toContain('0.215 m³/m³');
    expect(html).toContain('Layers of the soil');
    expect(html).not.toContain('<form');
  });

  test('offer the forms to those who may write, and nothing to a reader of a field without records', () => {
    const empty = { ...season, soil: { ...season.soil, layers: [] } };
    const props = { run, season: empty, deliveries: [], measurements: [], units: 'metric' as const };
    const html = renderToStaticMarkup(<FieldRecords {...props} mayWrite />);
    expect(html).toContain('aria-label="Record a delivery"');
    expect(html).toContain('/imports?kind=deliveries');
    expect(renderToStaticMarkup(<FieldRecords {...props} mayWrite={false} />)).toBe('');
  });
});

describe('application methods', () => {
  test('efficiencies by depth are read as they are written', () => {
    expect(readPoints('10: 0.7; 40:0.85')).toEqual([
      { depth_mm: 10, efficiency: 0.7 },
      { depth_mm: 40, efficiency: 0.85 },
    ]);
    expect(readPoints('')).toEqual([]);
    expect(readPoints('ten: 0.7')).toBeNull();
    expect(readPoints(pointsText([{ depth_mm: 5, efficiency: 0.6 }]))).toEqual([{ depth_mm: 5, efficiency: 0.6 }]);
  });

  test('show their limits, with a form for managers', () => {
    const method = {
      code: 'pivot',
      name: 'Centre pivot',
      efficiency: 0.85,
      wetted_fraction: 1,
      under_canopy: false,
      maximum_daily_depth_mm: 12.7,
      trigger_fraction: 0.5,
      minimum_depth_mm: null,
      flow_l_s_ha: 1.1,
      efficiency_by_depth: [],
      source: 'measured',
    };
    const html = renderToStaticMarkup(<MethodTable methods={[method]} units="us" manages />);
    expect(html).toContain('0.50');
    expect(html).toContain('1.10');
    expect(html).toContain('aria-label="Change Centre pivot"');
    expect(renderToStaticMarkup(<MethodTable methods={[method]} units="us" manages={false} />)).not.toContain('<form');
  });
});
