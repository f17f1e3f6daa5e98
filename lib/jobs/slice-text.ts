/**
 * The parcels of a slice between planning and computing: a line for each, its names, a tab, and its frozen input, both as JSON. The input's text goes into
 * the database as it is.
 */
import type { FrozenParcel } from './run-plan.ts';

interface Named {
  readonly code: string;
  readonly turnout: string | null;
  readonly reach: string | null;
}

/** One parcel of a slice; `json` is the text of `input`. */
export interface SliceParcel extends Named {
  readonly input: FrozenParcel;
  readonly json: string;
}

/** @param json the parcel's frozen input as JSON: it has no line ends or tabs of its own, which JSON escapes */
export function sliceLine({ code, turnout, reach }: Named, json: string): string {
  return `${JSON.stringify([code, turnout, reach])}\t${json}\n`;
}

/** Back from the lines. */
export function readSliceText(text: Uint8Array): SliceParcel[] {
  const lines = Buffer.from(text.buffer, text.byteOffset, text.byteLength).toString('utf8').split('\n');
  lines.pop();
  return lines.map((line) => {
    const tab = line.indexOf('\t');
    const [code, turnout, reach] = JSON.parse(line.slice(0, tab));
    const json = line.slice(tab + 1);
    return { code, turnout, reach, input: JSON.parse(json), json };
  });
}
