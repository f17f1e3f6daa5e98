/** The crop page as a browser gets it, from the library. */
import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, it } from 'vitest';
import { calendarOf, curvesOf } from '../../app/_components/crop-values.ts';
import { practiceWords } from '../../app/_components/practice-words.ts';
import { CropView } from '../../app/(desk)/crops/[code]/crop-view.tsx';
import { cropLibrary } from '../../db/library/crops.ts';
import { practiceMembers } from '../../lib/http/answers/practice.ts';
import type { CropAnswer } from '../../lib/http/contract/rest.ts';

const library = cropLibrary();

function answer(code: string): CropAnswer {
  const crop = library.crops.find((each) => each.code === code);
  if (!crop) throw new Error(code);
  return {
    code,
    name: crop.name,
    group: crop.group,
    definition: crop as unknown as Record<string, unknown>,
    sources: library.sources[code] as Record<string, string>,
    notes: library.notes[code] ?? null,
    calendars: library.calendars
      .filter((each) => each.cropCode === code)
      .map(({ calendar, plantingDay, source }) => ({
        code: calendar.code,
        name: calendar.name,
        planting_day: plantingDay,
        definition: calendar as unknown as Record<string, unknown>,
        source,
      })),
    planting_count: 0,
  };
}

const page = (code: string) => renderToStaticMarkup(<CropView crop={answer(code)} grown={null} season={null} units="metric" />);

describe('the crop page', () => {
  it('tells what the weather decides of a calendar, in words', () => {
    const text = page('alfalfa-hay');
    expect(text).toContain('Starts when: day after the last minimum below -4 °C; at the latest 150 d after the planting date.');
    expect(text).toContain('Ends at -4 °C or below, 120 d or more after the start.');
    expect(text).toContain('After a cut: 70, 270, 150 and 130 °C d above 5 °C, temperatures held below 30 °C.');
    expect(text).toContain('thermal time, start by weather, ends with frost, cut in cycles');
    expect(page('winter-wheat-frozen-soils')).toContain('mean air temperature of 10 days falls to 17 °C');
  });

  it('shows single coefficients, response by stage, salt, canopy and ponding with their sources', () => {
    const maize = page('maize-grain');
    expect(maize).toContain('Yield response factor Ky, mid-season');
    expect(maize).toContain('1.50');
    expect(maize).toContain('recalled');
    expect(maize).toContain('ECe of the saturation extract');
    expect(page('rice-paddy')).toContain('Height of the bunds');
    expect(page('citrus-70-canopy-no-cover')).toContain('Ground covered or shaded at noon');
  });

  it('leaves out what a crop does not have', () => {
    const lettuce = page('lettuce');
    expect(lettuce).not.toContain('What the weather decides');
    expect(lettuce).not.toContain('Height of the bunds');
    expect(lettuce).not.toContain('Yield response factor Ky, mid-season');
  });

  it('draws the curve of each calendar, and that after a cut', () => {
    const [calendar] = answer('alfalfa-hay').calendars;
    expect(curvesOf(calendar, { initial: 0.3, mid: 1.15, end: 1.1 }).map(({ lengths }) => lengths.mid)).toHaveLength(2);
    const cycles = [{ basalInitial: 0.3, basalMid: 1, basalEnd: 0.9 }];
    const own = { ...calendar, definition: { ...calendar.definition, cycles } };
    expect(calendarOf(own).cycles).toEqual([{ initial: 0.3, mid: 1, end: 0.9 }]);
    expect(curvesOf(own, { initial: 0.3, mid: 1.15, end: 1.1 })[1].coefficients.mid).toBe(1);
  });
});

describe('how a planting is watered, in words', () => {
  const words = (practice: Parameters<typeof practiceMembers>[0], units: 'metric' | 'us' = 'metric') =>
    practiceWords(practiceMembers(practice), units);

  it('says each thing once, in the reader’s units', () => {
    expect(words({ irrigation: { kind: 'none' } })).toEqual(['not irrigated']);
    expect(words({ irrigation: { kind: 'interval', days: 7 } })).toEqual(['every 7 d']);
    expect(words({ irrigation: { kind: 'fixed-depth', depth: 50.8 } }, 'us')).toEqual(['2.00 in net at a time']);
    expect(words({ preIrrigation: { daysBefore: 14 }, germination: [{ daysAfter: 2, depth: 20 }] })).toEqual([
      'soil refilled 14 d before planting',
      '20.0 mm net 2 d after planting',
    ]);
    expect(words({ mulch: { kind: 'plastic', cover: 0.7 } })[0]).toMatch(/^plastic mulch on 70.%$/);
  });

  it('says nothing of a planting that says nothing', () => expect(words({})).toEqual([]));
});
