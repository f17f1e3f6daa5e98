/**
 * Bars of a district's demand, one per period, ready to draw.
 */
import { dayNumber } from '../base/civil-date.ts';
import type { UnitSystem } from '../base/units.ts';
import { amountScale, amountTicks, type Box, largestOf, monthTicks, plotBox, type Tick } from './chart-frame.ts';
import { formatVolume, inUnits } from './quantity-text.ts';

export interface WeekVolume {
  readonly start: string;
  readonly end: string;
  /** m³, NaN when not computed */
  readonly volume: number;
  /** ends of an uncertainty band [m³] */
  readonly low?: number;
  readonly high?: number;
  /** set apart when any of its days lies past the last observation */
  readonly forecast?: boolean;
}

interface Bar extends Box {
  readonly start: string;
  readonly end: string;
  readonly forecast: boolean;
  /** for a screen reader and a tool tip: dates and volume in the reader's units */
  readonly label: string;
  /** uncertainty band as a vertical line, or null */
  readonly band: { readonly x: number; readonly top: number; readonly bottom: number } | null;
}

export interface BarChart {
  readonly width: number;
  readonly height: number;
  readonly plot: Box;
  readonly bars: readonly Bar[];
  readonly xTicks: readonly Tick[];
  readonly yTicks: readonly Tick[];
  readonly yTitle: string;
  /** one sentence that says what the chart shows */
  readonly description: string;
}

interface WeeklyBarsRequest {
  readonly weeks: readonly WeekVolume[];
  readonly width: number;
  readonly height: number;
  readonly units: UnitSystem;
  /** share of a period left blank between bars, default 0.18 */
  readonly gap?: number;
}

/**
 * Geometry of the bar chart. Widths follow the length of each period, so a short first week is a narrow bar; a missing volume has height 0.
 */
export function weeklyBars({ weeks, width, height, units, gap = 0.18 }: WeeklyBarsRequest): BarChart {
  const plot = plotBox(width, height);
  const first = weeks.length > 0 ? dayNumber(weeks[0].start) : 0;
  const dayCount = weeks.length > 0 ? dayNumber(weeks[weeks.length - 1].end) - first + 1 : 1;
  const at = (offset: number) => plot.x + (offset / dayCount) * plot.width;
  const shown = volumeUnit(weeks, units);
  const scale = amountScale(largestOf(weeks.map((week) => shown.of(week.high ?? week.volume))), [plot.y + plot.height, plot.y]);
  const bars = weeks.map((week) => barOf(week, { first, at, gap, units, level: (volume) => scale(shown.of(volume)) }));
  const description = sentenceOn(weeks, units);
  return {
    width,
    height,
    plot,
    bars,
    xTicks: monthTicks(first, dayCount, at),
    yTicks: amountTicks(scale, units),
    yTitle: shown.title,
    description,
  };
}

/** One unit for the whole axis, by the largest volume. */
function volumeUnit(weeks: readonly WeekVolume[], units: UnitSystem): { of: (volume: number) => number; title: string } {
  if (units === 'us') return { of: (volume) => inUnits(volume, 'm3', 'us'), title: 'Volume, ac-ft' };
  const most = largestOf(weeks.map((week) => week.high ?? week.volume));
  if (most >= 10_000_000) return { of: (volume) => volume / 1e6, title: 'Volume, million m³' };
  return most >= 10_000 ? { of: (volume) => volume / 1e3, title: 'Volume, thousand m³' } : { of: (volume) => volume, title: 'Volume, m³' };
}

interface BarPlace {
  readonly first: number;
  readonly at: (offset: number) => number;
  readonly gap: number;
  readonly units: UnitSystem;
  readonly level: (volume: number) => number;
}

function barOf(week: WeekVolume, { first, at, gap, units, level }: BarPlace): Bar {
  const [left, right] = [at(dayNumber(week.start) - first), at(dayNumber(week.end) - first + 1)];
  const inset = ((right - left) * gap) / 2;
  const base = level(0);
  const top = Number.isFinite(week.volume) ? level(week.volume) : base;
  const banded = week.low !== undefined && week.high !== undefined && Number.isFinite(week.low + week.high);
  return {
    x: left + inset,
    y: top,
    width: right - left - 2 * inset,
    height: base - top,
    start: week.start,
    end: week.end,
    forecast: week.forecast ?? false,
    label: `${week.start} to ${week.end}: ${formatVolume(week.volume, units)}${week.forecast ? ', from forecast or normal weather' : ''}`,
    band: banded ? { x: (left + right) / 2, top: level(week.high as number), bottom: level(week.low as number) } : null,
  };
}

function sentenceOn(weeks: readonly WeekVolume[], units: UnitSystem): string {
  const known = weeks.filter((week) => Number.isFinite(week.volume));
  if (known.length === 0) return 'No volume has been computed.';
  const most = known.reduce((best, week) => (week.volume > best.volume ? week : best));
  const total = known.reduce((sum, week) => sum + week.volume, 0);
  return `${known.length} periods, ${formatVolume(total, units)} in all; most in the period from ${most.start}: ${formatVolume(most.volume, units)}.`;
}
