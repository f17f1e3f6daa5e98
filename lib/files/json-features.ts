/**
 * The members of a large JSON text, found without parsing it whole: where each element of the top-level array "features" starts and ends,
 * and what is left of the object around them. One pass over the bytes; the elements are parsed one by one later, so that only one is in
 * memory at a time beside what is kept of it.
 */

/** Deepest nesting that is followed. */
export const JSON_DEPTH_LIMIT = 64;

export interface FeatureSpans {
  /** start and end of each element, in pairs of byte offsets */
  readonly spans: Float64Array;
  /** elements found */
  readonly count: number;
  /** the text without the elements: `{"type": …, "features": [] …}` */
  readonly frame: string;
}

const QUOTE = 34;
const COMMA = 44;
const COLON = 58;
const OPEN_BRACKET = 91;
const BACKSLASH = 92;
const CLOSE_BRACKET = 93;
const OPEN_BRACE = 123;
const CLOSE_BRACE = 125;
const FEATURES = [...'"features"'].map((letter) => letter.charCodeAt(0));

/**
 * Offsets of the elements of the features array; null when the text has no such array at its top.
 *
 * @param limit most elements
 * @returns `'too-deep'` past the depth limit, `'too-many'` past `limit`
 */
export function featureSpans(text: Buffer, limit: number): FeatureSpans | 'too-deep' | 'too-many' | null {
  const deep = deeperThanAllowed(text);
  if (deep) return 'too-deep';
  const open = arrayStart(text);
  if (open === null) return null;
  const spans = new Spans();
  let depth = 0;
  let start = open + 1;
  for (let i = open + 1; i < text.length; i++) {
    const byte = text[i];
    if (byte === QUOTE) i = stringEnd(text, i);
    else if (byte === OPEN_BRACKET || byte === OPEN_BRACE) depth++;
    else if (depth > 0 && (byte === CLOSE_BRACKET || byte === CLOSE_BRACE)) depth--;
    else if (depth === 0 && (byte === COMMA || byte === CLOSE_BRACKET || byte === CLOSE_BRACE)) {
      const empty = byte === CLOSE_BRACKET && spans.count === 0 && isBlank(text, start, i);
      if (!empty) spans.push(start, i);
      start = i + 1;
      if (spans.count > limit) return 'too-many';
      if (byte !== COMMA) return { ...spans.done(), frame: frameOf(text, open, i) };
    }
  }
  spans.push(start, text.length);
  return { ...spans.done(), frame: frameOf(text, open, text.length) };
}

/** Start of the array behind the first top-level key "features". */
function arrayStart(text: Buffer): number | null {
  let depth = 0;
  for (let i = 0; i < text.length; i++) {
    const byte = text[i];
    if (byte === QUOTE) {
      const end = stringEnd(text, i);
      if (depth === 1 && end - i === FEATURES.length - 1 && FEATURES.every((letter, k) => text[i + k] === letter)) {
        const colon = skipBlank(text, end + 1);
        const value = skipBlank(text, colon + 1);
        if (text[colon] === COLON && text[value] === OPEN_BRACKET) return value;
      }
      i = end;
    } else if (byte === OPEN_BRACKET || byte === OPEN_BRACE) depth++;
    else if (byte === CLOSE_BRACKET || byte === CLOSE_BRACE) depth--;
  }
  return null;
}

function frameOf(text: Buffer, open: number, close: number): string {
  return text.toString('utf-8', 0, open + 1) + text.toString('utf-8', close);
}

/** Offset of the quote that ends the string begun at `start`, or the end of the text. */
function stringEnd(text: Buffer, start: number): number {
  for (let i = text.indexOf(QUOTE, start + 1); i >= 0; i = text.indexOf(QUOTE, i + 1)) {
    let slashes = 0;
    while (text[i - 1 - slashes] === BACKSLASH) slashes++;
    if (slashes % 2 === 0) return i;
  }
  return text.length;
}

function skipBlank(text: Buffer, from: number): number {
  let i = from;
  while (text[i] === 32 || text[i] === 9 || text[i] === 10 || text[i] === 13) i++;
  return i;
}

function isBlank(text: Buffer, start: number, end: number): boolean {
  return skipBlank(text, start) >= end;
}

function deeperThanAllowed(text: Buffer): boolean {
  let depth = 0;
  for (let i = 0; i < text.length; i++) {
    const byte = text[i];
    if (byte === QUOTE) i = stringEnd(text, i);
    else if (byte === OPEN_BRACKET || byte === OPEN_BRACE) {
      if (++depth > JSON_DEPTH_LIMIT) return true;
    } else if (byte === CLOSE_BRACKET || byte === CLOSE_BRACE) depth--;
  }
  return false;
}

/** Pairs of offsets in an array that grows. */
class Spans {
  count = 0;
  private pairs = new Float64Array(2048);

  push(start: number, end: number): void {
    if (this.count * 2 === this.pairs.length) {
      const grown = new Float64Array(this.pairs.length * 2);
      grown.set(this.pairs);
      this.pairs = grown;
    }
    this.pairs[this.count * 2] = start;
    this.pairs[this.count * 2 + 1] = end;
    this.count++;
  }

  done() {
    return { spans: this.pairs.subarray(0, this.count * 2), count: this.count };
  }
}
