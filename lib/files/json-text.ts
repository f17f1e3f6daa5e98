/**
 * JSON bytes → a value, within stated limits of size and depth.
 */
import { type FindingList, shown } from './finding-list.ts';
import type { ImportFile } from './reading.ts';
import { decodeText, detectEncoding, looksBinary } from './text-encoding.ts';

const JSON_BYTE_LIMIT = 256 * 1024 * 1024;
const JSON_DEPTH_LIMIT = 64;

interface JsonReading {
  readonly value: unknown;
  readonly encoding: string;
}

/** Parses a file as JSON; null after a file-level finding. */
export function parseJsonFile(file: ImportFile, findings: FindingList): JsonReading | null {
  const refuse = (code: string, message: string, advice?: string, limit?: string): null => {
    findings.refuse({ code, message, file: file.name, advice, limit });
    return null;
  };
  const { bytes } = file;
  if (bytes.length === 0) return refuse('empty-file', 'The file is empty.', 'Choose a GeoJSON file.');
  if (bytes.length > JSON_BYTE_LIMIT)
    return refuse('file-too-large', `The file has ${bytes.length} bytes.`, 'Cut it into several files.', `${JSON_BYTE_LIMIT} bytes`);
  const encoding = detectEncoding(bytes);
  if (looksBinary(bytes, encoding))
    return refuse('binary-file', 'The file is not text: it holds zero bytes.', 'Export the layer as GeoJSON.');
  if (encoding.name === 'windows-1252') return refuse('not-utf-8', 'The file is not valid UTF-8, as JSON must be.', 'Save it as UTF-8.');
  const text = decodeText(bytes, encoding);
  if (deepestNesting(text) > JSON_DEPTH_LIMIT) {
    return refuse('json-too-deep', 'The JSON is nested too deeply.', 'Check that the file is GeoJSON.', `${JSON_DEPTH_LIMIT} levels`);
  }
  try {
    return { value: JSON.parse(text), encoding: encoding.name };
  } catch (error) {
    return refuse('not-json', `The file is not valid JSON: ${shown((error as Error).message)}`, 'Check that the file is complete.');
  }
}

/** Depth of the deepest array or object, by brackets outside strings; stops counting past the limit. */
function deepestNesting(text: string): number {
  let depth = 0;
  let deepest = 0;
  let inString = false;
  for (let i = 0; i < text.length; i++) {
    const code = text.charCodeAt(i);
    if (inString) {
      if (code === 92) i++;
      else if (code === 34) inString = false;
    } else if (code === 34) inString = true;
    else if (code === 91 || code === 123) {
      if (++depth > deepest) deepest = depth;
      if (deepest > JSON_DEPTH_LIMIT) return deepest;
    } else if (code === 93 || code === 125) depth--;
  }
  return deepest;
}
