/** Damaged and odd array files: each is refused, or read as far as it goes, with words that say what, where and what to do. */
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { RangeViolation, Refused } from '../../lib/base/errors.ts';
import type { ArrayFile, ArrayVariable } from '../../lib/files/array-file.ts';
import { READ_LIMIT } from '../../lib/files/array-slab.ts';
import { FindingList } from '../../lib/files/finding-list.ts';
import { openArrayFile } from '../../lib/files/open-array-file.ts';

const FOLDER = new URL('../data/arrays', import.meta.url).pathname;

function bytesOf(name: string): Uint8Array {
  return new Uint8Array(readFileSync(join(FOLDER, name)));
}

async function refusal(work: Promise<unknown>): Promise<Refused> {
  const error = await work.then(
    () => null,
    (reason: unknown) => reason,
  );
  expect(error).toBeInstanceOf(Refused);
  return error as Refused;
}

async function open(name: string, bytes = bytesOf(name), findings?: FindingList): Promise<ArrayFile> {
  return (await openArrayFile({ name, bytes }, findings)) as ArrayFile;
}

describe('a file cut short', () => {
  it.each([
    ['classic.nc', 900, /ends at byte 900/],
    ['classic.nc', 200, /header/],
    ['chunked.nc', 30_000, /damaged or cut short/],
    ['area.tif', 100, /not a sound GeoTIFF/],
    ['version2.zarr.zip', 20_000, /cannot be read as a zip archive/],
  ])('%s at byte %i is refused', async (name, length, words) => {
    const error = await refusal(open(name, bytesOf(name).slice(0, length)));
    expect(error.message).toMatch(words);
    expect(error.findings).toHaveLength(1);
    expect(error.findings[0]).toMatchObject({ severity: 'error', file: name });
    expect(error.findings[0].advice).toBeTruthy();
  });

  it('a GeoTIFF without its last tiles is refused where they are asked for', async () => {
    const file = await open('area.tif', bytesOf('area.tif').slice(0, 2200));
    const error = await refusal(file.read('band_2', [0, 0], [20, 33]));
    expect(error.message).toMatch(/band_2.*cannot be read/);
    await file.close();
  });
});

describe('what is no array file', () => {
  it('is told by its content, not its name', async () => {
    expect(await openArrayFile({ name: 'weather.csv', bytes: new TextEncoder().encode('site,date\n') })).toBeNull();
    expect((await open('classic.csv', bytesOf('classic.nc'))).format).toBe('netcdf-3');
  });

  it('is refused when it is named as NetCDF and is none', async () => {
    const error = await refusal(open('rain.nc', new TextEncoder().encode('<html>not found</html>')));
    expect(error.message).toMatch(/named as NetCDF and is none/);
  });

  it('a classic header that contradicts itself is refused', async () => {
    const bytes = bytesOf('classic.nc');
    new DataView(bytes.buffer).setUint32(12, 0x7fffffff);
    expect((await refusal(open('x.nc', bytes))).message).toMatch(/announces more than the file holds/);
    const typed = bytesOf('single-record.nc');
    typed[3] = 9;
    expect((await refusal(open('x.nc', typed))).message).toMatch(/named as NetCDF and is none/);
  });
});

describe('HDF5 with odd contents', () => {
  it('leaves links aside and says so, and never follows them', async () => {
    const findings = new FindingList();
    const file = await open('odd.h5', bytesOf('odd.h5'), findings);
    const notes = findings.list().map(({ code, column }) => `${code} ${column}`);
    expect(file.variables.map(({ name }) => name)).toEqual(['half', 'outside', 'packed', 'plain']);
    expect(notes).toEqual(
      expect.arrayContaining(['link-left-out elsewhere', 'link-left-out round', 'variable-unreadable half', 'variable-unreadable packed']),
    );
    expect(Array.from(await file.read('plain', [0], [3]))).toEqual([0, 1, 2]);
    expect((await refusal(file.read('packed', [0], [2]))).message).toMatch(/filter LZF \(32000\), which is not read/);
    // its values lie in a file of the machine that exists and can be read by this process
    expect((await refusal(file.read('outside', [0], [4]))).message).toMatch(/cannot be read/);
    await file.close();
  });
});

describe('Zarr with odd contents', () => {
  it('notes arrays of a type that is not read, and refuses them and unknown codecs by name', async () => {
    const findings = new FindingList();
    const file = await open('version3.zarr.zip', bytesOf('version3.zarr.zip'), findings);
    expect(findings.list().map(({ column }) => column)).toEqual(['odd']);
    expect((await refusal(file.read('odd', [0], [1]))).message).toMatch(/float16/);
    expect((await refusal(file.read('packed', [0], [1]))).message).toMatch(/unheard-of/);
    await file.close();
  });
});

describe('slabs', () => {
  it.each(['classic.nc', 'chunked.nc', 'version2.zarr.zip', 'area.tif'])(
    'outside the shape of a variable of %s are refused',
    async (name) => {
      const file = await open(name);
      const variable = file.variables.find(({ shape, type }) => shape.length > 1 && type !== 'text') as ArrayVariable;
      const { shape } = variable;
      const whole = shape.map(() => 0);
      await expect(file.read(variable.name, whole, [...shape.slice(0, -1), (shape.at(-1) ?? 0) + 1])).rejects.toThrow(RangeViolation);
      await expect(file.read(variable.name, [-1, ...whole.slice(1)], shape)).rejects.toThrow(RangeViolation);
      await expect(file.read(variable.name, [0], [1])).rejects.toThrow(/dimensions/);
      await expect(file.read('nothing', [0], [1])).rejects.toThrow(/no variable "nothing"/);
      expect(
        await file.read(
          variable.name,
          whole,
          shape.map(() => 0),
        ),
      ).toHaveLength(0);
      await file.close();
    },
  );

  it('above the limit of a read are refused before anything is read', async () => {
    const bytes = bytesOf('single-record.nc');
    const view = new DataView(bytes.buffer);
    // the record dimension is made long by the header alone; a header that says "unknown" takes its length from the file
    view.setUint32(4, 0xffffffff);
    const file = await open('x.nc', bytes);
    expect(file.variables[0].shape).toEqual([7, 3]);
    await file.close();
    expect(READ_LIMIT * 8).toBe(256 * 2 ** 20);
  });
});
