/**
 * Legend of a choropleth: one entry per class with its colour, its print pattern and the area it covers.
 */
import type { UnitSystem } from '../base/units.ts';
import type { Classes } from './classes.ts';
import { classColours, MISSING_COLOUR, patternOf, type ScaleKind, type Theme } from './colour-scale.ts';
import { decimalsFor, formatArea, inUnits, numberText, type Quantity, unitLabel } from './quantity-text.ts';

export interface LegendEntry {
  /** `120–180`, one number when the class holds a single value, `< 120` and `≥ 180` at the ends of own breaks */
  readonly label: string;
  /** in the unit of the values, NaN for the entry without value */
  readonly from: number;
  readonly to: number;
  readonly colour: string;
  /** index into PRINT_PATTERNS, −1 for the entry without value */
  readonly pattern: number;
  readonly count: number;
  /** m² */
  readonly area: number;
  readonly areaLabel: string;
  /** of the area of all entries, 0–1 */
  readonly areaShare: number;
}

export interface Legend {
  readonly title: string;
  readonly unit: string;
  readonly entries: readonly LegendEntry[];
  /** null when every parcel has a value */
  readonly missing: LegendEntry | null;
}

interface LegendRequest {
  readonly title: string;
  /** quantity of the classed values, or null for a plain number */
  readonly quantity: Quantity | null;
  readonly classes: Classes;
  readonly units: UnitSystem;
  readonly scale: ScaleKind;
  readonly theme: Theme;
}

/** Legend of classes; labels are in the reader's units, rounded just enough that the breaks stay apart. */
export function legendOf({ title, quantity, classes, units, scale, theme }: LegendRequest): Legend {
  const { breaks, counts, areas, missingCount, missingArea, method } = classes;
  const total = areas.reduce((sum, area) => sum + area, missingArea);
  const colours = counts.length === 0 ? [] : classColours(counts.length, scale, theme);
  const shown = breaks.map((edge) => (quantity ? inUnits(edge, quantity, units) : edge));
  const decimals = decimalsApart(shown);
  const area = (size: number) => ({ area: size, areaLabel: formatArea(size, units), areaShare: total > 0 ? size / total : 0 });
  const entries = counts.map((count, i) => {
    const [low, high] = [numberText(shown[i], decimals, units), numberText(shown[i + 1], decimals, units)];
    const label = method === 'own' ? ownLabel(low, high, i, counts.length) : low === high ? low : `${low}–${high}`;
    return {
      label,
      from: breaks[i],
      to: breaks[i + 1],
      colour: colours[i],
      pattern: patternOf(i, counts.length),
      count,
      ...area(areas[i]),
    };
  });
  const nothing = { label: 'no value', from: Number.NaN, to: Number.NaN, colour: MISSING_COLOUR[theme], pattern: -1 };
  const missing = missingCount > 0 ? { ...nothing, count: missingCount, ...area(missingArea) } : null;
  return { title, unit: quantity ? unitLabel(quantity, units) : '', entries, missing };
}

/** The outer classes of own breaks are open. */
function ownLabel(low: string, high: string, at: number, count: number): string {
  if (at === 0) return `< ${high}`;
  return at === count - 1 ? `≥ ${low}` : `${low}–${high}`;
}

/** Fewest decimals, at most four, at which no two different breaks look the same. */
function decimalsApart(breaks: readonly number[]): number {
  const gaps = breaks.slice(1).map((edge, i) => edge - breaks[i]);
  const least = Math.min(...gaps.filter((gap) => gap > 0));
  if (Number.isFinite(least)) return decimalsFor(least * (1 + 1e-9), 1, 4);
  return breaks.length > 0 ? decimalsFor(breaks[0], 3, 2) : 0;
}
