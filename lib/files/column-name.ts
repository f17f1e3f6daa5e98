/**
 * What a column header says: the words of its name, the unit written with it, and the hour of a reading.
 */

interface ColumnName {
  /** lower-case words, unit and hour taken off */
  readonly words: readonly string[];
  /** unit in brackets or after a comma, as written */
  readonly unitText: string | null;
  /** hour of day 0–23, from a header such as `Humidity3pm` */
  readonly hour: number | null;
}

const BRACKETED = /\s*[([{]\s*([^()[\]{}]*?)\s*[)\]}]\s*$/;
const AFTER_COMMA = /^(.+?),\s*([^,]{1,14})$/;
const TWELVE_HOUR = /[\s_]?(\d{1,2})\s*([ap])\.?m\.?(?=$|[\s_])/i;
const TWENTY_FOUR_HOUR = /[\s_](\d{2})(?::?00|h)(?=$|[\s_])/i;

/**
 * Takes a header apart. @example columnName('WindSpeed9am').words // ['wind', 'speed']
 */
export function columnName(header: string): ColumnName {
  let text = header.replace(/^\uFEFF/, '').trim();
  let unitText: string | null = null;
  const bracketed = BRACKETED.exec(text) ?? AFTER_COMMA.exec(text);
  if (bracketed && bracketed.index === 0 && bracketed.length === 3) {
    [, text, unitText] = bracketed;
  } else if (bracketed && bracketed.index > 0) {
    unitText = bracketed[1];
    text = text.slice(0, bracketed.index);
  }
  const { rest, hour } = takeHour(text);
  return { words: wordsOf(rest), unitText: unitText === '' ? null : unitText, hour };
}

function takeHour(text: string): { rest: string; hour: number | null } {
  const twelve = TWELVE_HOUR.exec(text);
  if (twelve && Number(twelve[1]) >= 1 && Number(twelve[1]) <= 12) {
    const hour = (Number(twelve[1]) % 12) + (twelve[2].toLowerCase() === 'p' ? 12 : 0);
    return { rest: text.replace(twelve[0], ' '), hour };
  }
  const full = TWENTY_FOUR_HOUR.exec(text);
  if (full && Number(full[1]) <= 23) return { rest: text.replace(full[0], ' '), hour: Number(full[1]) };
  return { rest: text, hour: null };
}

/** Lower-case words of a name; camelCase, blanks, underscores and punctuation divide. @example wordsOf('MinTemp') // ['min', 'temp'] */
export function wordsOf(text: string): string[] {
  return text
    .normalize('NFKD')
    .replace(/[\u0300-\u036f]/g, '')
    .replace(/([a-z])([A-Z])/g, '$1 $2')
    .toLowerCase()
    .split(/[^\p{L}\p{N}%]+/u)
    .filter((word) => word !== '');
}

/** Ways to read trailing words as a unit, longest first; the last way takes none. */
export function* unitSuffixes(words: readonly string[]): Generator<{ rest: readonly string[]; suffix: string | null }> {
  for (let count = Math.min(4, words.length - 1); count >= 1; count--) {
    yield { rest: words.slice(0, -count), suffix: words.slice(-count).join('') };
  }
  yield { rest: words, suffix: null };
}
