/**
 * A dBASE table (.dbf), the attributes of a shapefile → its fields and records. Of our own because the encoding must be sniffed and deleted
 * records kept apart.
 */
import iconv from 'iconv-lite';
import { type DbfEncoding, dbfEncoding } from './dbf-encoding.ts';
import type { ImportFile } from './reading.ts';
import { refusal } from './vector-source.ts';

interface DbfField {
  readonly name: string;
  readonly type: string;
  /** first byte within the record */
  readonly start: number;
  readonly length: number;
}

export interface DbfTable {
  readonly encoding: DbfEncoding;
  readonly fields: readonly DbfField[];
  /** records that are there */
  readonly count: number;
  /** records the header states */
  readonly stated: number;
  /** values of a record, from 0; null when it is marked as deleted */
  record(index: number): Record<string, unknown> | null;
}

const HEADER = 32;
const FIELD_LIMIT = 2048;
/** Bytes of texts looked at to tell the encoding. */
const SAMPLE_BYTES = 65_536;

/** Opens a table. @throws {Refused} when its header makes no sense */
export function openDbf(file: ImportFile, bytes: Uint8Array, request: { encoding?: string; cpg: string | null }): DbfTable {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const bad = (what: string) =>
    refusal(file.name, { code: 'dbf-unreadable', message: `The attribute table (.dbf) ${what}.`, advice: 'Export the layer again.' });
  if (bytes.length < HEADER + 1) throw bad('is cut short');
  const stated = view.getUint32(4, true);
  const headerLength = view.getUint16(8, true);
  const recordLength = view.getUint16(10, true);
  if (headerLength < HEADER + 1 || headerLength > bytes.length || recordLength < 1) throw bad('has a header that makes no sense');
  const raw = rawFields(bytes, headerLength);
  if (raw.length === 0 || raw.length > FIELD_LIMIT) throw bad('has no fields');
  const end = raw[raw.length - 1].start + raw[raw.length - 1].length;
  if (end > recordLength) throw bad('has fields that are longer than its records');
  const count = Math.min(stated, Math.floor((bytes.length - headerLength) / recordLength));
  const encoding = dbfEncoding(request.encoding, request.cpg, bytes[29], sampleOf(bytes, raw, { headerLength, recordLength, count }));
  const decode = (from: number, to: number) => iconv.decode(Buffer.from(bytes.buffer, bytes.byteOffset + from, to - from), encoding.name);
  const fields = named(raw, decode);
  return {
    encoding,
    fields,
    count,
    stated,
    record(index) {
      const start = headerLength + index * recordLength;
      if (index >= count || bytes[start] === 0x2a) return null;
      const values: Record<string, unknown> = {};
      for (const field of fields) values[field.name] = cellOf(field, bytes, start + field.start, decode);
      return values;
    },
  };
}

type RawField = Omit<DbfField, 'name'> & { readonly nameStart: number; readonly nameEnd: number };

function rawFields(bytes: Uint8Array, headerLength: number): RawField[] {
  const fields: RawField[] = [];
  let start = 1;
  for (let at = HEADER; at + HEADER <= headerLength && bytes[at] !== 0x0d; at += HEADER) {
    let nameEnd = at;
    while (nameEnd < at + 11 && bytes[nameEnd] !== 0) nameEnd++;
    const type = String.fromCharCode(bytes[at + 11]);
    const length = type === 'C' ? bytes[at + 16] + bytes[at + 17] * 256 : bytes[at + 16];
    fields.push({ nameStart: at, nameEnd, type, start, length });
    start += length;
  }
  return fields;
}

function named(raw: readonly RawField[], decode: (from: number, to: number) => string): DbfField[] {
  const seen = new Map<string, number>();
  return raw.map(({ nameStart, nameEnd, type, start, length }, index) => {
    const text = decode(nameStart, nameEnd).trim() || `field_${index + 1}`;
    const times = (seen.get(text) ?? 0) + 1;
    seen.set(text, times);
    return { name: times === 1 ? text : `${text}_${times}`, type, start, length };
  });
}

/** Bytes of field names and texts, to tell the encoding by. */
function sampleOf(
  bytes: Uint8Array,
  fields: readonly RawField[],
  { headerLength, recordLength, count }: { headerLength: number; recordLength: number; count: number },
): Uint8Array {
  const parts = fields.map(({ nameStart, nameEnd }) => bytes.subarray(nameStart, nameEnd));
  const texts = fields.filter(({ type }) => type === 'C');
  let size = 0;
  for (let k = 0; k < count && size < SAMPLE_BYTES && texts.length > 0; k++) {
    for (const { start, length } of texts) {
      const from = headerLength + k * recordLength + start;
      parts.push(trimmed(bytes.subarray(from, from + length)));
      size += length;
    }
  }
  return new Uint8Array(Buffer.concat(parts.flatMap((part) => [part, Uint8Array.of(32)])));
}

/** Without the padding; a text cut in the middle of a UTF-8 letter loses that letter. */
function trimmed(part: Uint8Array): Uint8Array {
  let end = part.length;
  while (end > 0 && (part[end - 1] === 32 || part[end - 1] === 0)) end--;
  if (end < part.length) return part.subarray(0, end);
  let lead = end - 1;
  while (lead > end - 4 && lead >= 0 && (part[lead] & 0xc0) === 0x80) lead--;
  const first = part[lead] ?? 0;
  const wanted = first >= 0xf0 ? 4 : first >= 0xe0 ? 3 : first >= 0xc0 ? 2 : 1;
  return wanted > end - lead ? part.subarray(0, lead) : part.subarray(0, end);
}

function cellOf(field: DbfField, bytes: Uint8Array, at: number, decode: (from: number, to: number) => string): unknown {
  const { type, length } = field;
  if (type === 'I' || type === 'O' || (type === 'B' && length === 8)) return binaryNumber(type, bytes, at);
  const text = decode(at, at + length)
    .replaceAll('\0', ' ')
    .trim();
  if (text === '' || /^\*+$/.test(text)) return null;
  if (type === 'N' || type === 'F') {
    const value = Number(text.replace(',', '.'));
    return Number.isFinite(value) ? value : null;
  }
  if (type === 'L') return /^[yt]$/i.test(text) ? true : /^[nf]$/i.test(text) ? false : null;
  if (type === 'D') return /^\d{8}$/.test(text) ? `${text.slice(0, 4)}-${text.slice(4, 6)}-${text.slice(6)}` : null;
  return text;
}

function binaryNumber(type: string, bytes: Uint8Array, at: number): number {
  const view = new DataView(bytes.buffer, bytes.byteOffset + at, type === 'I' ? 4 : 8);
  return type === 'I' ? view.getInt32(0, true) : view.getFloat64(0, true);
}
