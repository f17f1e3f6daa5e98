/**
 * A file of labelled arrays, whatever its format: the contract between the format readers (NetCDF-3, NetCDF-4, Zarr, GeoTIFF) and the
 * reader of gridded weather, which knows what the arrays mean. A format reader gives raw stored numbers and attributes; packing, missing
 * codes, units and axes are the meaning's business.
 */
import type { FileFormat } from './reading.ts';

/** Attribute as stored: text, or numbers. */
export type AttributeValue = string | readonly number[] | readonly string[];

export interface ArrayVariable {
  /** name within the file, with groups as a path: "met/tas" */
  readonly name: string;
  readonly dimensions: readonly string[];
  readonly shape: readonly number[];
  /** stored number type, or text, or what cannot be read */
  readonly type: 'int8' | 'uint8' | 'int16' | 'uint16' | 'int32' | 'uint32' | 'int64' | 'uint64' | 'float32' | 'float64' | 'text' | 'other';
  /** stored block of the array, where it is stored in blocks: reads aligned to it are cheapest */
  readonly chunk: readonly number[] | null;
  readonly attributes: Readonly<Record<string, AttributeValue>>;
}

export interface ArrayFile {
  readonly format: FileFormat;
  readonly variables: readonly ArrayVariable[];
  readonly attributes: Readonly<Record<string, AttributeValue>>;
  /**
   * Raw stored numbers of a hyperslab, row-major, as doubles (64-bit integers included; they lose what lies beyond 2⁵³).
   * Blocks that a format leaves out are its fill value.
   *
   * @param start first index along each dimension
   * @param count length along each dimension
   * @throws {Refused} naming the variable when the stored bytes are damaged; {RangeViolation} outside the shape
   */
  read(variable: string, start: readonly number[], count: readonly number[]): Promise<Float64Array>;
  /** Texts of a hyperslab of a text variable (char arrays joined along their last dimension). */
  readText(variable: string, start: readonly number[], count: readonly number[]): Promise<string[]>;
  /**
   * The one value that all of a hyperslab has because nothing of it is stored, told without reading; null when something is stored.
   * Left out by formats that cannot tell.
   */
  filledWith?(variable: string, start: readonly number[], count: readonly number[]): Promise<number | null>;
  close(): Promise<void>;
}
