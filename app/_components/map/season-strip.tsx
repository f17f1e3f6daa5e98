'use client';

import { ticks } from 'd3-array';
import { type KeyboardEvent, type PointerEvent, useEffect, useRef, useState } from 'react';
import type { UnitSystem } from '../../../lib/base/units.ts';
import { formatVolume } from '../../../lib/report/quantity-text.ts';
import { dateRange, dayMonth, longDate, monthName } from '../date-words.ts';
import { inUnits, plain, unitOf } from '../figures.ts';
import { Icon } from '../icon.tsx';
import { type AheadWeeks, aheadInRange, weekKind } from './ahead-weeks.ts';
import type { WeekRange, WeekSpan } from './map-values.ts';
import styles from './season-strip.module.css';
import { endsText, mostOf, type WeekEnds } from './week-band.ts';

interface StripProps {
  readonly weeks: readonly WeekSpan[];
  /** m³ of each week; null while they are on their way */
  readonly volumes: readonly number[] | null;
  /** ends of the band of each week; null where the run has none */
  readonly ends?: readonly WeekEnds[] | null;
  readonly range: WeekRange;
  /** days past the last observation; null where every week has been observed */
  readonly ahead: AheadWeeks;
  readonly units: UnitSystem;
  readonly onRange: (range: WeekRange) => void;
}

const PLAY_MS = 700;
const PLAY_CALM_MS = 1600;

/** What is chosen, in words. @example rangeWords([{ start: '2025-06-03', end: '2025-06-09' }], { from: 0, to: 0 }) // 'whole season, 3 Jun – 9 Jun 2025' */
export function rangeWords(weeks: readonly WeekSpan[], range: WeekRange): string {
  const [start, end] = [weeks[range.from].start, weeks[range.to].end];
  if (range.from === 0 && range.to === weeks.length - 1) return `whole season, ${dateRange(start, end)}`;
  return range.from === range.to ? `week of ${longDate(start)}` : `${range.to - range.from + 1} weeks, ${dateRange(start, end)}`;
}

/** The range after a key, or null when the key means nothing here. */
export function rangeAfterKey(key: string, shift: boolean, range: WeekRange, count: number): WeekRange | null {
  const last = count - 1;
  const one = (week: number): WeekRange => ({ from: Math.max(0, Math.min(last, week)), to: Math.max(0, Math.min(last, week)) });
  const wide = range.from !== range.to;
  if (shift && key === 'ArrowRight') return { from: range.from, to: Math.min(last, range.to + 1) };
  if (shift && key === 'ArrowLeft') return { from: range.from, to: Math.max(range.from, range.to - 1) };
  if (key === 'ArrowRight' || key === 'ArrowUp') return one(wide ? range.from : range.to + 1);
  if (key === 'ArrowLeft' || key === 'ArrowDown') return one(wide ? range.to : range.from - 1);
  if (key === 'PageUp') return one(range.to + 4);
  if (key === 'PageDown') return one(range.from - 4);
  if (key === 'Home') return one(0);
  if (key === 'End') return one(last);
  return key === 'Escape' ? { from: 0, to: last } : null;
}

/** Steps a week at a time while playing; stops at the season's end. */
function usePlay(props: StripProps): [boolean, (on: boolean) => void] {
  const [playing, setPlaying] = useState(false);
  const now = useRef(props);
  now.current = props;
  useEffect(() => {
    if (!playing) return;
    const calm = matchMedia('(prefers-reduced-motion: reduce)').matches;
    const timer = setInterval(
      () => {
        const { range, weeks, onRange } = now.current;
        const week = range.from === range.to ? range.to + 1 : 0;
        if (week >= weeks.length) setPlaying(false);
        else onRange({ from: week, to: week });
      },
      calm ? PLAY_CALM_MS : PLAY_MS,
    );
    return () => clearInterval(timer);
  }, [playing]);
  return [playing, setPlaying];
}

/** One bar per week of the season (what the district's parcels ask for), and the control that says which weeks the map shows. */
export function SeasonStrip(props: StripProps) {
  const { weeks, volumes, range, units, onRange } = props;
  const [playing, setPlaying] = usePlay(props);
  const [pointed, setPointed] = useState<number | null>(null);
  const last = weeks.length - 1;
  const whole = range.from === 0 && range.to === last;
  const choose = (next: WeekRange) => {
    setPlaying(false);
    onRange(next);
  };
  return (
    <section className={styles.strip} aria-label="Season strip">
      <div className={styles.head}>
        <h2 className={styles.said} aria-live="polite">
          {capital(rangeWords(weeks, range))}
        </h2>
        <p className={styles.readout}>
          {pointed === null
            ? asked(volumes, range, units) + endsText(props.ends ?? null, range, units)
            : readout(weeks, volumes, pointed, units) + endsText(props.ends ?? null, { from: pointed, to: pointed }, units)}
        </p>
        <AheadSaid weeks={weeks} range={pointed === null ? range : { from: pointed, to: pointed }} ahead={props.ahead} />
        <div className={`${styles.buttons} no-print`}>
          <button
            type="button"
            className="button"
            aria-label="Week before"
            title="Week before"
            onClick={() => choose(rangeAfterKey('ArrowLeft', false, range, weeks.length) ?? range)}
          >
            <Icon name="back" />
          </button>
          <button type="button" className="button" onClick={() => setPlaying(!playing)}>
            {playing ? 'Stop' : 'Play'}
          </button>
          <button
            type="button"
            className="button"
            aria-label="Week after"
            title="Week after"
            onClick={() => choose(rangeAfterKey('ArrowRight', false, range, weeks.length) ?? range)}
          >
            <Icon name="forward" />
          </button>
          <button type="button" className="button" aria-pressed={whole} onClick={() => choose({ from: 0, to: last })}>
            Whole season
          </button>
        </div>
      </div>
      <StripBars {...props} onRange={choose} onPoint={setPointed} />
    </section>
  );
}

/** What the weeks rest on where they are not wholly observed, beside the hatch of their bars. */
function AheadSaid({ weeks, range, ahead }: Pick<StripProps, 'weeks' | 'range' | 'ahead'>) {
  const words = aheadInRange(weeks, range, ahead);
  if (words === '') return null;
  return (
    <p className={styles.ahead}>
      <span className={styles.aheadKey} data-kind={weekKind(weeks[range.to], ahead)} aria-hidden="true" /> {capital(words)}
    </p>
  );
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

function asked(volumes: readonly number[] | null, range: WeekRange, units: UnitSystem): string {
  if (!volumes) return 'Reading the season …';
  const total = volumes.slice(range.from, range.to + 1).reduce((sum, volume) => sum + volume, 0);
  return `${formatVolume(total, units)} asked for at the turnouts`;
}

function readout(weeks: readonly WeekSpan[], volumes: readonly number[] | null, week: number, units: UnitSystem): string {
  return `${dateRange(weeks[week].start, weeks[week].end)}: ${asked(volumes, { from: week, to: week }, units)}`;
}

/** The axis counts in thousands once a week passes ten thousand. */
function axisOf(volumes: readonly number[], ends: readonly WeekEnds[] | null, units: UnitSystem) {
  const shown = volumes.map((volume) => inUnits(volume, 'volume', units));
  const most = shown.reduce((a, b) => Math.max(a, b), mostOf(ends, units));
  const thousands = most >= 10_000 ? 1000 : 1;
  const steps = ticks(0, most || 1, 3);
  const step = steps.length > 1 ? steps[1] - steps[0] : 1;
  const top = Math.ceil((most || 1) / step) * step;
  const decimals = Math.max(0, -Math.floor(Math.log10(step / thousands) + 1e-9));
  const marks = Array.from({ length: Math.round(top / step) + 1 }, (_, index) => index * step);
  return {
    shown,
    top,
    marks: marks.map((value) => ({ at: value / top, text: plain(value / thousands, decimals) })),
    unit: `${thousands > 1 ? 'thousand ' : ''}${unitOf('volume', units)}`,
  };
}

function StripBars(props: StripProps & { onPoint: (week: number | null) => void }) {
  const { weeks, volumes, range, units, onRange, onPoint } = props;
  const plot = useRef<HTMLDivElement>(null);
  const anchor = useRef<number | null>(null);
  const axis = axisOf(volumes ?? [], props.ends ?? null, units);
  const weekAt = (event: PointerEvent) => {
    const box = plot.current?.getBoundingClientRect();
    if (!box) return 0;
    return Math.max(0, Math.min(weeks.length - 1, Math.floor(((event.clientX - box.left) / box.width) * weeks.length)));
  };
  const press = (event: PointerEvent<HTMLDivElement>) => {
    anchor.current = weekAt(event);
    event.currentTarget.setPointerCapture(event.pointerId);
    onRange({ from: anchor.current, to: anchor.current });
  };
  const move = (event: PointerEvent<HTMLDivElement>) => {
    const week = weekAt(event);
    onPoint(week);
    if (anchor.current === null) return;
    const next = { from: Math.min(anchor.current, week), to: Math.max(anchor.current, week) };
    if (next.from !== range.from || next.to !== range.to) onRange(next);
  };
  const release = () => {
    anchor.current = null;
  };
  const key = (event: KeyboardEvent) => {
    const next = event.altKey || event.ctrlKey || event.metaKey ? null : rangeAfterKey(event.key, event.shiftKey, range, weeks.length);
    if (!next) return;
    event.preventDefault();
    onRange(next);
  };
  return (
    <div className={styles.frame}>
      <p className={styles.axisName}>Demand at the turnouts, {axis.unit} a week</p>
      <div className={styles.axis} aria-hidden="true">
        {axis.marks.map((mark) => (
          <span key={mark.at} style={{ bottom: `${mark.at * 100}%` }}>
            {mark.text}
          </span>
        ))}
      </div>
      <div
        ref={plot}
        className={styles.plot}
        role="slider"
        tabIndex={0}
        aria-label="Weeks shown"
        aria-valuemin={1}
        aria-valuemax={weeks.length}
        aria-valuenow={range.to + 1}
        aria-valuetext={[rangeWords(weeks, range), asked(volumes, range, units), aheadInRange(weeks, range, props.ahead)]
          .filter(Boolean)
          .join('; ')}
        aria-describedby="strip-keys"
        onPointerDown={press}
        onPointerMove={move}
        onPointerUp={release}
        onPointerCancel={release}
        onPointerLeave={() => onPoint(null)}
        onKeyDown={key}
      >
        {axis.marks.map((mark) => (
          <i key={mark.at} className={styles.rule} style={{ bottom: `${mark.at * 100}%` }} />
        ))}
        {weeks.map((week, index) => (
          <span
            key={week.start}
            className={styles.week}
            data-on={index >= range.from && index <= range.to}
            data-kind={weekKind(week, props.ahead)}
          >
            <span className={styles.bar} style={{ height: `${((axis.shown[index] ?? 0) / axis.top) * 100}%` }} />
            <Whisker ends={props.ends?.[index]} top={axis.top} units={units} />
          </span>
        ))}
      </div>
      <MonthLine weeks={weeks} />
      <p id="strip-keys" className="visually-hidden">
        Arrow keys move a week, with Shift they stretch the range, Home and End go to the ends, Escape shows the whole season.
      </p>
    </div>
  );
}

/** The band of a week as a line from its low to its high end. */
function Whisker({ ends, top, units }: { ends: WeekEnds | undefined; top: number; units: UnitSystem }) {
  if (!ends || !(ends.high > 0)) return null;
  const share = (volume: number) => `${(inUnits(volume, 'volume', units) / top) * 100}%`;
  return <i className={styles.whisker} style={{ bottom: share(ends.low), height: share(ends.high - ends.low) }} />;
}

/** Month names under the weeks in which they begin. */
function MonthLine({ weeks }: { weeks: readonly WeekSpan[] }) {
  const names = weeks
    .map((week, index) => ({ index, name: monthName(week.end).slice(0, 3), month: week.end.slice(0, 7) }))
    .filter((week, index, all) => index === 0 || week.month !== all[index - 1].month)
    .filter((week) => week.index < weeks.length - 1);
  return (
    <div className={styles.months} aria-hidden="true">
      {names.map((month) => (
        <span
          key={month.index}
          style={{ insetInlineStart: `${(month.index / weeks.length) * 100}%` }}
          title={dayMonth(weeks[month.index].start)}
        >
          {month.name}
        </span>
      ))}
    </div>
  );
}
