/** Zip archives: what is read, and what is refused before it can do harm. Archives are written here, after PKWARE's APPNOTE.TXT. */
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { crc32, deflateRawSync } from 'node:zlib';
import { afterAll, describe, expect, it } from 'vitest';
import { NotFound, Refused } from '../../lib/base/errors.ts';
import { FindingList } from '../../lib/files/finding-list.ts';
import { extractMember, isZip, listZipMembers, openZip, ZIP_RATIO_LIMIT } from '../../lib/files/zip.ts';

interface Member {
  readonly name: string;
  readonly content: string | Uint8Array;
  readonly packed?: boolean;
  readonly sum?: number;
  readonly flags?: number;
  readonly method?: number;
}

function zipOf(members: readonly Member[]): Uint8Array {
  const parts: Buffer[] = [];
  const directory: Buffer[] = [];
  let offset = 0;
  for (const { name, content, packed, sum, flags = 0x800, method } of members) {
    const plain = Buffer.from(content);
    const data = packed ? deflateRawSync(plain) : plain;
    const title = Buffer.from(name);
    const common = Buffer.alloc(26);
    common.writeUInt16LE(20, 0);
    common.writeUInt16LE(flags, 2);
    common.writeUInt16LE(method ?? (packed ? 8 : 0), 4);
    common.writeUInt32LE(sum ?? crc32(plain), 10);
    common.writeUInt32LE(data.length, 14);
    common.writeUInt32LE(plain.length, 18);
    common.writeUInt16LE(title.length, 22);
    const local = Buffer.concat([Buffer.from('PK\x03\x04'), common, title, data]);
    const tail = Buffer.alloc(14);
    tail.writeUInt32LE(offset, 10);
    directory.push(Buffer.concat([Buffer.from('PK\x01\x02'), Buffer.from([20, 0]), common, tail, title]));
    parts.push(local);
    offset += local.length;
  }
  const listing = Buffer.concat(directory);
  const end = Buffer.alloc(22);
  end.write('PK\x05\x06', 0, 'latin1');
  end.writeUInt16LE(members.length, 8);
  end.writeUInt16LE(members.length, 10);
  end.writeUInt32LE(listing.length, 12);
  end.writeUInt32LE(offset, 16);
  return new Uint8Array(Buffer.concat([...parts, listing, end]));
}

function fileOf(members: readonly Member[]) {
  return { name: 'a.zip', bytes: zipOf(members) };
}

const folder = mkdtempSync(join(tmpdir(), 'zip-test-'));
afterAll(() => rmSync(folder, { recursive: true }));

describe('members', () => {
  const members: Member[] = [
    { name: 'a/plain.txt', content: 'hello' },
    { name: 'a/', content: '' },
    { name: 'b/packed.txt', content: 'hello '.repeat(100), packed: true },
  ];

  it('are listed, read whole, in part and at their head', async () => {
    const zip = await openZip(fileOf(members));
    expect(zip.members).toEqual([
      { name: 'a/plain.txt', size: 5, packedSize: 5, stored: true },
      { name: 'b/packed.txt', size: 600, packedSize: expect.any(Number), stored: false },
    ]);
    const text = (bytes: Uint8Array) => new TextDecoder().decode(bytes);
    expect(text(await zip.read('a/plain.txt'))).toBe('hello');
    expect(text(await zip.read('b/packed.txt'))).toBe('hello '.repeat(100));
    expect(text(await zip.readRange('a/plain.txt', 1, 3))).toBe('el');
    expect(text(await zip.readRange('b/packed.txt', 6, 11))).toBe('hello');
    expect(text(await zip.readHead('b/packed.txt', 4))).toBe('hell');
    await expect(zip.read('c')).rejects.toThrow(NotFound);
    zip.close();
  });

  it('are read from disk as from memory, and unpacked under a safe name inside the folder', async () => {
    const path = join(folder, 'on-disk.zip');
    writeFileSync(path, zipOf([...members, { name: 'odd "name";$(x).nc', content: 'CDF' }]));
    const file = { name: 'on-disk.zip', path, bytes: new Uint8Array() };
    expect((await listZipMembers(file)).map(({ name }) => name)).toContain('b/packed.txt');
    const member = await extractMember(file, 'odd "name";$(x).nc', join(folder, 'out'));
    expect(member.name).toBe('odd "name";$(x).nc');
    expect(dirname(member.path as string)).toBe(join(folder, 'out'));
    expect(readdirSync(join(folder, 'out'))).toEqual([expect.stringMatching(/^odd-name-x--[0-9a-f]{12}\.nc$/)]);
    expect(new TextDecoder().decode(member.bytes)).toBe('CDF');
    expect(readFileSync(member.path as string, 'utf8')).toBe('CDF');
  });

  it('of one name: the later is read, with a warning', async () => {
    const findings = new FindingList();
    const zip = await openZip(
      fileOf([
        { name: 'a', content: 'old' },
        { name: 'a', content: 'new!' },
      ]),
      findings,
    );
    expect(new TextDecoder().decode(await zip.read('a'))).toBe('new!');
    expect(findings.list().map(({ code }) => code)).toEqual(['archive-duplicate-member']);
    zip.close();
  });
});

describe('refusals', () => {
  it.each([
    ['a path out of the archive', { name: '../evil.txt', content: 'x' }, /invalid relative path/],
    ['an absolute path', { name: '/etc/evil', content: 'x' }, /absolute path/],
    ['control characters', { name: 'a\nb', content: 'x' }, /control characters/],
    ['a member that grows beyond measure', { name: 'zeros', content: new Uint8Array(4 * 2 ** 20), packed: true }, /would grow \d+-fold/],
  ])('%s', async (_, member: Member, words) => {
    const error = await openZip(fileOf([member])).then(
      () => null,
      (reason: unknown) => reason,
    );
    expect(error).toBeInstanceOf(Refused);
    expect((error as Refused).message).toMatch(words);
    expect((error as Refused).findings[0]).toMatchObject({ code: 'archive-unreadable', file: 'a.zip', severity: 'error' });
  });

  it.each([
    ['a wrong checksum', { name: 'a', content: 'x', sum: 1 }, /checksum/],
    ['an encrypted member', { name: 'a', content: 'x', packed: true, flags: 1 }, /encrypted/],
    ['a method that is not read', { name: 'a', content: 'x', method: 1 }, /packed by method 1/],
  ])('%s, when the member is read or unpacked', async (_, member: Member, words) => {
    const zip = await openZip(fileOf([member]));
    await expect(zip.read('a')).rejects.toThrow(words);
    await expect(zip.extract('a', join(folder, 'bad'))).rejects.toThrow(Refused);
    expect(existsSync(join(folder, 'bad')) ? readdirSync(join(folder, 'bad')) : []).toEqual([]);
    zip.close();
  });

  it('lets a small member have any ratio', async () => {
    const zip = await openZip(fileOf([{ name: 'zeros', content: new Uint8Array(900_000), packed: true }]));
    expect(zip.members[0].size / zip.members[0].packedSize).toBeGreaterThan(ZIP_RATIO_LIMIT);
    expect(await zip.read('zeros')).toHaveLength(900_000);
    zip.close();
  });

  it('tells an archive by its first bytes', () => {
    expect(isZip(zipOf([{ name: 'a', content: 'x' }]))).toBe(true);
    expect(isZip(zipOf([]))).toBe(true);
    expect(isZip(new TextEncoder().encode('PK, not'))).toBe(false);
  });
});
