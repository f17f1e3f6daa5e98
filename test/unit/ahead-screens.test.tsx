/** How screens show days past the last observation: hatched, named in the legend, said in words; never by colour alone. */
import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, test } from 'vitest';
import { aheadLegend, aheadWords } from '../../app/_components/ahead-shade.tsx';
import { DailyChart } from '../../app/_components/daily-chart.tsx';
import { aheadInRange, weekKind } from '../../app/_components/map/ahead-weeks.ts';
import { SeasonStrip } from '../../app/_components/map/season-strip.tsx';
import { addDays } from '../../lib/base/civil-date.ts';
import type { ParcelDay } from '../../lib/http/contract/run.ts';
import type { DayKind } from '../../lib/weather/day-kind.ts';

const KINDS: DayKind[] = ['observed', 'filled', 'forecast', 'forecast', 'normal', 'normal', 'normal'];

function days(kinds: readonly DayKind[]): ParcelDay[] {
  const numbers = { reference_et_mm: 5, crop_et_mm: 4, adjusted_crop_et_mm: 4, precipitation_mm: 1, net_requirement_mm: 3 };
  const soil = { root_zone_depletion_mm: 20, readily_available_water_mm: 40, total_available_water_mm: 80 };
  return kinds.map(
    (day_kind, i) => ({ ...numbers, ...soil, date: addDays('2024-06-01', i), day_kind, fallbacks: [] }) as unknown as ParcelDay,
  );
}

const count = (text: string, part: string) => text.split(part).length - 1;

describe('daily chart', () => {
  test('hatches forecast and normals apart in both of its parts, and says so in legend and words', () => {
    const html = renderToStaticMarkup(<DailyChart days={days(KINDS)} units="metric" />);
    const hatched = [...html.matchAll(/<rect class="([^"]*(?:forecast|beyond)[^"]*)" x="([\d.]+)" width="([\d.]+)"/g)];
    // two runs of days in two boxes, beside the two patches of the legend
    expect(hatched.filter(([, , x]) => Number(x) > 40)).toHaveLength(4);
    const daysWide = (902 / 7).toFixed(3);
    const forecast = hatched.find(([, name, x]) => name.includes('forecast') && Number(x) > 40);
    expect((Number(forecast?.[3]) / 2).toFixed(3)).toBe(daysWide);
    expect(html).toMatch(/Forecast<\/li>/);
    expect(html).toMatch(/Normal of the day<\/li>/);
    expect(html).toContain('From 3 June 2024 not observed: 2 days forecast, 3 days normal of the day.');
    expect(count(html, 'id="mark-forecast"')).toBe(1);
  });

  test('of a season that has been observed has no hatch and no note', () => {
    const html = renderToStaticMarkup(<DailyChart days={days(['observed', 'filled', 'observed'])} units="metric" />);
    expect(html).not.toMatch(/not observed/);
    expect([...html.matchAll(/<rect class="[^"]*(?:forecast|beyond)/g)]).toHaveLength(0);
    expect(aheadLegend(days(['observed', 'filled']))).toEqual([]);
    expect(aheadWords(days(['observed']))).toBe('');
  });
});

const WEEKS = [
  { start: '2024-04-01', end: '2024-04-07' },
  { start: '2024-04-08', end: '2024-04-14' },
  { start: '2024-04-15', end: '2024-04-21' },
];
const AHEAD = { from: '2024-04-06', forecast_to: '2024-04-14', beyond: 'normal' } as const;

describe('weeks of the map', () => {
  test.each([
    [null, ['observed', 'observed', 'observed']],
    [AHEAD, ['forecast', 'forecast', 'beyond']],
    [{ ...AHEAD, forecast_to: null }, ['beyond', 'beyond', 'beyond']],
    [{ ...AHEAD, from: '2024-04-15', forecast_to: '2024-04-16' }, ['observed', 'observed', 'beyond']],
  ])('%j', (ahead, kinds) => {
    expect(WEEKS.map((week) => weekKind(week, ahead))).toEqual(kinds);
  });

  test('not wholly observed are labelled with the day from which', () => {
    expect(aheadInRange(WEEKS, { from: 0, to: 0 }, AHEAD)).toBe('forecast from 6 Apr');
    expect(aheadInRange(WEEKS, { from: 0, to: 2 }, AHEAD)).toBe('forecast from 6 Apr, normal of the day from 15 Apr');
    expect(aheadInRange(WEEKS, { from: 2, to: 2 }, { ...AHEAD, beyond: 'analogue' })).toBe('days of the analogue year from 15 Apr');
    expect(aheadInRange(WEEKS, { from: 0, to: 0 }, { ...AHEAD, from: '2024-04-08' })).toBe('');
    expect(aheadInRange(WEEKS, { from: 1, to: 2 }, { ...AHEAD, forecast_to: null })).toBe('normal of the day from 8 Apr');
  });

  test('are hatched in the strip and said beside it', () => {
    const strip = (ahead: typeof AHEAD | null) =>
      renderToStaticMarkup(
        <SeasonStrip weeks={WEEKS} volumes={[1, 2, 3]} range={{ from: 0, to: 2 }} ahead={ahead} units="metric" onRange={() => {}} />,
      );
    const html = strip(AHEAD);
    expect(count(html, 'data-kind="forecast"')).toBe(2);
    // one week, and the key beside the words
    expect(count(html, 'data-kind="beyond"')).toBe(2);
    expect(html).toContain('Forecast from 6 Apr, normal of the day from 15 Apr');
    expect(html).toMatch(/aria-valuetext="[^"]*forecast from 6 Apr/);
    expect(strip(null)).not.toMatch(/forecast|beyond/);
  });
});
