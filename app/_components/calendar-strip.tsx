import { scaleLinear } from 'd3-scale';
import { dayNumber, type IsoDate } from '../../lib/base/civil-date.ts';
import type { ParcelSeason } from '../../lib/http/contract/run.ts';
import styles from './calendar-strip.module.css';
import { type Box, ChartFrame, NamedAxis } from './chart-frame.tsx';
import { DataTable, FiguresBelow } from './data-table.tsx';
import { dateRange, longDate, monthTicks } from './date-words.ts';
import { percent } from './figures.ts';

const STAGES = ['initial', 'development', 'mid', 'late'] as const;
const NAMES = { initial: 'Initial', development: 'Development', mid: 'Mid-season', late: 'Late' } as const;
const BOX: Box = { left: 8, right: 950, top: 8, bottom: 0 };
const ROW = 46;

interface StageSpan {
  readonly planting: string;
  readonly stage: (typeof STAGES)[number];
  readonly start: IsoDate;
  readonly end: IsoDate;
}

type PlantingOfSeason = ParcelSeason['plantings'][number];

/** The stages of each planting along the season. */
export function CalendarStrip({ season }: { season: ParcelSeason }) {
  const [first, last] = [season.days[0].date, season.days[season.days.length - 1].date];
  const rows = season.plantings.map((planting) => ({ planting, spans: stagesOf(planting) }));
  const x = scaleLinear().domain([0, season.days.length]).range([BOX.left, BOX.right]);
  const bottom = BOX.top + rows.length * ROW;
  return (
    <ChartFrame
      id="calendar"
      title="Crop calendar"
      description={rows
        .map(
          (row) =>
            `${row.planting.crop_name}: ${row.spans.map((span) => `${NAMES[span.stage]} ${dateRange(span.start, span.end)}`).join('; ') || 'never started in this run'}`,
        )
        .join('. ')}
      width={960}
      height={bottom + 40}
      below={<StageTable spans={rows.flatMap((row) => row.spans)} />}
    >
      {rows.map((row, at) => (
        <g key={plantingName(row.planting)} transform={`translate(0 ${BOX.top + at * ROW})`}>
          <text x={BOX.left} y={10}>
            {plantingName(row.planting)}
          </text>
          <StageBars spans={row.spans} first={first} last={last} x={x} />
        </g>
      ))}
      <NamedAxis scale={x} box={{ ...BOX, bottom }} ticks={monthTicks(first, last)} />
    </ChartFrame>
  );
}

function StageBars({
  spans,
  first,
  last,
  x,
}: {
  spans: readonly StageSpan[];
  first: IsoDate;
  last: IsoDate;
  x: (offset: number) => number;
}) {
  const offset = (date: IsoDate) => dayNumber(date) - dayNumber(first);
  return spans
    .filter((span) => span.end >= first && span.start <= last)
    .map((span) => {
      const from = x(Math.max(0, offset(span.start)));
      const to = x(Math.min(offset(last), offset(span.end)) + 1);
      return (
        <g key={`${span.stage} ${span.start}`}>
          <rect className={styles[span.stage]} x={from} y={16} width={Math.max(1, to - from)} height={20} />
          {to - from > 70 ? (
            <text className={styles.label} x={from + 5} y={30}>
              {NAMES[span.stage]}
            </text>
          ) : null}
        </g>
      );
    });
}

function StageTable({ spans }: { spans: readonly StageSpan[] }) {
  return (
    <FiguresBelow summary="Stages as a table" printed>
      <DataTable
        caption="Growth stages of the plantings"
        rows={spans}
        rowKey={(span) => `${span.planting} ${span.start} ${span.stage}`}
        columns={[
          { key: 'planting', head: 'Planting', rowHead: true, cell: (span) => span.planting },
          { key: 'stage', head: 'Stage', cell: (span) => NAMES[span.stage] },
          { key: 'start', oneLine: true, head: 'From', cell: (span) => longDate(span.start) },
          { key: 'end', oneLine: true, head: 'To', cell: (span) => longDate(span.end) },
        ]}
      />
    </FiguresBelow>
  );
}

function plantingName(planting: PlantingOfSeason): string {
  const share = planting.area_share < 1 ? `, ${percent(planting.area_share)} of the area` : '';
  return `${planting.crop_name}, planted ${longDate(planting.planting_date)}${share}`;
}

/** Dated stages of a planting as the run settled them. */
export function stagesOf(planting: PlantingOfSeason): StageSpan[] {
  return planting.stages.map(({ stage, start, end }) => ({ planting: plantingName(planting), stage, start, end }));
}
