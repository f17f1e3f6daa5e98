/**
 * Zip archives, read member by member: never unpacked whole, never written outside the folder asked for, and never beyond the limits below.
 *
 * The central directory is the truth about an archive; each member is checked against its length and CRC-32 as it is read.
 */
import { createWriteStream } from 'node:fs';
import { mkdir, rm } from 'node:fs/promises';
import { basename, join } from 'node:path';
import { type Readable, Transform } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { crc32 } from 'node:zlib';
import { type Entry, fromBufferPromise, openPromise, type ZipFile } from 'yauzl';
import { NotFound, Refused } from '../base/errors.ts';
import { fileOnDisk, safeName } from './file-on-disk.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { ImportFile } from './reading.ts';

/** Most members of an archive; an array store in a zip has one for each chunk. */
export const ZIP_MEMBER_LIMIT = 200_000;
/** Largest member that is read into memory [bytes]. */
export const ZIP_READ_LIMIT = 256 * 1024 * 1024;
/** Largest member that is unpacked to a folder [bytes]. */
export const ZIP_EXTRACT_LIMIT = 4 * 1024 * 1024 * 1024;
/** Most bytes of all members of an archive together, unpacked. */
export const ZIP_TOTAL_LIMIT = 16 * 1024 * 1024 * 1024;
/** Largest ratio of unpacked to packed bytes of a member; data that mean something stay well below. */
export const ZIP_RATIO_LIMIT = 250;
/** Members up to this size [bytes] may have any ratio: they can do no harm. */
export const ZIP_RATIO_FLOOR = 1024 * 1024;

/** A file inside an archive. */
export interface ZipMember {
  /** path within the archive, with forward slashes */
  readonly name: string;
  /** unpacked [bytes] */
  readonly size: number;
  /** packed [bytes] */
  readonly packedSize: number;
  /** kept as it is, so that parts of it can be read */
  readonly stored: boolean;
}

/** An opened archive. Close it. */
export interface ZipArchive {
  /** in the order of the archive, folders left out; of two members with one name the later */
  readonly members: readonly ZipMember[];
  /** The member of that name, or null. */
  find(name: string): ZipMember | null;
  /**
   * All bytes of a member.
   * @throws {NotFound} when there is none of that name; {Refused} when it is damaged, encrypted or above `ZIP_READ_LIMIT`
   */
  read(name: string): Promise<Uint8Array>;
  /** Bytes from `start` (inclusive) to `end` (exclusive) of a member; a packed member is unpacked for it. */
  readRange(name: string, start: number, end: number): Promise<Uint8Array>;
  /** The first bytes of a member, at most `length`; a damaged member gives what could be read. */
  readHead(name: string, length: number): Promise<Uint8Array>;
  /**
   * Unpacks a member into a folder, under a name of our own making that keeps the member's last name part readable.
   * @returns the file, with `name` the member's last part and `path` where it lies
   */
  extract(name: string, folder: string): Promise<ImportFile>;
  close(): void;
}

/** True when bytes start like a zip archive (also an empty one). */
export function isZip(head: Uint8Array): boolean {
  return head.length >= 4 && head[0] === 0x50 && head[1] === 0x4b && ((head[2] === 3 && head[3] === 4) || (head[2] === 5 && head[3] === 6));
}

/**
 * Opens an archive and lists its members.
 *
 * @throws {Refused} when it is no archive, is damaged, spans several disks, names a path outside itself, or breaks a limit
 */
export async function openZip(file: ImportFile, findings?: FindingList): Promise<ZipArchive> {
  const zip = await told(file.name, () =>
    file.path === undefined
      ? fromBufferPromise(Buffer.from(file.bytes.buffer, file.bytes.byteOffset, file.bytes.byteLength), OPTIONS)
      : openPromise(file.path, OPTIONS),
  );
  zip.on('error', () => undefined);
  try {
    const entries = await told(file.name, () => listEntries(zip, file.name, findings));
    return new OpenArchive(file.name, zip, entries);
  } catch (error) {
    zip.close();
    throw error;
  }
}

/** Members of an archive, without keeping it open. @throws as `openZip` */
export async function listZipMembers(file: ImportFile, findings?: FindingList): Promise<readonly ZipMember[]> {
  const archive = await openZip(file, findings);
  archive.close();
  return archive.members;
}

/** Unpacks one member of an archive into a folder. @throws as `openZip` and `ZipArchive.read` */
export async function extractMember(file: ImportFile, name: string, folder: string): Promise<ImportFile> {
  const archive = await openZip(file);
  try {
    return await archive.extract(name, folder);
  } finally {
    archive.close();
  }
}

const OPTIONS = { autoClose: false, lazyEntries: true, decodeStrings: true, validateEntrySizes: true, strictFileNames: false } as const;
const STORED = 0;
const DEFLATED = 8;

async function listEntries(zip: ZipFile, archive: string, findings?: FindingList): Promise<Map<string, Entry>> {
  if (zip.entryCount > ZIP_MEMBER_LIMIT) {
    throw refusal(archive, `has ${zip.entryCount} members`, `${ZIP_MEMBER_LIMIT} members`, 'Split the archive.');
  }
  const entries = new Map<string, Entry>();
  let total = 0;
  for await (const entry of zip.eachEntry()) {
    if (entry.fileName.endsWith('/')) continue;
    checkEntry(archive, entry);
    total += entry.uncompressedSize;
    if (total > ZIP_TOTAL_LIMIT) {
      throw refusal(archive, 'unpacks to more than is taken', `${ZIP_TOTAL_LIMIT / 2 ** 30} GiB`, 'Split the archive.');
    }
    if (entries.has(entry.fileName)) {
      findings?.warn({
        code: 'archive-duplicate-member',
        message: `The archive has two members named "${shown(entry.fileName)}"; the later one is read.`,
        file: archive,
      });
    }
    entries.set(entry.fileName, entry);
  }
  return entries;
}

function checkEntry(archive: string, entry: Entry): void {
  const member = `member "${shown(entry.fileName)}"`;
  if (/\p{Cc}/u.test(entry.fileName)) throw refusal(archive, `${member} has control characters in its name`, undefined, REPACK);
  if (entry.uncompressedSize > ZIP_RATIO_FLOOR && entry.uncompressedSize > ZIP_RATIO_LIMIT * entry.compressedSize) {
    const ratio = Math.round(entry.uncompressedSize / Math.max(1, entry.compressedSize));
    throw refusal(
      archive,
      `${member} would grow ${ratio}-fold when unpacked`,
      `${ZIP_RATIO_LIMIT}-fold`,
      'Send the file itself, not an archive of it.',
    );
  }
}

class OpenArchive implements ZipArchive {
  readonly members: readonly ZipMember[];

  constructor(
    private readonly archive: string,
    private readonly zip: ZipFile,
    private readonly entries: ReadonlyMap<string, Entry>,
  ) {
    this.members = [...entries.values()].map(memberOf);
  }

  find(name: string): ZipMember | null {
    const entry = this.entries.get(name);
    return entry === undefined ? null : memberOf(entry);
  }

  async read(name: string): Promise<Uint8Array> {
    const entry = this.entry(name);
    this.checkSize(entry, ZIP_READ_LIMIT);
    const bytes = new Uint8Array(entry.uncompressedSize);
    let filled = 0;
    await this.damaged(entry, async () => {
      for await (const part of await this.stream(entry)) {
        bytes.set(part, filled);
        filled += part.length;
      }
      checkSum(entry, crc32(bytes));
    });
    return bytes;
  }

  async readRange(name: string, start: number, end: number): Promise<Uint8Array> {
    const entry = this.entry(name);
    const from = Math.min(Math.max(0, start), entry.uncompressedSize);
    const to = Math.min(Math.max(from, end), entry.uncompressedSize);
    if (entry.compressionMethod !== STORED || entry.isEncrypted()) return (await this.read(name)).subarray(from, to);
    const bytes = new Uint8Array(to - from);
    let filled = 0;
    await this.damaged(entry, async () => {
      const stream = await this.zip.openReadStreamPromise(entry, { decodeFileData: false, start: from, end: to });
      for await (const part of stream) {
        bytes.set(part, filled);
        filled += part.length;
      }
    });
    return bytes;
  }

  async readHead(name: string, length: number): Promise<Uint8Array> {
    const parts: Uint8Array[] = [];
    let filled = 0;
    try {
      const stream = await this.stream(this.entry(name));
      for await (const part of stream) {
        parts.push(part);
        filled += part.length;
        if (filled >= length) break;
      }
      stream.destroy();
    } catch (error) {
      if (error instanceof NotFound) throw error;
    }
    return new Uint8Array(Buffer.concat(parts)).subarray(0, length);
  }

  async extract(name: string, folder: string): Promise<ImportFile> {
    const entry = this.entry(name);
    this.checkSize(entry, ZIP_EXTRACT_LIMIT);
    const path = join(folder, safeName(name));
    await mkdir(folder, { recursive: true });
    try {
      await this.damaged(entry, async () => {
        let sum = 0;
        const check = new Transform({
          transform(part: Buffer, _encoding, done) {
            sum = crc32(part, sum);
            done(null, part);
          },
        });
        await pipeline(await this.stream(entry), check, createWriteStream(path));
        checkSum(entry, sum);
      });
    } catch (error) {
      await rm(path, { force: true });
      throw error;
    }
    return fileOnDisk(basename(name), path);
  }

  close(): void {
    this.zip.close();
  }

  private entry(name: string): Entry {
    const entry = this.entries.get(name);
    if (entry === undefined) throw new NotFound(`The archive ${this.archive} has no member "${shown(name)}".`);
    return entry;
  }

  private async stream(entry: Entry): Promise<Readable> {
    const member = `member "${shown(entry.fileName)}"`;
    if (entry.isEncrypted()) throw refusal(this.archive, `${member} is encrypted`, undefined, 'Pack it without a password.');
    if (entry.compressionMethod !== STORED && entry.compressionMethod !== DEFLATED) {
      throw refusal(this.archive, `${member} is packed by method ${entry.compressionMethod}`, 'stored or deflate', REPACK);
    }
    return this.zip.openReadStreamPromise(entry);
  }

  private checkSize(entry: Entry, limit: number): void {
    if (entry.uncompressedSize <= limit) return;
    const size = `${Math.ceil(entry.uncompressedSize / 2 ** 20)} MB`;
    throw refusal(
      this.archive,
      `member "${shown(entry.fileName)}" unpacks to ${size}`,
      `${Math.round(limit / 2 ** 20)} MB`,
      'Cut it into parts.',
    );
  }

  private async damaged(entry: Entry, work: () => Promise<void>): Promise<void> {
    try {
      await work();
    } catch (error) {
      if (error instanceof Refused) throw error;
      throw refusal(this.archive, `member "${shown(entry.fileName)}" cannot be unpacked: ${reasonOf(error)}`, undefined, REPACK, error);
    }
  }
}

const REPACK = 'Pack it again with a common tool, or send the files themselves.';

function memberOf(entry: Entry): ZipMember {
  const { fileName, uncompressedSize, compressedSize, compressionMethod } = entry;
  return { name: fileName, size: uncompressedSize, packedSize: compressedSize, stored: compressionMethod === STORED };
}

function checkSum(entry: Entry, sum: number): void {
  if (sum !== entry.crc32) throw new Error('its checksum is not the one the archive states');
}

async function told<T>(archive: string, work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (error) {
    if (error instanceof Refused) throw error;
    throw refusal(archive, `cannot be read as a zip archive: ${reasonOf(error)}`, undefined, REPACK, error);
  }
}

function reasonOf(error: unknown): string {
  return (error instanceof Error ? error.message : String(error)).replace(/\.+$/, '');
}

function refusal(archive: string, what: string, limit: string | undefined, advice: string, cause?: unknown): Refused {
  const message = `The archive ${archive} ${what.startsWith('member') ? `is refused: ${what}` : what}.`;
  return new Refused(message, [{ severity: 'error', code: 'archive-unreadable', message, file: archive, limit, advice }], { cause });
}
