/**
 * The thread that runs the HDF5 library, a C library compiled to WebAssembly: what a damaged file does to it, it does to this thread alone.
 *
 * It opens the files it was told to open and no others, whatever links or external parts a file names, and writes nothing.
 */
import { parentPort } from 'node:worker_threads';
import { Module as library, ready } from 'h5wasm/node';
import { describeFile } from './hdf5-contents.ts';
import type { Hdf5Reply, Hdf5Request } from './hdf5-messages.ts';
import { readNumbers, readTexts } from './hdf5-values.ts';

const OPEN_READ_ONLY = 0;
/** No lower or upper library version for what is written; nothing is. */
const NO_BOUND = -1;

/** Files that may be opened, by path. */
const allowed = new Set<string>();
const opened = new Map<number, { readonly id: bigint; readonly path: string }>();
let nextHandle = 1;

interface FileSystem {
  open(path: string, ...rest: unknown[]): unknown;
  write(stream: unknown, buffer: unknown, offset: number, length: number, ...rest: unknown[]): number;
}

/** Keeps the library within the files it was given: linked files and plug-ins are not opened, its messages do not reach the console. */
function confine(fileSystem: FileSystem): void {
  const { open } = fileSystem;
  fileSystem.open = (path, ...rest) => {
    if (!allowed.has(path)) throw Object.assign(new Error('not one of the files of this import'), { name: 'ErrnoError', errno: 2 });
    return open(path, ...rest);
  };
  fileSystem.write = (_stream, _buffer, _offset, length) => length;
}

const isReady = ready.then(() => confine(library.FS as unknown as FileSystem));

function openFile(path: string) {
  allowed.add(path);
  const id = library.open(path, OPEN_READ_ONLY, false, NO_BOUND, NO_BOUND);
  if (id < 0n) {
    allowed.delete(path);
    throw new Error('it is damaged or cut short');
  }
  const handle = nextHandle++;
  opened.set(handle, { id, path });
  return { handle, ...describeFile(library, id) };
}

function idOf(handle: number): bigint {
  const file = opened.get(handle);
  if (file === undefined) throw new Error('the file is closed');
  return file.id;
}

function closeFile(handle: number): null {
  library.close_file(idOf(handle));
  const path = opened.get(handle)?.path ?? '';
  opened.delete(handle);
  if (![...opened.values()].some((file) => file.path === path)) allowed.delete(path);
  return null;
}

function answer(request: Hdf5Request) {
  if (request.kind === 'open') return openFile(request.path);
  if (request.kind === 'close') return closeFile(request.handle);
  const read = request.kind === 'read' ? readNumbers : readTexts;
  return read(library, idOf(request.handle), request.path, request.start, request.count);
}

parentPort?.on('message', async ({ id, request }: { id: number; request: Hdf5Request }) => {
  await isReady;
  try {
    const value = answer(request);
    parentPort?.postMessage({ id, value } satisfies Hdf5Reply, value instanceof Float64Array ? [value.buffer as ArrayBuffer] : []);
  } catch (error) {
    const failure = error instanceof Error ? error.message : String(error);
    parentPort?.postMessage({ id, failure } satisfies Hdf5Reply);
  }
});
