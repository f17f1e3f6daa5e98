/**
 * Means of images over parcels. The image and the parcels are invented; the expected means were taken with GDAL 3.6.2: each parcel burnt into
 * a mask of the image's own cells (a cell counts when its centre lies inside), and the cells under it averaged by hand.
 */
import { readFileSync } from 'node:fs';
import type { Polygon } from 'geojson';
import { describe, expect, it } from 'vitest';
import { imageDate } from '../../lib/files/image-date.ts';
import { readImages } from '../../lib/files/images.ts';
import type { ImportOptions } from '../../lib/files/reading.ts';
import { cellShape, insideRuns } from '../../lib/geo/raster-mean.ts';
import { importContext } from '../support/import-context.ts';

interface Outside {
  readonly parcels: readonly { readonly code: string; readonly geometry: Polygon }[];
  readonly expected: Readonly<Record<string, { readonly all: number; readonly seen: number; readonly mean: number | null }>>;
}

const folder = new URL('../data/images/', import.meta.url);
const outside = JSON.parse(readFileSync(new URL('cover.json', folder), 'utf8')) as Outside;
const bytes = new Uint8Array(readFileSync(new URL('cover_2024-06-15.tif', folder)));

function read(options: ImportOptions = {}, parcels = outside.parcels, name = 'cover_2024-06-15.tif') {
  const context = importContext({ parcelShapes: parcels });
  return readImages([{ name, bytes }], options, context, () => undefined);
}

describe('an image in UTM over six parcels', () => {
  it('gives the mean that GDAL gives, of parcels seen well enough', async () => {
    const { staged, findings } = await read();
    if (staged.kind !== 'images') throw new Error('staged something else');
    const seenWell = Object.entries(outside.expected).filter(([, { all, seen }]) => seen / all >= 0.7);
    expect(staged.images.map(({ parcelCode }) => parcelCode).sort()).toEqual(seenWell.map(([code]) => code).sort());
    for (const image of staged.images) {
      const { mean, seen, all } = outside.expected[image.parcelCode];
      expect(image.value, image.parcelCode).toBeCloseTo(mean as number, 12);
      expect(image.seenShare, image.parcelCode).toBeCloseTo(seen / all, 12);
      expect(image).toMatchObject({ date: '2024-06-15', quantity: 'vegetation_index' });
    }
    expect(findings.filter(({ severity }) => severity === 'error')).toEqual([]);
    expect(findings.find(({ code }) => code === 'parcels-not-seen')?.message).toContain('2 parcels');
  });

  it('holds a parcel under two tiles of a day together', async () => {
    const context = importContext({ parcelShapes: outside.parcels });
    const files = ['a_2024-06-15.tif', 'b_2024-06-15.tif'].map((name) => ({ name, bytes }));
    const { staged } = await readImages(files, {}, context, () => undefined);
    if (staged.kind !== 'images') throw new Error('staged something else');
    const a = staged.images.find(({ parcelCode }) => parcelCode === 'A');
    expect(a?.value).toBeCloseTo(outside.expected.A.mean as number, 12);
    expect(a?.seenShare).toBe(1);
  });

  it('says what is missing: the day, the place, the parcels', async () => {
    const codes = async (reading: ReturnType<typeof read>) => (await reading).findings.map(({ code }) => code);
    expect(await codes(read({}, outside.parcels, 'cover.tif'))).toContain('image-without-day');
    expect(await codes(read({ crs: 'EPSG:32633' }))).toContain('image-outside-district');
    expect(await codes(read({}, []))).toContain('no-parcels');
    expect(await codes(read({ layer: 'band_3' }))).toContain('no-such-band');
  });
});

describe('imageDate', () => {
  it.each([
    ['S_20240615_T11.tif', undefined, '2024-06-15'],
    ['2023-01-02 to 2023.01.09.tif', undefined, '2023-01-09'],
    ['scene_20241399.tif', undefined, null],
    ['scene.tif', '2022:07:04 10:11:12', '2022-07-04'],
    ['scene.tif', 'yesterday', null],
  ])('%s, tag %s: %s', (name, tag, date) => {
    expect(imageDate(name, tag)).toBe(date);
  });
});

describe('insideRuns', () => {
  const identity = (x: number, y: number) => [x, y] as const;
  const square = (from: number, to: number) => [
    [from, from],
    [to, from],
    [to, to],
    [from, to],
    [from, from],
  ];

  it('leaves out a hole, and counts a cell on the left edge but not on the right', () => {
    const shape = cellShape({ type: 'Polygon', coordinates: [square(0, 6), square(2, 4)] }, identity);
    expect(insideRuns(shape, 1)).toEqual([[0, 5]]);
    expect(insideRuns(shape, 3)).toEqual([
      [0, 1],
      [4, 5],
    ]);
  });
});
