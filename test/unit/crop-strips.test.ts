/** Strips of a parcel: every planting keeps its share at every time, and the shares sum to the parcel. */
import { describe, expect, test } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import { findOverfullDay, type PlantingSpan, planStrips } from '../../lib/crop/strips.ts';

function span(planting: number, start: number, end: number, share: number): PlantingSpan {
  return { planting, start, end, share };
}

describe('planStrips', () => {
  test('one planting on the whole parcel is one strip', () => {
    expect(planStrips([span(0, 10, 90, 1)])).toEqual([{ share: 1, plantings: [0] }]);
  });

  test('double cropping shares a strip, even when the second is sown on the day of the first harvest', () => {
    expect(planStrips([span(0, 0, 100, 1), span(1, 100, 200, 1)])).toEqual([{ share: 1, plantings: [0, 1] }]);
  });

  test('side by side: separate strips, and the bare remainder last', () => {
    const strips = planStrips([span(0, 0, 100, 0.5), span(1, 50, 150, 0.25)]);
    expect(strips).toEqual([
      { share: 0.5, plantings: [0] },
      { share: 0.25, plantings: [1] },
      { share: 0.25, plantings: [] },
    ]);
  });

  test('different shares in turn take new land while there is any', () => {
    const strips = planStrips([span(0, 0, 100, 0.25), span(1, 100, 200, 0.5)]);
    expect(strips.map(({ plantings }) => plantings)).toEqual([[0], [1], []]);
    expect(strips.map(({ share }) => share)).toEqual([0.25, 0.5, 0.25]);
  });

  test('a larger second crop lies on the first one’s land and on new land', () => {
    const strips = planStrips([span(0, 0, 100, 0.5), span(1, 120, 200, 0.75)]);
    const byHistory = Object.fromEntries(strips.map(({ share, plantings }) => [plantings.join(), share]));
    expect(byHistory).toEqual({ 1: 0.5, '0,1': 0.25, 0: 0.25 });
  });

  test('nothing planted: one bare strip', () => expect(planStrips([])).toEqual([{ share: 1, plantings: [] }]));

  test('for any plantings that fit, each has exactly its share and no two lie on the same land at once', () => {
    const random = mulberry32(5);
    let tried = 0;
    for (let k = 0; k < 2000; k++) {
      const spans = Array.from({ length: 1 + Math.floor(random() * 5) }, (_, planting) => {
        const start = Math.floor(random() * 300);
        return span(planting, start, start + 1 + Math.floor(random() * 150), 0.05 + 0.6 * random());
      });
      if (findOverfullDay(spans)) continue;
      tried++;
      const strips = planStrips(spans);
      expect(Math.abs(strips.reduce((sum, { share }) => sum + share, 0) - 1)).toBeLessThan(1e-8);
      for (const { planting, share } of spans) {
        const land = strips.filter(({ plantings }) => plantings.includes(planting)).reduce((sum, strip) => sum + strip.share, 0);
        expect(Math.abs(land - share)).toBeLessThan(1e-8);
      }
      for (const { plantings } of strips) {
        for (let i = 1; i < plantings.length; i++) expect(spans[plantings[i]].start).toBeGreaterThanOrEqual(spans[plantings[i - 1]].end);
      }
    }
    expect(tried).toBeGreaterThan(300);
  });
});

describe('findOverfullDay', () => {
  test('names the first day on which the shares exceed the parcel', () => {
    expect(findOverfullDay([span(0, 0, 100, 0.7), span(1, 60, 90, 0.25), span(2, 80, 120, 0.2)])).toMatchObject({ day: 80 });
  });

  test('a sum within rounding of 1 is 1', () => expect(findOverfullDay([span(0, 0, 9, 1 / 3), span(1, 0, 9, 2 / 3 + 1e-12)])).toBeNull());
});
