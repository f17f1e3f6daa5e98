/**
 * The process that reads one import's files and ends. It holds no database, no secrets and nothing of the service: whatever a file does to
 * it, it can be killed. Pieces of what was staged go to files in the folder it was given; their paths go to the parent, one at a time.
 */
import { readFileSync } from 'node:fs';
import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { TillwaterError } from '../base/errors.ts';
import { readImport } from '../files/read-import.ts';
import type { ImportFile, ImportReading } from '../files/reading.ts';
import { PieceWriter } from './import-staged.ts';
import type { FromReader, ReadRequest, ToReader } from './reader-child.ts';

/** A file on disk whose bytes are read only by those who ask for all of them. */
class FileOnDisk implements ImportFile {
  private held: Uint8Array | null = null;

  constructor(
    readonly name: string,
    readonly path: string,
  ) {}

  get bytes(): Uint8Array {
    this.held ??= readFileSync(this.path);
    return this.held;
  }
}

function tell(message: FromReader): void {
  process.send?.(message);
}

/** Settles when the parent has taken the piece that was told last. */
let taken: () => void = () => {};

async function read(request: ReadRequest): Promise<void> {
  let count = 0;
  const store = async (bytes: Uint8Array): Promise<string> => {
    const path = join(request.folder, `piece-${++count}`);
    await writeFile(path, bytes);
    return path;
  };
  const writer = new PieceWriter(async (piece) => {
    const path = await store(piece);
    const acknowledged = new Promise<void>((resolve) => {
      taken = resolve;
    });
    tell({ say: 'piece', path });
    await acknowledged;
  });
  const files = request.files.map((file) => new FileOnDisk(file.name, file.path));
  const progress = (fraction: number) => tell({ say: 'progress', fraction });
  const reading: ImportReading = await readImport(request.kind, files, request.options, request.context, progress, writer.block);
  const head = await store(await writer.finish(reading.staged));
  const { staged: _staged, ...told } = reading;
  tell({ say: 'done', reading: told, head });
}

process.on('message', (message: ToReader) => {
  if (message.say === 'taken') taken();
  else
    read(message.request).catch((error: unknown) => {
      const known = error instanceof TillwaterError && error.status < 500;
      const findings = known && 'findings' in error && Array.isArray(error.findings) ? error.findings : [];
      tell({ say: 'failed', known, message: error instanceof Error ? error.message : String(error), findings });
    });
});
process.on('disconnect', () => process.exit(0));
tell({ say: 'ready' });
