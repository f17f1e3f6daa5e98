/**
 * A parcel's season day by day: rain, irrigation and crop ET above; soil water between its limits below. Ready to draw.
 */
import { line } from 'd3-shape';
import { dayNumber } from '../base/civil-date.ts';
import { ShapeError } from '../base/errors.ts';
import type { UnitSystem } from '../base/units.ts';
import { amountScale, amountTicks, type Box, CHART_MARGIN, largestOf, monthTicks, plotBox, type Tick } from './chart-frame.ts';
import { inUnits, unitLabel } from './quantity-text.ts';

export interface DailyChartRequest {
  readonly startDate: string;
  /** all [day], mm; NaN leaves a gap */
  readonly rain: ArrayLike<number>;
  readonly irrigation: ArrayLike<number>;
  readonly cropEt: ArrayLike<number>;
  readonly depletion: ArrayLike<number>;
  readonly readilyAvailable: ArrayLike<number>;
  readonly totalAvailable: ArrayLike<number>;
  readonly width: number;
  readonly height: number;
  readonly units: UnitSystem;
}

export interface ChartPanel {
  readonly plot: Box;
  readonly yTicks: readonly Tick[];
  readonly yTitle: string;
}

export interface DailyChart {
  readonly width: number;
  readonly height: number;
  readonly xTicks: readonly Tick[];
  readonly water: ChartPanel & {
    /** bars of one day each, rain stands beside irrigation */
    readonly rain: readonly Box[];
    readonly irrigation: readonly Box[];
    /** SVG path */
    readonly cropEt: string;
  };
  /** depletion grows downward: the top is field capacity, the lowest line is wilting point */
  readonly soil: ChartPanel & { readonly depletion: string; readonly readilyAvailable: string; readonly totalAvailable: string };
}

/** Share of the height given to the upper panel. */
const UPPER = 0.52;
const PANEL_GAP = 16;

/**
 * Geometry of the chart; paths break at missing days.
 *
 * @throws {ShapeError} when the series differ in length.
 */
export function dailyChart(request: DailyChartRequest): DailyChart {
  const dayCount = checkLengths(request);
  const { width, height, units } = request;
  const whole = plotBox(width, height);
  const upper: Box = { ...whole, height: (whole.height - PANEL_GAP) * UPPER };
  const lower: Box = { ...whole, y: upper.y + upper.height + PANEL_GAP, height: (whole.height - PANEL_GAP) * (1 - UPPER) };
  const at = (day: number) => whole.x + (day / Math.max(1, dayCount)) * whole.width;
  const xTicks = monthTicks(dayNumber(request.startDate), dayCount, at);
  return { width, height, xTicks, water: waterPanel(request, upper, at, units), soil: soilPanel(request, lower, at, units) };
}

function waterPanel(
  { rain, irrigation, cropEt }: DailyChartRequest,
  plot: Box,
  at: (day: number) => number,
  units: UnitSystem,
): DailyChart['water'] {
  const shown = (value: number) => inUnits(value, 'mm', units);
  const scale = amountScale(shown(largestOf(rain, irrigation, cropEt)), [plot.y + plot.height, plot.y]);
  const level = (value: number) => scale(shown(value));
  const bars = (values: ArrayLike<number>, shift: number) => dayBars(values, { at, level, base: plot.y + plot.height, shift });
  return {
    plot,
    yTicks: amountTicks(scale, units),
    yTitle: `Water, ${unitLabel('mm', units)} per day`,
    rain: bars(rain, 0),
    irrigation: bars(irrigation, 0.5),
    cropEt: pathOf(cropEt, at, level),
  };
}

function soilPanel(request: DailyChartRequest, plot: Box, at: (day: number) => number, units: UnitSystem): DailyChart['soil'] {
  const shown = (value: number) => inUnits(value, 'mm', units);
  const scale = amountScale(shown(largestOf(request.depletion, request.totalAvailable)), [plot.y, plot.y + plot.height]);
  const path = (values: ArrayLike<number>) => pathOf(values, at, (value) => scale(shown(value)));
  return {
    plot,
    yTicks: amountTicks(scale, units, 4),
    yTitle: `Depletion, ${unitLabel('mm', units)}`,
    depletion: path(request.depletion),
    readilyAvailable: path(request.readilyAvailable),
    totalAvailable: path(request.totalAvailable),
  };
}

interface BarRule {
  readonly at: (day: number) => number;
  readonly level: (value: number) => number;
  readonly base: number;
  /** 0 left half of the day, 0.5 right half */
  readonly shift: number;
}

function dayBars(values: ArrayLike<number>, { at, level, base, shift }: BarRule): Box[] {
  const bars: Box[] = [];
  for (let day = 0; day < values.length; day++) {
    if (!(values[day] > 0)) continue;
    const y = level(values[day]);
    bars.push({ x: at(day + shift), y, width: Math.max(0.6, at(day + shift + 0.5) - at(day + shift)), height: base - y });
  }
  return bars;
}

/** SVG path through the middle of each day. */
function pathOf(values: ArrayLike<number>, at: (day: number) => number, level: (value: number) => number): string {
  const draw = line<number>()
    .defined((value) => Number.isFinite(value))
    .x((_, day) => at(day + 0.5))
    .y(level)
    .digits(2);
  return draw(Array.from(values)) ?? '';
}

function checkLengths({ rain, irrigation, cropEt, depletion, readilyAvailable, totalAvailable }: DailyChartRequest): number {
  const lengths = { rain, irrigation, cropEt, depletion, readilyAvailable, totalAvailable };
  const wrong = Object.entries(lengths).find(([, values]) => values.length !== rain.length);
  if (wrong) throw new ShapeError(`daily chart: ${wrong[0]} has ${wrong[1].length} days, rain has ${rain.length}`);
  return rain.length;
}

/** Height the axis labels need under the plot, for callers that add a legend below. */
export const DAILY_CHART_FOOT = CHART_MARGIN.bottom;
