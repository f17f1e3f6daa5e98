/** Two generations of parcels whose story is known, since it was made up. */
import type { Position } from 'geojson';
import { describe, expect, it } from 'vitest';
import { geodesicArea } from '../../lib/geo/geodesic.ts';
import { type Ground, lineageOf } from '../../lib/geo/lineage.ts';
import { planeShape } from '../../lib/geo/plane-shape.ts';

/** A rectangle in thousandths of a degree, east and north of 5° E 52° N. */
function field(code: string, west: number, south: number, east: number, north: number): Ground {
  const corner = (x: number, y: number): Position => [5 + x / 1000, 52 + y / 1000];
  const ring = [corner(west, south), corner(east, south), corner(east, north), corner(west, north), corner(west, south)];
  const geometry = { type: 'Polygon' as const, coordinates: [ring] };
  return { code, shape: planeShape(geometry), area: geodesicArea(geometry) };
}

function story(before: readonly Ground[], after: readonly Ground[]) {
  const { descents, fresh } = lineageOf(before, after);
  const told = descents.map(({ change, successors }, at) => [
    before[at].code,
    change,
    Object.fromEntries(successors.map(({ index, share }) => [after[index].code, Number(share.toFixed(3))])),
  ]);
  return { told, fresh: fresh.map((index) => after[index].code) };
}

describe('lineageOf', () => {
  it('tells a split, with the share of each piece', () => {
    const { told, fresh } = story([field('P1', 0, 0, 10, 10)], [field('P1', 0, 0, 6, 10), field('P1b', 6, 0, 10, 10)]);
    expect(told).toEqual([['P1', 'split', { P1: 0.6, P1b: 0.4 }]]);
    expect(fresh).toEqual([]);
  });

  it('counts a small piece cut off as a split, and a moved boundary as reshaped', () => {
    const cut = story([field('P1', 0, 0, 10, 10)], [field('P1', 0, 0, 9, 10), field('P2', 9, 0, 10, 10)]);
    expect(cut.told[0]).toEqual(['P1', 'split', { P1: 0.9, P2: 0.1 }]);
    const moved = story([field('P1', 0, 0, 10, 10), field('P2', 10, 0, 20, 10)], [field('P1', 0, 0, 9, 10), field('P2', 9, 0, 20, 10)]);
    expect(moved.told).toEqual([
      ['P1', 'reshaped', { P1: 0.9, P2: 0.1 }],
      ['P2', 'reshaped', { P2: 1 }],
    ]);
  });

  it('tells a merger of three', () => {
    const { told } = story([field('A', 0, 0, 10, 10), field('B', 10, 0, 20, 10), field('C', 20, 0, 21, 10)], [field('A', 0, 0, 21, 10)]);
    expect(told).toEqual([
      ['A', 'merged', { A: 1 }],
      ['B', 'merged', { A: 1 }],
      ['C', 'merged', { A: 1 }],
    ]);
  });

  it('tells another code on the same ground, also when the corners were drawn anew', () => {
    const { told } = story([field('P1', 0, 0, 10, 10)], [field('N7', 0.01, 0, 10, 10.01)]);
    expect(told).toEqual([['P1', 'recoded', { N7: 0.999 }]]);
  });

  it('keeps apart what vanished, what is new, and a code that moved to other ground', () => {
    const { told, fresh } = story([field('P1', 0, 0, 10, 10), field('P2', 20, 0, 30, 10)], [field('P1', 50, 0, 60, 10)]);
    expect(told).toEqual([
      ['P1', 'vanished', {}],
      ['P2', 'vanished', {}],
    ]);
    expect(fresh).toEqual(['P1']);
  });

  it('tells ground that was both cut and joined', () => {
    const { told, fresh } = story(
      [field('A', 0, 0, 10, 10), field('B', 10, 0, 20, 10)],
      [field('N', 0, 0, 20, 5), field('S', 0, 5, 20, 10)],
    );
    expect(told.map(([code, change]) => [code, change])).toEqual([
      ['A', 'split'],
      ['B', 'split'],
    ]);
    expect(fresh).toEqual([]);
  });

  it('does not let a parcel with the very same outline be claimed by a neighbour drawn over it', () => {
    const same = field('B', 10, 0, 20, 10);
    const { told } = story([field('A', 0, 0, 14, 10), same], [field('A', 0, 0, 10, 10), field('B', 10, 0, 20, 10)]);
    expect(told).toEqual([
      ['A', 'reshaped', { A: 0.714 }],
      ['B', 'unchanged', { B: 1 }],
    ]);
  });

  it('answers for a file without parcels', () => {
    expect(story([field('A', 0, 0, 1, 1)], [])).toEqual({ told: [['A', 'vanished', {}]], fresh: [] });
    expect(story([], [field('A', 0, 0, 1, 1)])).toEqual({ told: [], fresh: ['A'] });
  });

  it('compares twenty thousand parcels with as many in seconds', () => {
    const grid = (shift: number, mark: string) =>
      Array.from({ length: 20_000 }, (_, i) => {
        const [x, y] = [(i % 200) * 10, Math.floor(i / 200) * 10];
        return field(`${mark}${i}`, x + shift, y, x + shift + 10, y + 10);
      });
    const began = performance.now();
    const { descents } = lineageOf(grid(0, 'P'), grid(0.5, 'P'));
    // a hundred thousand are allowed 30 s; the bound leaves room for a busy machine
    expect(performance.now() - began).toBeLessThan(15_000);
    expect(descents.every(({ change }) => change === 'reshaped')).toBe(true);
  });
});
