/**
 * The frame of a chart: plot area inside its margins, ticks with labels. Screen and print draw the same shapes.
 *
 * Coordinates are those of SVG: x right, y down, in the unit the caller draws in.
 */
import { type ScaleLinear, scaleLinear } from 'd3-scale';
import { civilFromDayNumber, type DayNumber } from '../base/civil-date.ts';
import type { UnitSystem } from '../base/units.ts';
import { decimalsFor, numberText } from './quantity-text.ts';

export interface Box {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

export interface Tick {
  /** along its axis */
  readonly at: number;
  readonly label: string;
}

const CHART_MARGIN = { top: 10, right: 12, bottom: 24, left: 52 } as const;

const MONTHS = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'] as const;

export function plotBox(
  width: number,
  height: number,
  margin: { top: number; right: number; bottom: number; left: number } = CHART_MARGIN,
): Box {
  return {
    x: margin.left,
    y: margin.top,
    width: Math.max(1, width - margin.left - margin.right),
    height: Math.max(1, height - margin.top - margin.bottom),
  };
}

/** Linear scale from 0 to a round number at or above `most`, over a pixel range. All-missing data give 0–1. */
export function amountScale(most: number, range: readonly [number, number]): ScaleLinear<number, number> {
  const top = Number.isFinite(most) && most > 0 ? most : 1;
  return scaleLinear()
    .domain([0, top])
    .nice(5)
    .range([...range]);
}

/** About `count` ticks of a linear scale, all with the same decimals. */
export function amountTicks(scale: ScaleLinear<number, number>, units: UnitSystem, count = 5): Tick[] {
  const values = scale.ticks(count);
  const step = values.length > 1 ? values[1] - values[0] : values[0];
  const decimals = decimalsFor(step, 1, 6);
  return values.map((value) => ({ at: scale(value), label: numberText(value, decimals, units) }));
}

/** A tick at the first of each month within the days, January with its year; thinned when months are closer than `apart`. */
export function monthTicks(first: DayNumber, dayCount: number, at: (offset: number) => number, apart = 26): Tick[] {
  const ticks: Tick[] = [];
  for (let offset = 0; offset < dayCount; offset++) {
    const { year, month, day } = civilFromDayNumber(first + offset);
    if (day !== 1) continue;
    const place = at(offset);
    const last = ticks.at(-1);
    if (last && place - last.at < apart) continue;
    ticks.push({ at: place, label: month === 1 ? `${MONTHS[0]} ${year}` : MONTHS[month - 1] });
  }
  return ticks;
}

/** Largest finite value, or 0. */
export function largestOf(...series: readonly ArrayLike<number>[]): number {
  let most = 0;
  for (const values of series) for (let i = 0; i < values.length; i++) if (values[i] > most && Number.isFinite(values[i])) most = values[i];
  return most;
}
