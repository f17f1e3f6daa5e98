/** The screens that say how sure a figure is, as a browser gets them. */
import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, it } from 'vitest';
import { bandBasis, bandMissing, betweenText } from '../../app/_components/band-words.ts';
import { DistrictBand } from '../../app/_components/district-band.tsx';
import { SeasonStrip } from '../../app/_components/map/season-strip.tsx';
import { weekEnds } from '../../app/_components/map/week-band.ts';
import { ParcelBand } from '../../app/_components/parcel-band.tsx';
import { ReachTable } from '../../app/_components/reach-table.tsx';
import type { BandAnswer, BandRow, BandStateAnswer } from '../../lib/http/contract/band.ts';
import type { ParcelDay, ReachPeriod } from '../../lib/http/contract/run.ts';

const band: BandStateAnswer = {
  ...{ state: 'done', members: 100, seed: 7, progress: 1, error: null, seconds: 12 },
  weather_error: {
    observed: { deviation: 0.062, persistence: 0.7, from: 'leave-one-out over 8 sites' },
    ahead: { deviation: 0.2, persistence: 0.5, from: 'spread of 6 years', days: 21 },
  },
  field_errors: { coefficient: { shared: 0.08, own: 0.06 }, efficiency: { shared: 0.08, own: 0.06 }, available: { shared: 0.1, own: 0 } },
};

function row(start: string, end: string, low: number, middle: number, high: number): BandRow {
  const depth = { p10_mm: low, p50_mm: middle, p90_mm: high };
  return { place: 'P-1', start, end, ...depth, p10_m3: low * 10, p50_m3: middle * 10, p90_m3: high * 10 };
}

function answer(items: BandRow[], state: BandAnswer['band'] = band): BandAnswer {
  return { run: 'r', level: 'parcel', variable: 'gross_requirement', period: 'week', band: state, items, next_cursor: null };
}

const days = Array.from({ length: 14 }, (_, k) => ({
  date: `2024-06-${String(k + 3).padStart(2, '0')}`,
  gross_requirement_mm: k === 2 ? 50 : 0,
})) as ParcelDay[];
const whole = answer([row('2024-06-03', '2024-06-16', 40, 52, 61)]);
const weeks = answer([row('2024-06-03', '2024-06-09', 0, 45, 58), row('2024-06-10', '2024-06-16', 0, 0, 30)]);

describe('the band on a parcel’s page', () => {
  it('says in words, depth and volume, and names what this run came to', () => {
    const text = renderToStaticMarkup(<ParcelBand season={whole} weeks={weeks} days={days} date="2024-06-11" units="metric" />);
    expect(text).toContain('In 8 of 10 cases the gross requirement of the season lies between 40.0 mm and 61.0 mm');
    expect(text).toContain('between 400 m³ and 610 m³');
    expect(text).toContain('this run says 50.0 mm');
    expect(text).toContain('it lies between 0.0 mm and 30.0 mm');
    expect(text).toContain('Depth, mm per week');
    expect(text.match(/<rect[^>]*class="[^"]*band/g)).toHaveLength(3); // two weeks and the legend
  });

  it('writes the reader’s units: 40 mm are 1.57 in', () => {
    const text = renderToStaticMarkup(<ParcelBand season={whole} weeks={weeks} days={days} date="2024-06-11" units="us" />);
    expect(text).toContain('between 1.57 in and 2.40 in');
    expect(text).toContain('Depth, in per week');
  });

  it('says what to do where there is none, and how far it is where it comes', () => {
    const none = renderToStaticMarkup(
      <ParcelBand season={answer([], null)} weeks={answer([], null)} days={days} date="2024-06-11" units="metric" />,
    );
    expect(none).toContain('A run with members for the band');
    expect(none).not.toContain('<svg');
    expect(bandMissing({ ...band, state: 'running', progress: 0.4 })).toContain('40\u00a0% done');
    expect(bandMissing({ ...band, state: 'failed', error: 'no luck' })).toContain('no luck');
  });

  it('says what it rests on: shared and own part together, 8 % and 6 % are 10 %', () => {
    const basis = bandBasis(band).join(' ');
    expect(basis).toContain('computed 100 times');
    expect(basis).toContain('seed 7');
    expect(basis).toContain('6.2\u00a0% (leave-one-out over 8 sites)');
    expect(basis).toContain('On the 21 days to come the normal misses by 20\u00a0%');
    expect(basis).toContain('Crop coefficients may be off by 10\u00a0%');
    expect(basis).toContain('Rain');
  });
});

describe('the band of canals and district', () => {
  const reach = {
    reach: 'M',
    name: 'Main',
    parent: null,
    level: 0,
    kind: 'main',
    head_inflow_m3: 500,
    capacity_share: null,
  } as ReachPeriod;

  it('stands in two columns beside the head inflow, where the run has one', () => {
    const shown = { reaches: [reach], units: 'metric', period: 'the season', long: true } as const;
    const text = renderToStaticMarkup(<ReachTable {...shown} band={new Map([['M', row('', '', 41, 50, 62)]])} />);
    expect(text).toContain('Low (P10)');
    expect(text).toContain('>410<');
    expect(text).toContain('>620<');
    expect(renderToStaticMarkup(<ReachTable {...shown} />)).not.toContain('P10');
  });

  it('gives the season’s volumes and what they rest on', () => {
    const text = renderToStaticMarkup(
      <DistrictBand band={band} rows={[{ name: 'Gross requirement', row: row('', '', 41, 50, 62) }]} units="metric" />,
    );
    expect(text).toContain('Gross requirement');
    expect(text).toContain('>500<');
    expect(text).toContain('leave-one-out over 8 sites');
  });

  it('stands on the season strip as a line in each week, and in words for a single one', () => {
    const strip = [
      { start: '2024-06-03', end: '2024-06-09' },
      { start: '2024-06-10', end: '2024-06-16' },
    ];
    const rows = weeks.items.map(({ p10_m3, p90_m3, ...rest }) => ({ ...rest, p10_m3: 100, p90_m3: 400 }));
    const ends = weekEnds(answer(rows), strip);
    const shown = { weeks: strip, volumes: [200, 300], ends, ahead: null, units: 'metric', onRange: () => {} } as const;
    const one = renderToStaticMarkup(<SeasonStrip {...shown} range={{ from: 1, to: 1 }} />);
    expect(one).toContain('in 8 of 10 cases between 100 m³ and 400 m³');
    expect(one.match(/class="[^"]*whisker[^"]*" style="bottom:25%;height:75%"/g)).toHaveLength(2); // the axis ends at 400 m³
    const both = renderToStaticMarkup(<SeasonStrip {...shown} range={{ from: 0, to: 1 }} />);
    expect(both).not.toContain('8 of 10');
    expect(weekEnds(answer([]), strip)).toBeNull();
    expect(renderToStaticMarkup(<SeasonStrip {...shown} ends={null} range={{ from: 1, to: 1 }} />)).not.toContain('whisker');
  });

  it('has no words for a missing figure', () => {
    expect(betweenText(undefined, 'depth', 'metric')).toBeNull();
    expect(betweenText({ ...row('', '', 1, 2, 3), p10_mm: null }, 'depth', 'metric')).toBeNull();
  });
});
