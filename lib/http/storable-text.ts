/** Text that the database can hold: no NUL, and no half of a surrogate pair. */
import { Malformed } from '../base/errors.ts';

/** @example isStorable('a\u0000') // false */
export function isStorable(text: unknown): boolean {
  return typeof text !== 'string' || !(text.includes('\0') || /\p{Surrogate}/u.test(text));
}

/** @throws {Malformed} naming the first member, or name of a member, that cannot be held. */
export function requireStorable(given: unknown, where: string): void {
  const path = unstorableIn(given);
  if (path === null) return;
  const column = path.join('.');
  const message = 'holds a NUL character or half of a surrogate pair, which no text here may';
  throw new Malformed(`the ${where} cannot be read: ${column ? `${column} ` : ''}${message}`, [
    { severity: 'error', code: 'unreadable-text', message, ...(column ? { column } : {}) },
  ]);
}

/** Path of the first text at fault; a name at fault is given by where it stands. */
function unstorableIn(given: unknown): string[] | null {
  if (!isStorable(given)) return [];
  if (typeof given !== 'object' || given === null) return null;
  for (const [name, value] of Object.entries(given)) {
    if (!isStorable(name)) return [];
    const inner = unstorableIn(value);
    if (inner) return [name, ...inner];
  }
  return null;
}
