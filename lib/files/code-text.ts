/**
 * What a code may be. A code stands in addresses and file names, so that it must be short and must not read as a folder.
 */
import { shown } from './finding-list.ts';

/** Most characters of a code. */
export const CODE_LENGTH = 100;

interface CodeFault {
  readonly code: string;
  readonly message: string;
  readonly limit: string;
  readonly advice: string;
}

/**
 * Why a code cannot be used, or null when it can.
 *
 * @param thing what bears the code, with a capital
 * @example codeFault('Parcel', '..')?.code // 'bad-code'
 */
export function codeFault(thing: string, code: string): CodeFault | null {
  const length = [...code].length;
  if (length > CODE_LENGTH) {
    return {
      code: 'code-too-long',
      message: `${thing} code "${shown(code)}" has ${length} characters.`,
      limit: `at most ${CODE_LENGTH} characters`,
      advice: 'Give it a shorter code.',
    };
  }
  if (code !== '.' && code !== '..') return null;
  return {
    code: 'bad-code',
    message: `${thing} code "${code}" cannot be used: it cannot stand in an address.`,
    limit: `any text of at most ${CODE_LENGTH} characters but "." and ".."`,
    advice: 'Give it another code.',
  };
}
