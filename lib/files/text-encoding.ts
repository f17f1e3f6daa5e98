/**
 * Which encoding a text file is in, told from its bytes.
 */
import { isUtf8 } from 'node:buffer';
import iconv from 'iconv-lite';

export interface TextEncoding {
  /** name as iconv knows it */
  readonly name: string;
  /** length of the byte-order mark */
  readonly skip: number;
}

const SNIFFED = 4096;

/**
 * Encoding of a text: byte-order mark first, then the pattern of zero bytes (UTF-16 without a mark), then UTF-8 if every sequence is
 * valid, else Windows-1252.
 *
 * @example detectEncoding(new Uint8Array([0xef, 0xbb, 0xbf, 0x61])) // { name: 'utf-8', skip: 3 }
 */
export function detectEncoding(bytes: Uint8Array): TextEncoding {
  if (bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf) return { name: 'utf-8', skip: 3 };
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return { name: 'utf-16le', skip: 2 };
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return { name: 'utf-16be', skip: 2 };
  const zeros = zeroShares(bytes);
  if (zeros.odd > 0.3 && zeros.even < 0.05) return { name: 'utf-16le', skip: 0 };
  if (zeros.even > 0.3 && zeros.odd < 0.05) return { name: 'utf-16be', skip: 0 };
  return { name: isUtf8(bytes) ? 'utf-8' : 'windows-1252', skip: 0 };
}

function zeroShares(bytes: Uint8Array): { even: number; odd: number } {
  const length = Math.min(bytes.length, SNIFFED) & ~1;
  const count = [0, 0];
  for (let i = 0; i < length; i++) if (bytes[i] === 0) count[i & 1]++;
  const half = Math.max(1, length / 2);
  return { even: count[0] / half, odd: count[1] / half };
}

/** True when the decoded bytes cannot be text: zero bytes outside UTF-16. */
export function looksBinary(bytes: Uint8Array, encoding: TextEncoding): boolean {
  if (encoding.name.startsWith('utf-16')) return false;
  return bytes.subarray(0, SNIFFED).includes(0);
}

/** True when iconv can decode this encoding. */
export function isKnownEncoding(name: string): boolean {
  return iconv.encodingExists(name);
}

/** The whole text, without the byte-order mark. */
export function decodeText(bytes: Uint8Array, encoding: TextEncoding): string {
  return iconv.decode(Buffer.from(bytes.buffer, bytes.byteOffset + encoding.skip, bytes.byteLength - encoding.skip), encoding.name);
}

/** The text as UTF-8 in pieces of about `size` bytes; UTF-8 itself is passed on without a copy. */
export function* utf8Pieces(bytes: Uint8Array, encoding: TextEncoding, size: number): Generator<Buffer> {
  const body = Buffer.from(bytes.buffer, bytes.byteOffset + encoding.skip, bytes.byteLength - encoding.skip);
  const decoder = encoding.name === 'utf-8' ? null : iconv.getDecoder(encoding.name);
  for (let start = 0; start < body.length; start += size) {
    const piece = body.subarray(start, start + size);
    yield decoder ? Buffer.from(decoder.write(piece), 'utf-8') : piece;
  }
  const rest = decoder?.end();
  if (rest) yield Buffer.from(rest, 'utf-8');
}
