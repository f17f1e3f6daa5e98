/** Bytes at any place of a file, from disk where it lies there, else from memory: readers of large formats take only what they need. */
import { type FileHandle, open } from 'node:fs/promises';
import type { ImportFile } from './reading.ts';

export interface ByteSource {
  /** bytes in all */
  readonly size: number;
  /** Bytes from `offset`; fewer than `length` where the file ends. */
  read(offset: number, length: number): Promise<Uint8Array>;
  /** Fills `into` with bytes from `offset`; answers how many there were. */
  readInto(into: Uint8Array, offset: number): Promise<number>;
  close(): Promise<void>;
}

/** Opens a file for reading at any place. Close it. */
export async function openBytes(file: ImportFile): Promise<ByteSource> {
  if (file.path === undefined) return new MemoryBytes(file.bytes);
  const handle = await open(file.path, 'r');
  try {
    return new DiskBytes(handle, (await handle.stat()).size);
  } catch (error) {
    await handle.close();
    throw error;
  }
}

/** The first bytes of a file, at most `length`. */
export async function headOf(file: ImportFile, length: number): Promise<Uint8Array> {
  const source = await openBytes(file);
  try {
    return await source.read(0, length);
  } finally {
    await source.close();
  }
}

class MemoryBytes implements ByteSource {
  readonly size: number;

  constructor(private readonly bytes: Uint8Array) {
    this.size = bytes.length;
  }

  async read(offset: number, length: number): Promise<Uint8Array> {
    return this.bytes.slice(Math.min(offset, this.size), Math.min(offset + length, this.size));
  }

  async readInto(into: Uint8Array, offset: number): Promise<number> {
    const bytes = this.bytes.subarray(Math.min(offset, this.size), Math.min(offset + into.length, this.size));
    into.set(bytes);
    return bytes.length;
  }

  async close(): Promise<void> {}
}

class DiskBytes implements ByteSource {
  constructor(
    private readonly handle: FileHandle,
    readonly size: number,
  ) {}

  async read(offset: number, length: number): Promise<Uint8Array> {
    const bytes = new Uint8Array(Math.max(0, Math.min(length, this.size - offset)));
    return bytes.subarray(0, await this.readInto(bytes, offset));
  }

  async readInto(into: Uint8Array, offset: number): Promise<number> {
    let filled = 0;
    while (filled < into.length) {
      const { bytesRead } = await this.handle.read(into, filled, into.length - filled, offset + filled);
      if (bytesRead === 0) break;
      filled += bytesRead;
    }
    return filled;
  }

  async close(): Promise<void> {
    await this.handle.close();
  }
}
