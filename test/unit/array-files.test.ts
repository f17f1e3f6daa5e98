/**
 * Array files of every format against the values other readers print for them (test/data/arrays/expected.json says which readers and versions).
 * Whole arrays and seeded slabs, from disk and from memory.
 */
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import type { ArrayFile, ArrayVariable } from '../../lib/files/array-file.ts';
import { openArrayFile } from '../../lib/files/open-array-file.ts';

interface Expected {
  readonly shape: readonly number[];
  readonly values: readonly (number | string | null)[];
  readonly dimensions?: readonly string[];
}

const FOLDER = new URL('../data/arrays', import.meta.url).pathname;
const expected: Record<string, Record<string, Expected>> = JSON.parse(readFileSync(join(FOLDER, 'expected.json'), 'utf8')).files;

/** GDAL prints the geotransform, from which centres are reckoned: rounding in the last digits of a metre. */
const PLACE_TOLERANCE = 1e-6;

async function opened(name: string, from: 'disk' | 'memory'): Promise<ArrayFile> {
  const path = join(FOLDER, name);
  const nothing = {
    get bytes(): Uint8Array {
      throw new Error('a file on disk is not read whole');
    },
  };
  const file =
    from === 'disk' ? Object.assign(Object.create(nothing), { name, path }) : { name, bytes: new Uint8Array(readFileSync(path)) };
  return (await openArrayFile(file)) as ArrayFile;
}

function numbers({ values }: Expected): number[] {
  return values.map((value) => (value === null ? Number.NaN : Number(value)));
}

function slabOf(all: readonly number[], shape: readonly number[], start: readonly number[], count: readonly number[]): number[] {
  const size = count.reduce((product, length) => product * length, 1);
  return Array.from({ length: size }, (_, place) => {
    let rest = place;
    let at = 0;
    let apart = 1;
    for (let k = shape.length - 1; k >= 0; k--) {
      at += (start[k] + (rest % count[k])) * apart;
      rest = Math.floor(rest / count[k]);
      apart *= shape[k];
    }
    return all[at];
  });
}

function expectSame(found: Float64Array, wanted: readonly number[], what: string): void {
  expect(found.length, what).toBe(wanted.length);
  const tolerance = /\.tif [xy]/.test(what) ? PLACE_TOLERANCE : 0;
  const differing = wanted.findIndex((value, k) => !(Object.is(found[k], value) || Math.abs(found[k] - value) <= tolerance));
  expect(differing, `${what}: value ${differing} is ${found[differing]}, wanted ${wanted[differing]}`).toBe(-1);
}

async function compareNumbers(file: ArrayFile, variable: ArrayVariable, wanted: Expected, what: string): Promise<void> {
  const all = numbers(wanted);
  const { shape } = variable;
  expectSame(
    await file.read(
      variable.name,
      shape.map(() => 0),
      shape,
    ),
    all,
    what,
  );
  const random = mulberry32(11);
  for (let turn = 0; turn < 25; turn++) {
    const start = shape.map((length) => Math.floor(random() * length));
    const count = shape.map((length, k) => Math.floor(random() * (length - start[k] + 1)));
    expectSame(await file.read(variable.name, start, count), slabOf(all, shape, start, count), `${what} [${start} + ${count}]`);
  }
}

async function compareTexts(file: ArrayFile, variable: ArrayVariable, wanted: Expected, what: string): Promise<void> {
  const found = await file.readText(
    variable.name,
    variable.shape.map(() => 0),
    variable.shape,
  );
  expect(found, what).toEqual(wanted.values);
}

describe.each(['disk', 'memory'] as const)('array files from %s', (from) => {
  it.each(Object.keys(expected))('%s holds what other readers find', async (name) => {
    const file = await opened(name, from);
    try {
      for (const [variableName, wanted] of Object.entries(expected[name])) {
        const what = `${name} ${variableName}`;
        const variable = file.variables.find((candidate) => candidate.name === variableName) as ArrayVariable;
        expect(variable, what).toBeDefined();
        if (wanted.dimensions)
          expect(
            variable.dimensions.map((dimension, k) => (wanted.dimensions?.[k] ? dimension : null)),
            what,
          ).toEqual(wanted.dimensions);
        if (variable.type === 'text') await compareTexts(file, variable, wanted, what);
        else {
          expect(variable.shape, what).toEqual(wanted.shape);
          await compareNumbers(file, variable, wanted, what);
        }
      }
    } finally {
      await file.close();
    }
  });
});
