/**
 * Site codes of a weather file → sites the district knows, by code, by name, or by number when a spreadsheet cut leading zeros.
 */
import type { ImportContext } from './reading.ts';

interface UnknownSite {
  rows: number;
  readonly firstRow: number;
  readonly file: string;
}

const UNKNOWN_LIMIT = 10_000;

export function siteFinder(knownSites: ImportContext['knownSites']) {
  const codes = knownSites.map((site) => site.code);
  const exact = new Map(codes.map((code, index) => [code, index]));
  const loose = looseIndex(knownSites);
  const cache = new Map<string, number>();
  const unknown = new Map<string, UnknownSite>();
  /** site code → text of the file that was taken for it */
  const joined = new Map<string, string>();

  /** Index of the site, or −1; unknown ones are counted. */
  function find(cell: string, row: number, file: string): number {
    let site = cache.get(cell);
    if (site === undefined) {
      site = resolve(cell.trim());
      if (site >= 0 || cache.size < UNKNOWN_LIMIT) cache.set(cell, site);
    }
    if (site < 0) countUnknown(cell.trim(), row, file);
    return site;
  }

  function resolve(text: string): number {
    const found = exact.get(text);
    if (found !== undefined) return found;
    const close = loose.get(text.toLowerCase()) ?? loose.get(withoutZeros(text));
    if (close === undefined || close < 0) return -1;
    joined.set(codes[close], text);
    return close;
  }

  function countUnknown(text: string, row: number, file: string): void {
    const entry = unknown.get(text);
    if (entry) entry.rows++;
    else if (unknown.size < UNKNOWN_LIMIT) unknown.set(text, { rows: 1, firstRow: row, file });
  }

  /** Index of a site that the import itself brings; the same again for the same code. */
  function add(code: string): number {
    const known = codes.indexOf(code);
    return known >= 0 ? known : codes.push(code) - 1;
  }

  return { find, seek: (text: string) => resolve(text.trim()), add, codes: () => codes, unknown, joined };
}

/** Lower-case codes and names, and codes without leading zeros; −1 where two sites share one. */
function looseIndex(knownSites: ImportContext['knownSites']): Map<string, number> {
  const index = new Map<string, number>();
  const put = (key: string, site: number) => index.set(key, index.has(key) && index.get(key) !== site ? -1 : site);
  for (const [site, { code, name }] of knownSites.entries()) {
    put(code.toLowerCase(), site);
    if (name) put(name.toLowerCase(), site);
    if (/^\d+$/.test(code)) put(withoutZeros(code), site);
  }
  return index;
}

function withoutZeros(text: string): string {
  return /^\d+$/.test(text) ? `#${text.replace(/^0+(?=\d)/, '')}` : text;
}
