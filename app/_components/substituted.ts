/** An equation with the numbers put in. */
import { significant } from './figures.ts';

interface Given {
  readonly symbol: string;
  readonly value: number | null;
}

const PART_OF_A_NAME = /[\p{L}\p{N}\p{M}₀-₉′'_,]/u;

/**
 * The right-hand side of an equation with each symbol replaced by its number, or null when a given symbol does not stand in it, so that
 * nothing is shown that a reader could not check.
 *
 * A symbol is replaced only where it stands alone: not inside a longer name, nor before a subscript.
 * @example substituted('γ = 0.000665 P', [{ symbol: 'P', value: 101.3 }]) // '0.000665 · 101.3'
 */
export function substituted(expression: string, given: readonly Given[]): string | null {
  const equals = expression.indexOf('=');
  let text = equals >= 0 ? expression.slice(equals + 1).trim() : expression;
  const bySize = [...given].sort((a, b) => b.symbol.length - a.symbol.length);
  const numbers: string[] = [];
  for (const { symbol, value } of bySize) {
    const replaced = replaceAlone(text, symbol.replace(', ', ','), String.fromCodePoint(0xe000 + numbers.length));
    if (replaced === text) return null;
    text = replaced;
    numbers.push(written(value));
  }
  return withProducts(text).replace(/[\uE000-\uF8FF]/gu, (mark) => numbers[(mark.codePointAt(0) as number) - 0xe000]);
}

function written(value: number | null): string {
  const text = significant(value);
  return text.startsWith('−') || text.includes('×') ? `(${text})` : text;
}

function replaceAlone(text: string, symbol: string, mark: string): string {
  let out = '';
  let from = 0;
  for (let at = text.indexOf(symbol); at >= 0; at = text.indexOf(symbol, from)) {
    const end = at + symbol.length;
    const alone = !PART_OF_A_NAME.test(text[at - 1] ?? ' ') && !standsInName(text, end);
    out += text.slice(from, at) + (alone ? mark : symbol);
    from = end;
  }
  return out + text.slice(from);
}

/** A comma ends a symbol in a list of arguments (`max(a, b)`) but not in a subscript (`Tmax,K`). */
function standsInName(text: string, at: number): boolean {
  const next = text[at] ?? ' ';
  if (next === ',') return /\S/.test(text[at + 1] ?? ' ');
  return PART_OF_A_NAME.test(next);
}

/** Juxtaposed factors become products with a sign, since two numbers side by side cannot be read. */
function withProducts(text: string): string {
  return text
    .replace(/([\p{N}\uE000-\uF8FFπ)\]]) +(?=[\p{N}([\uE000-\uF8FF√]|exp\b|ln\b|sin\b|cos\b|tan\b|max\(|min\()/gu, '$1 · ')
    .replace(/([\p{N}\uE000-\uF8FF)\]])(?=[([\uE000-\uF8FF])/gu, '$1 · ');
}
