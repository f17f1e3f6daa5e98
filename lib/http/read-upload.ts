/** Reading a multipart upload within a limit. */
import { Malformed, TooLarge, UnknownKind } from '../base/errors.ts';
import { requireStorable } from './storable-text.ts';

interface Upload {
  readonly files: readonly { readonly name: string; readonly bytes: Uint8Array }[];
  /** text parts by name; the last of a name counts */
  readonly fields: ReadonlyMap<string, string>;
}

/** Room for the parts' headers and the text parts, beside the files. */
const OVERHEAD_BYTES = 1024 * 1024;

/**
 * The files (parts named `file`) and text parts of a request.
 *
 * @throws UnknownKind when it is not multipart; TooLarge above the limit; Malformed when it is cut off, names other file parts, or a text holds NUL
 */
export async function readUpload(request: Request, limitMegabytes: number): Promise<Upload> {
  const type = request.headers.get('content-type') ?? '';
  if (!/^multipart\/form-data\s*;/i.test(type)) {
    throw new UnknownKind(
      `the body is ${type ? `"${type}"` : 'of no stated type'}: send multipart/form-data with parts "kind", "file" and "options"`,
    );
  }
  const limit = limitMegabytes * 1024 * 1024 + OVERHEAD_BYTES;
  if (Number(request.headers.get('content-length') ?? 0) > limit) throw tooLarge(limitMegabytes);
  const form = await formOf(request, type, { limit, limitMegabytes });
  const files: { name: string; bytes: Uint8Array }[] = [];
  const fields = new Map<string, string>();
  for (const [name, value] of form.entries()) {
    if (typeof value === 'string') {
      requireStorable({ [name]: value }, 'upload');
      fields.set(name, value);
    } else if (name === 'file') files.push({ name: value.name, bytes: new Uint8Array(await value.arrayBuffer()) });
    else throw new Malformed(`a file was sent as part "${name}": name the part "file"`);
  }
  return { files, fields };
}

async function formOf(request: Request, type: string, given: { limit: number; limitMegabytes: number }): Promise<FormData> {
  let size = 0;
  let over = false;
  const counted = request.body?.pipeThrough(
    new TransformStream<Uint8Array, Uint8Array>({
      transform(part, controller) {
        size += part.byteLength;
        over ||= size > given.limit;
        if (over) controller.error(new Error('over the limit'));
        else controller.enqueue(part);
      },
    }),
  );
  try {
    return await new Response(counted ?? null, { headers: { 'content-type': type } }).formData();
  } catch (cause) {
    if (over) throw tooLarge(given.limitMegabytes);
    throw new Malformed('the multipart body cannot be read: it is cut off or its boundary is wrong', [], { cause });
  }
}

function tooLarge(limitMegabytes: number): TooLarge {
  return new TooLarge(
    `the upload is larger than ${limitMegabytes} MB, the most this service takes (TILLWATER_UPLOAD_LIMIT_MB): split the files`,
  );
}
