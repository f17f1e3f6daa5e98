/** Reading a multipart upload within a limit, part by part onto disk, so that its size is never the process's. */
import { createReadStream } from 'node:fs';
import { join } from 'node:path';
import { Readable, Transform } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import busboy from 'busboy';
import { Malformed, TooLarge, UnknownKind } from '../base/errors.ts';
import type { UploadedFile } from '../jobs/imports.ts';
import { makeReadingFolder, removeReadingFolder } from '../jobs/reading-folder.ts';
import { streamToFile } from '../jobs/stream-to-file.ts';
import { requireStorable } from './storable-text.ts';

interface Upload {
  readonly files: readonly UploadedFile[];
  /** text parts by name; the last of a name counts */
  readonly fields: ReadonlyMap<string, string>;
}

const MEGABYTE = 1024 * 1024;
/** Room for the parts' headers and the text parts, beside the files. */
const OVERHEAD_BYTES = MEGABYTE;
const MOST_FILES = 400;
const MOST_FIELDS = 20;

/**
 * Takes the files (parts named `file`) and text parts of a request, and hands them to `use`; what lies on disk for it is gone afterwards.
 *
 * @throws UnknownKind when it is not multipart; TooLarge above the limit; Malformed when it is cut off, names other file parts, or a text
 * holds NUL
 */
export async function withUpload<T>(request: Request, limitMegabytes: number, use: (upload: Upload) => Promise<T>): Promise<T> {
  const type = request.headers.get('content-type') ?? '';
  if (!/^multipart\/form-data\s*;/i.test(type)) {
    throw new UnknownKind(
      `the body is ${type ? `"${type}"` : 'of no stated type'}: send multipart/form-data with parts "kind", "file" and "options"`,
    );
  }
  const limit = limitMegabytes * MEGABYTE + OVERHEAD_BYTES;
  if (Number(request.headers.get('content-length') ?? 0) > limit) throw tooLarge(limitMegabytes);
  const folder = makeReadingFolder();
  try {
    return await use(await takeParts(request, { type, folder, limit, limitMegabytes }));
  } finally {
    removeReadingFolder(folder);
  }
}

interface Taking {
  readonly type: string;
  readonly folder: string;
  readonly limit: number;
  readonly limitMegabytes: number;
}

async function takeParts(request: Request, taking: Taking): Promise<Upload> {
  const fields = new Map<string, string>();
  const files: Promise<UploadedFile>[] = [];
  let fault: Error | null = null;
  const refuse = (error: Error) => {
    fault ??= error;
  };
  const parser = parserOf(taking.type);
  parser.on('field', (name, value, info) => {
    if (info.valueTruncated) refuse(new TooLarge(`the part "${name}" is longer than 1 MB`));
    fields.set(name, value);
  });
  parser.on('file', (name, stream, info) => {
    stream.on('error', () => undefined);
    if (name !== 'file') {
      refuse(new Malformed(`a file was sent as part "${name}": name the part "file"`));
      stream.resume();
      return;
    }
    const taken = takeFile(stream, info.filename ?? 'file', join(taking.folder, `part-${files.length}`));
    taken.catch(() => undefined);
    files.push(taken);
  });
  parser.on('filesLimit', () => refuse(new TooLarge(`more files were sent than an import takes (at most ${MOST_FILES}): split them`)));
  parser.on('partsLimit', () => refuse(new TooLarge('the upload has too many parts: split it')));
  let size = 0;
  const counter = new Transform({
    transform(part: Buffer, _encoding, done) {
      size += part.byteLength;
      done(size > taking.limit ? tooLarge(taking.limitMegabytes) : null, part);
    },
  });
  const body = request.body ? Readable.fromWeb(request.body as Parameters<typeof Readable.fromWeb>[0]) : Readable.from([]);
  try {
    await pipeline(body, counter, parser);
  } catch (cause) {
    await Promise.allSettled(files);
    if (cause instanceof TooLarge) throw cause;
    throw new Malformed('the multipart body cannot be read: it is cut off or its boundary is wrong', [], { cause });
  }
  const taken = await Promise.all(files);
  if (fault) throw fault;
  for (const [name, value] of fields) requireStorable({ [name]: value }, 'upload');
  return { files: taken, fields };
}

function parserOf(type: string): busboy.Busboy {
  try {
    return busboy({
      headers: { 'content-type': type },
      defParamCharset: 'utf8',
      limits: { files: MOST_FILES, fields: MOST_FIELDS, fieldSize: OVERHEAD_BYTES },
    });
  } catch (cause) {
    throw new Malformed('the multipart body cannot be read: its boundary is missing', [], { cause });
  }
}

async function takeFile(stream: Readable, name: string, path: string): Promise<UploadedFile> {
  const { size, sha256, head } = await streamToFile(stream, path);
  return { name, size, sha256, head, content: createReadStreamOf(path) };
}

/** A file's bytes, opened when they are asked for. */
function createReadStreamOf(path: string): AsyncIterable<Uint8Array> {
  return { [Symbol.asyncIterator]: () => createReadStream(path, { highWaterMark: MEGABYTE })[Symbol.asyncIterator]() };
}

function tooLarge(limitMegabytes: number): TooLarge {
  return new TooLarge(
    `the upload is larger than ${limitMegabytes} MB, the most this service takes (TILLWATER_UPLOAD_LIMIT_MB): split the files`,
  );
}
