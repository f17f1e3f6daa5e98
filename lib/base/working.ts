/**
 * The record of a derivation: what a numeric room did, step by step, when someone asks to see the working of one parcel and day.
 */

/** One step of a derivation as the code did it. */
export interface WorkingStep {
  /** which part of the chain: weather, radiation, reference-et, calendar, coefficient, surface, root-zone, irrigation, balance */
  readonly part: string;
  readonly symbol: string;
  readonly name: string;
  /** the equation in symbols */
  readonly expression: string;
  /** the numbers put in, in order: symbol, value, unit */
  readonly inputs: readonly { readonly symbol: string; readonly value: number; readonly unit: string }[];
  readonly result: number;
  readonly unit: string;
  /** publication and equation number */
  readonly source: string;
  /** set when a parcel has several strips: which planting */
  readonly strip?: string;
}

/** Recorder handed through the numeric rooms; null in a batch run. */
export interface Trace {
  step(step: WorkingStep): void;
}

/** A named number of a working. */
export function quantity(symbol: string, value: number, unit: string): WorkingStep['inputs'][number] {
  return { symbol, value, unit };
}
