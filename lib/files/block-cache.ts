/** Blocks unpacked lately, of all open files together: slabs that share blocks do not unpack them again. */

/** Most bytes kept. */
export const BLOCK_CACHE_LIMIT = 48 * 1024 * 1024;

interface Kept {
  readonly block: Promise<unknown>;
  readonly bytes: number;
}

const kept = new Map<string, Kept>();
let heldBytes = 0;
let nextOwner = 1;

/** The blocks of one open file. Dismiss it when the file is closed. */
export class BlockCache<T> {
  private readonly owner = `${nextOwner++}:`;

  /**
   * A block, made when it is not at hand. A block that cannot be made is not kept.
   *
   * @param bytes what it takes; one larger than half of the limit is not kept
   * @param keep false when so many blocks are read that none would still be there when it is wanted again
   */
  get(key: string, bytes: number, make: () => Promise<T>, keep = true): Promise<T> {
    const name = this.owner + key;
    const found = kept.get(name);
    if (found !== undefined) {
      kept.delete(name);
      kept.set(name, found);
      return found.block as Promise<T>;
    }
    const block = make();
    if (!keep || bytes > BLOCK_CACHE_LIMIT / 2) return block;
    kept.set(name, { block, bytes });
    heldBytes += bytes;
    block.catch(() => forget(name));
    for (const oldest of kept.keys()) {
      if (heldBytes <= BLOCK_CACHE_LIMIT || oldest === name) break;
      forget(oldest);
    }
    return block;
  }

  dismiss(): void {
    for (const name of kept.keys()) if (name.startsWith(this.owner)) forget(name);
  }
}

function forget(name: string): void {
  const found = kept.get(name);
  if (found === undefined) return;
  kept.delete(name);
  heldBytes -= found.bytes;
}
