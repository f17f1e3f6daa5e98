import { type ScaleLinear, scaleLinear } from 'd3-scale';
import { line } from 'd3-shape';
import type { CSSProperties, ReactNode } from 'react';
import styles from './chart-frame.module.css';
import { plain } from './figures.ts';

export interface LegendItem {
  readonly label: string;
  /** class of chart-frame.module.css that draws the mark */
  readonly mark: MarkName;
}

export type MarkName =
  | 'rain'
  | 'irrigation'
  | 'cropEt'
  | 'adjusted'
  | 'depletion'
  | 'raw'
  | 'taw'
  | 'limit'
  | 'first'
  | 'second'
  | 'third'
  | 'fourth'
  | 'band'
  | 'forecast'
  | 'beyond'
  | 'quiet';

/** Marks drawn as a filled patch in the legend; the others are lines. */
const PATCHES: ReadonlySet<MarkName> = new Set(['rain', 'irrigation', 'depletion', 'band', 'forecast', 'beyond']);

export function markClass(mark: MarkName): string {
  return styles[mark];
}

interface ChartFrameProps {
  readonly title: string;
  /** what the chart says, for a reader who cannot see it */
  readonly description: string;
  readonly width: number;
  readonly height: number;
  /** id that is unique on the page: names the title, description and patterns */
  readonly id: string;
  readonly legend?: readonly LegendItem[];
  /** narrowest the drawing may become before it scrolls [px]; 820 unless told */
  readonly narrowest?: number;
  readonly children: ReactNode;
  readonly below?: ReactNode;
}

/** A chart as a figure: caption, drawing that scrolls sideways when the screen is narrow, legend, and the figures below. */
export function ChartFrame(props: ChartFrameProps) {
  const { id, width, height } = props;
  return (
    <figure className={styles.figure}>
      <figcaption className={styles.caption}>{props.title}</figcaption>
      {props.legend ? <Legend items={props.legend} /> : null}
      {/* biome-ignore lint/a11y/noNoninteractiveTabindex: a region that scrolls must be reachable from the keyboard */}
      <section className={styles.scroll} tabIndex={0} aria-label={props.title}>
        <svg
          className={styles.svg}
          viewBox={`0 0 ${width} ${height}`}
          style={{ '--narrowest': `${Math.min(width, props.narrowest ?? 820)}px` } as CSSProperties}
          role="img"
          aria-labelledby={`${id}-title ${id}-desc`}
        >
          <title id={`${id}-title`}>{props.title}</title>
          <desc id={`${id}-desc`}>{props.description}</desc>
          <Patterns />
          {props.children}
        </svg>
      </section>
      {props.below}
    </figure>
  );
}

/** Fills that tell marks apart without colour. Equal definitions under one id do no harm when a page has several charts. */
function Patterns() {
  return (
    <defs>
      <pattern id="mark-slant" width="4" height="4" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
        <rect width="4" height="4" className={styles.rainBack} />
        <line x1="0" y1="0" x2="0" y2="4" className={styles.rainStroke} />
      </pattern>
      <pattern id="mark-dots" width="5" height="5" patternUnits="userSpaceOnUse">
        <circle cx="1.5" cy="1.5" r="0.9" className={styles.dot} />
      </pattern>
      <pattern id="mark-forecast" width="9" height="9" patternUnits="userSpaceOnUse" patternTransform="rotate(-45)">
        <line x1="0" y1="0" x2="0" y2="9" className={styles.hatchStroke} />
      </pattern>
      <pattern id="mark-beyond" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(-45)">
        <path d="M0 0V6M0 0H6" className={styles.hatchStroke} />
      </pattern>
    </defs>
  );
}

function Legend({ items }: { items: readonly LegendItem[] }) {
  return (
    <ul className={styles.legend}>
      {items.map((item) => (
        <li key={item.label}>
          <svg width="26" height="12" aria-hidden="true">
            {PATCHES.has(item.mark) ? (
              <rect x="1" y="1" width="24" height="10" className={styles[item.mark]} />
            ) : (
              <line x1="0" y1="6" x2="26" y2="6" className={styles[item.mark]} />
            )}
          </svg>
          {item.label}
        </li>
      ))}
    </ul>
  );
}

export interface Box {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

/** Value axis at the left of a box, with light rules across it. */
export function ValueAxis({
  scale,
  box,
  label,
  ticks = 5,
}: {
  scale: ScaleLinear<number, number>;
  box: Box;
  label: string;
  ticks?: number;
}) {
  const values = scale.ticks(ticks);
  const decimals = decimalsOf(values);
  return (
    <g>
      <text className={styles.axisLabel} x={0} y={box.top - 16}>
        {label}
      </text>
      {values.map((value) => (
        <g key={value} transform={`translate(0 ${scale(value)})`}>
          <line className={value === 0 ? styles.zero : styles.rule} x1={box.left} x2={box.right} />
          <text className={styles.tick} x={box.left - 6} dy="0.32em" textAnchor="end">
            {plain(value, decimals)}
          </text>
        </g>
      ))}
    </g>
  );
}

/** Horizontal axis below a box: offsets along the scale with their names. */
export function NamedAxis({
  scale,
  box,
  ticks,
  label,
}: {
  scale: (value: number) => number;
  box: Box;
  ticks: readonly { offset: number; name: string }[];
  label?: string;
}) {
  return (
    <g>
      <line className={styles.zero} x1={box.left} x2={box.right} y1={box.bottom} y2={box.bottom} />
      {ticks.map((tick) => (
        <g key={tick.offset} transform={`translate(${scale(tick.offset)} ${box.bottom})`}>
          <line className={styles.zero} y2={5} />
          <text className={styles.tick} y={18} textAnchor="start">
            {tick.name}
          </text>
        </g>
      ))}
      {label ? (
        <text className={styles.axisLabel} x={box.right} y={box.bottom + 32} textAnchor="end">
          {label}
        </text>
      ) : null}
    </g>
  );
}

function decimalsOf(values: readonly number[]): number {
  const step = values.length > 1 ? Math.abs(values[1] - values[0]) : 1;
  return step >= 1 ? 0 : Math.ceil(-Math.log10(step) - 1e-9);
}

/** A scale from zero (or the least value, when `fromData`) to the greatest of several series, ends rounded. */
export function valueScale(series: readonly (readonly number[])[], box: Box, fromData = false): ScaleLinear<number, number> {
  const values = series.flat().filter(Number.isFinite);
  const high = values.length ? values.reduce((a, b) => Math.max(a, b)) : 1;
  const low = values.length ? values.reduce((a, b) => Math.min(a, b)) : 0;
  const top = fromData ? high : Math.max(high, 0);
  return scaleLinear()
    .domain([fromData ? low : Math.min(low, 0), top === low ? top + 1 : top])
    .nice(5)
    .range([box.bottom, box.top]);
}

/** Path of a series over its index; gaps where values are missing. */
export function seriesPath(values: readonly number[], x: (index: number) => number, y: (value: number) => number): string {
  const path = line<number>()
    .defined(Number.isFinite)
    .x((_, index) => Math.round(x(index) * 10) / 10)
    .y((value) => Math.round(y(value) * 10) / 10);
  return path([...values]) ?? '';
}
