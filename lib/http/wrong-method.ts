import { TillwaterError } from '../base/errors.ts';

/** The address is there, but takes other methods. */
export class WrongMethod extends TillwaterError {
  readonly code: string = 'wrong-method';
  readonly status: number = 405;
  constructor(
    message: string,
    readonly allow: readonly string[],
  ) {
    super(message);
  }
}
