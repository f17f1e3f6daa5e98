/** Days past the last observation in charts and in words: hatched, never by colour alone. */
import { counted } from '../../lib/base/counted.ts';
import { DAY_KIND_TEXT, type DayKind, isAhead } from '../../lib/weather/day-kind.ts';
import { type Box, type LegendItem, type MarkName, markClass } from './chart-frame.tsx';
import { longDate } from './date-words.ts';

interface KindDay {
  readonly date: string;
  readonly day_kind: DayKind;
}

const MARKS: Partial<Record<DayKind, { readonly mark: MarkName; readonly label: string }>> = {
  forecast: { mark: 'forecast', label: 'Forecast' },
  analogue: { mark: 'beyond', label: 'Days of the analogue year' },
  normal: { mark: 'beyond', label: 'Normal of the day' },
};

interface AheadSpan {
  readonly kind: DayKind;
  /** offsets of the first day and of the day after the last */
  readonly from: number;
  readonly end: number;
}

/** Runs of days of one kind that lie past the last observation. */
function aheadSpans(days: readonly KindDay[]): AheadSpan[] {
  const spans: AheadSpan[] = [];
  days.forEach(({ day_kind: kind }, day) => {
    if (!isAhead(kind)) return;
    const last = spans.at(-1);
    if (last && last.kind === kind && last.end === day) spans[spans.length - 1] = { ...last, end: day + 1 };
    else spans.push({ kind, from: day, end: day + 1 });
  });
  return spans;
}

/** Hatches the days to come behind a chart's marks. */
export function AheadShade({ days, x, boxes }: { days: readonly KindDay[]; x: (offset: number) => number; boxes: readonly Box[] }) {
  return aheadSpans(days).flatMap(({ kind, from, end }) =>
    boxes.map((box) => (
      <rect
        key={`${from} ${box.top}`}
        className={markClass(MARKS[kind]?.mark ?? 'beyond')}
        x={x(from)}
        width={x(end) - x(from)}
        y={box.top}
        height={box.bottom - box.top}
      />
    )),
  );
}

/** The hatches that a chart of these days has. */
export function aheadLegend(days: readonly KindDay[]): LegendItem[] {
  const kinds = new Set(days.map(({ day_kind }) => day_kind));
  return (Object.keys(MARKS) as DayKind[]).filter((kind) => kinds.has(kind)).map((kind) => MARKS[kind] as LegendItem);
}

/** Days to come in a sentence; empty where there are none. @example aheadWords([]) // '' */
export function aheadWords(days: readonly KindDay[]): string {
  const first = days.find(({ day_kind }) => isAhead(day_kind));
  if (!first) return '';
  const parts = (Object.keys(MARKS) as DayKind[])
    .map((kind) => ({ kind, count: days.filter((day) => day.day_kind === kind).length }))
    .filter(({ count }) => count > 0)
    .map(({ kind, count }) => `${counted(count, 'day', 'days')} ${DAY_KIND_TEXT[kind]}`);
  return `From ${longDate(first.date)} not observed: ${parts.join(', ')}.`;
}

/** The same as a caution below a chart. */
export function AheadNote({ days }: { days: readonly KindDay[] }) {
  const words = aheadWords(days);
  if (words === '') return null;
  return <p className="notice caution small">{words} The hatched figures will change as observations come in.</p>;
}

/** What a day rests on, for a cell of a table. */
export function dayKindWord(kind: DayKind): string {
  return { observed: 'observed', filled: 'filled', forecast: 'forecast', analogue: 'analogue year', normal: 'normal' }[kind];
}
