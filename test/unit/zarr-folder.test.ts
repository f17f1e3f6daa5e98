/** A Zarr store in a folder gives what the same store in a zip gives. */
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import type { ArrayFile } from '../../lib/files/array-file.ts';
import { openArrayFile } from '../../lib/files/open-array-file.ts';
import { openZip } from '../../lib/files/zip.ts';

const FOLDER = new URL('../data/arrays', import.meta.url).pathname;
const out = mkdtempSync(join(tmpdir(), 'zarr-test-'));
afterAll(() => rmSync(out, { recursive: true }));

async function unpacked(name: string): Promise<string> {
  const zip = await openZip({ name, path: join(FOLDER, name), bytes: new Uint8Array() });
  for (const member of zip.members) {
    const path = join(out, name, member.name);
    mkdirSync(dirname(path), { recursive: true });
    writeFileSync(path, await zip.read(member.name));
  }
  zip.close();
  return join(out, name, name.startsWith('version2') ? 'v2.zarr' : '');
}

async function open(path: string): Promise<ArrayFile> {
  return (await openArrayFile({ name: 'store.zarr', path, bytes: new Uint8Array() })) as ArrayFile;
}

describe('a Zarr store in a folder', () => {
  it.each(['version2.zarr.zip', 'version3.zarr.zip'])('%s', async (name) => {
    const zipped = await open(join(FOLDER, name));
    const folder = await open(await unpacked(name));
    const byName = (file: ArrayFile) => [...file.variables].sort((a, b) => a.name.localeCompare(b.name));
    expect(byName(folder)).toEqual(byName(zipped));
    expect(folder.attributes).toEqual(zipped.attributes);
    for (const { name: variable, shape, type } of zipped.variables) {
      if (type === 'other' || variable === 'packed') continue;
      const slab = [shape.map(() => 0), shape] as const;
      const values = (file: ArrayFile) => (type === 'text' ? file.readText(variable, ...slab) : file.read(variable, ...slab));
      expect(await values(folder), variable).toEqual(await values(zipped));
    }
    await zipped.close();
    await folder.close();
  });

  it('is told from a folder that is none', async () => {
    expect(await openArrayFile({ name: 'arrays', path: FOLDER, bytes: new Uint8Array() })).toBeNull();
  });
});
