/** What a page's address asks for, and addresses made from it. */
export type Query = Readonly<Record<string, string | string[] | undefined>>;

/** The first value of a key, trimmed; undefined when absent or blank. */
export function one(query: Query, key: string): string | undefined {
  const value = query[key];
  const text = (Array.isArray(value) ? value[0] : value)?.trim();
  return text ? text : undefined;
}

/** @example oneOf({ period: 'week' }, 'period', ['week', 'season'], 'season') // 'week' */
export function oneOf<Choice extends string>(query: Query, key: string, choices: readonly Choice[], otherwise: Choice): Choice {
  return choices.find((choice) => choice === one(query, key)) ?? otherwise;
}

/** An address with the present query and some changes; null takes a key away. */
export function hrefWith(path: string, query: Query, changes: Readonly<Record<string, string | null>> = {}): string {
  const search = new URLSearchParams();
  for (const key of Object.keys(query)) {
    const value = one(query, key);
    if (value !== undefined && !(key in changes)) search.set(key, value);
  }
  for (const [key, value] of Object.entries(changes)) if (value !== null) search.set(key, value);
  const text = search.toString();
  return text ? `${path}?${text}` : path;
}
