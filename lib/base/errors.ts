/**
 * The errors of the product: one class per reaction, not per site.
 *
 * Every message says what, the value, the limit and where. `code` is stable and travels to the caller as the problem type.
 */
export abstract class TillwaterError extends Error {
  abstract readonly code: string;
  /** HTTP status the border maps this class to. */
  abstract readonly status: number;
}

/** Arrays that must agree in length or shape do not. */
export class ShapeError extends TillwaterError {
  readonly code: string = 'shape';
  readonly status: number = 500;
}

/** A request that cannot be read: wrong type, missing member, unreadable value. */
export class Malformed extends TillwaterError {
  readonly code: string = 'malformed';
  readonly status: number = 400;
  constructor(
    message: string,
    readonly findings: readonly Finding[] = [],
    options?: ErrorOptions,
  ) {
    super(message, options);
  }
}

/** Nobody is signed in, or the token is unknown, withdrawn or expired. */
export class Unauthenticated extends TillwaterError {
  readonly code: string = 'unauthenticated';
  readonly status: number = 401;
}

/** Signed in, but the role or the token's scope does not reach this far. */
export class Forbidden extends TillwaterError {
  readonly code: string = 'forbidden';
  readonly status: number = 403;
}

/** Not there, or owned by another district: the two are not told apart. */
export class NotFound extends TillwaterError {
  readonly code: string = 'not-found';
  readonly status: number = 404;
}

/** The thing exists but its state does not allow this now. */
export class Conflict extends TillwaterError {
  readonly code: string = 'conflict';
  readonly status: number = 409;
}

/** More bytes, rows or days than the stated limit. */
export class TooLarge extends TillwaterError {
  readonly code: string = 'too-large';
  readonly status: number = 413;
}

/** A kind of file that no reader here understands. */
export class UnknownKind extends TillwaterError {
  readonly code: string = 'unknown-kind';
  readonly status: number = 415;
}

/** Understood, but refused; `findings` names the rows at fault. */
export class Refused extends TillwaterError {
  readonly code: string = 'refused';
  readonly status: number = 422;
  constructor(
    message: string,
    readonly findings: readonly Finding[] = [],
    options?: ErrorOptions,
  ) {
    super(message, options);
  }
}

/** A number outside its physical or stated limits. */
export class RangeViolation extends Refused {
  override readonly code: string = 'range';
}

/** The conveyance tree is not a tree: a cycle, an orphan, or two heads. */
export class TreeError extends Refused {
  override readonly code: string = 'tree';
  constructor(
    message: string,
    readonly nodes: readonly string[],
  ) {
    super(message);
  }
}

/** Too many requests; try again after `retryAfterSeconds`. */
export class TooMany extends TillwaterError {
  readonly code: string = 'too-many';
  readonly status: number = 429;
  constructor(
    message: string,
    readonly retryAfterSeconds: number,
  ) {
    super(message);
  }
}

/**
 * One thing found in bulk input. Bulk readers return findings and never throw for a row.
 *
 * `row` counts from 1 at the first line of the file (headers included), or is the feature's ordinal from 1 in a vector file.
 */
export interface Finding {
  readonly severity: 'error' | 'warning' | 'note';
  /** stable kebab-case name of the rule, e.g. `value-out-of-range` */
  readonly code: string;
  /** one sentence for the reader: what is wrong */
  readonly message: string;
  readonly file?: string;
  readonly row?: number;
  readonly column?: string;
  readonly value?: string;
  /** the limit that was crossed, with its unit */
  readonly limit?: string;
  /** what to do about it */
  readonly advice?: string;
}
