/**
 * Colours of classes, and the print pattern that goes with each, so that no class is colour alone.
 *
 * Source: Harrower & Brewer (2003), ColorBrewer.org, The Cartographic Journal 40, 27–37; schemes YlGnBu, BrBG, YlOrBr, marked safe for colour blindness there.
 */
import { schemeBrBG, schemeYlGnBu } from 'd3-scale-chromatic';
import { RangeViolation } from '../base/errors.ts';
import { MOST_CLASSES } from './classes.ts';

export type Theme = 'light' | 'dark';
/** `amount`: more is darker on paper, lighter on a dark screen. `balance`: two hues about a middle, dry brown to wet teal. */
export type ScaleKind = 'amount' | 'balance';

/** Colour of what has no value, and of lines around parcels. */
export const MISSING_COLOUR: Record<Theme, string> = { light: '#d9d6cf', dark: '#3a3d42' };

/**
 * One colour per class, low to high, hexadecimal.
 *
 * The end of the sequential scheme nearest to the background is left out while there are enough steps.
 *
 * @throws {RangeViolation} for a count outside 1–9.
 * @example classColours(1, 'amount', 'light').length // 1
 */
export function classColours(count: number, kind: ScaleKind, theme: Theme): string[] {
  if (!(Number.isInteger(count) && count >= 1 && count <= MOST_CLASSES))
    throw new RangeViolation(`${count} colours asked for: give a whole number from 1 to ${MOST_CLASSES}`);
  if (kind === 'balance') return spread(schemeBrBG[Math.max(3, count)], count);
  const steps = schemeYlGnBu[Math.min(9, Math.max(3, count + 1))];
  const towards = theme === 'light' ? [...steps] : steps.toReversed();
  return towards.length > count ? towards.slice(towards.length - count) : towards;
}

/** `count` colours spread over a scheme, ends first. */
function spread(scheme: readonly string[], count: number): string[] {
  if (scheme.length === count) return [...scheme];
  if (count === 1) return [scheme[0]];
  return Array.from({ length: count }, (_, i) => scheme[Math.round((i * (scheme.length - 1)) / (count - 1))]);
}

/** Colours of a reach by its share of capacity; the words stand beside them wherever they are used. */
export const CAPACITY_COLOURS: Record<Theme, Record<'within' | 'tight' | 'over' | 'unknown', string>> = {
  light: { within: '#225ea8', tight: '#ec7014', over: '#993404', unknown: '#6b6f76' },
  dark: { within: '#7fcdbb', tight: '#fec44f', over: '#fe6f3d', unknown: '#9aa0a8' },
};

/** Hatchings from lightest to heaviest: lines per class at an angle [degrees], spaced [points]; null is blank. */
export const PRINT_PATTERNS: readonly (readonly { readonly angle: number; readonly spacing: number }[])[] = [
  [],
  [{ angle: 45, spacing: 9 }],
  [{ angle: 45, spacing: 6 }],
  [{ angle: 45, spacing: 4 }],
  [
    { angle: 45, spacing: 7 },
    { angle: 135, spacing: 7 },
  ],
  [
    { angle: 45, spacing: 5 },
    { angle: 135, spacing: 5 },
  ],
  [
    { angle: 45, spacing: 3.5 },
    { angle: 135, spacing: 3.5 },
  ],
  [
    { angle: 0, spacing: 3 },
    { angle: 90, spacing: 3 },
  ],
  [
    { angle: 0, spacing: 2 },
    { angle: 90, spacing: 2 },
  ],
];

/** Index into PRINT_PATTERNS for a class of so many, heavier with the class. @example patternOf(0, 5) // 0 */
export function patternOf(index: number, count: number): number {
  return count <= 1 ? 0 : Math.round((index * (Math.min(count, PRINT_PATTERNS.length) - 1)) / (count - 1));
}
