/** What is said between the process and its HDF5 thread. Everything crosses by structured clone. */
import type { ArrayVariable, AttributeValue } from './array-file.ts';

/** One variable as the HDF5 library describes it. */
export interface Hdf5Variable extends ArrayVariable {
  /** path of the dataset in the file */
  readonly path: string;
  /** why it cannot be read; null when it can */
  readonly fault: string | null;
  readonly layout: Hdf5Layout;
  /** lengths that are stored; shorter than the shape where a growing dimension has been filled further by other variables */
  readonly storedShape: readonly number[];
}

/** What is needed to read a chunked dataset's blocks without the library. */
export interface Hdf5Layout {
  /** byte of the dataset's object header */
  readonly address: number;
  /** bytes of one value */
  readonly width: number;
  readonly isLittleEndian: boolean;
  /** HDF5 numbers of the filters, in the order they were applied when writing */
  readonly filters: readonly number[];
}

export interface Hdf5Contents {
  readonly handle: number;
  readonly variables: readonly Hdf5Variable[];
  readonly attributes: Readonly<Record<string, AttributeValue>>;
  /** names of linked files and the like, which are left aside */
  readonly leftOut: readonly string[];
}

export type Hdf5Request =
  | { readonly kind: 'open'; readonly path: string }
  | {
      readonly kind: 'read' | 'text';
      readonly handle: number;
      readonly path: string;
      readonly start: readonly number[];
      readonly count: readonly number[];
    }
  | { readonly kind: 'close'; readonly handle: number };

/** Answer to a request: `value` is Hdf5Contents, Float64Array, string[] or null by its kind. */
export type Hdf5Reply =
  | { readonly id: number; readonly value: Hdf5Contents | Float64Array | readonly string[] | null }
  | { readonly id: number; readonly failure: string };
