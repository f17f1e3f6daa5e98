import { scaleLinear } from 'd3-scale';
import type { UnitSystem } from '../../lib/base/units.ts';
import type { BandAnswer, BandRow } from '../../lib/http/contract/band.ts';
import type { ParcelDay } from '../../lib/http/contract/run.ts';
import { bandBasis, bandMissing, betweenText } from './band-words.ts';
import { type Box, ChartFrame, type LegendItem, markClass, NamedAxis, ValueAxis, valueScale } from './chart-frame.tsx';
import { DataTable, FiguresBelow } from './data-table.tsx';
import { dateRange, longDate, monthTicks } from './date-words.ts';
import { figure, figureWithUnit, inUnits, sumOf, unitOf } from './figures.ts';
import { Section } from './page-head.tsx';

const WIDTH = 960;
const BOX: Box = { left: 48, right: 950, top: 30, bottom: 200 };

const LEGEND: readonly LegendItem[] = [
  { label: 'Gross requirement of the week, this run', mark: 'irrigation' },
  { label: '8 of 10 cases lie within (P10 to P90)', mark: 'band' },
  { label: 'Half of the cases lie below (P50)', mark: 'limit' },
];

interface ParcelBandProps {
  readonly season: BandAnswer;
  /** without rows where the run keeps no weeks of parcels */
  readonly weeks: BandAnswer;
  readonly days: readonly ParcelDay[];
  /** week that the page shows */
  readonly date: string;
  readonly units: UnitSystem;
}

/** How sure the figures of a parcel are: a sentence, the weeks with their band, and what it rests on. */
export function ParcelBand({ season, weeks, days, date, units }: ParcelBandProps) {
  const { band } = season;
  const [whole] = season.items;
  if (!band || !whole) {
    return (
      <Section id="band" title="How sure is this?">
        <p className="muted">{bandMissing(band)}</p>
      </Section>
    );
  }
  const week = weeks.items.find((row) => row.start <= date && date <= row.end);
  return (
    <Section id="band" title="How sure is this?">
      <p>
        In 8 of 10 cases the gross requirement of the season lies {betweenText(whole, 'depth', units)} (
        {betweenText(whole, 'volume', units)}
        ); this run says{' '}
        {figureWithUnit(
          sumOf(days, (day) => day.gross_requirement_mm),
          'depth',
          units,
        )}
        .{week ? ` ${weekText(week, units)}` : ''} When an irrigation falls is less sure than how much a season takes, so a week is less
        sure than the season.
      </p>
      {weeks.items.length > 0 ? <WeekChart rows={weeks.items} days={days} units={units} /> : null}
      <FiguresBelow summary="What this rests on">
        <ul>
          {bandBasis(band).map((sentence) => (
            <li key={sentence}>{sentence}</li>
          ))}
        </ul>
      </FiguresBelow>
    </Section>
  );
}

function weekText(week: BandRow, units: UnitSystem): string {
  const when = `In the week of ${dateRange(week.start, week.end)}`;
  if (week.p90_mm === 0) return `${when} no water is asked for in at least 9 of 10 cases.`;
  return `${when} it lies ${betweenText(week, 'depth', units)}.`;
}

interface Week {
  readonly row: BandRow;
  readonly from: number;
  readonly to: number;
  /** mm, of this run */
  readonly plain: number;
}

function weeksOf(rows: readonly BandRow[], days: readonly ParcelDay[]): Week[] {
  return rows.map((row) => {
    const own = days.filter(({ date }) => row.start <= date && date <= row.end);
    const from = days.findIndex(({ date }) => date === own[0]?.date);
    return { row, from, to: from + own.length, plain: sumOf(own, (day) => day.gross_requirement_mm) };
  });
}

function WeekChart({ rows, days, units }: { rows: readonly BandRow[]; days: readonly ParcelDay[]; units: UnitSystem }) {
  const weeks = weeksOf(rows, days);
  const depth = (value: number | null) => inUnits(value, 'depth', units);
  const x = scaleLinear().domain([0, days.length]).range([BOX.left, BOX.right]);
  const y = valueScale([weeks.map(({ row }) => depth(row.p90_mm)), weeks.map(({ plain }) => depth(plain))], BOX);
  return (
    <>
      <ChartFrame
        id="band-weeks"
        title="Gross requirement by week, with its band"
        description={chartWords(weeks, units)}
        width={WIDTH}
        height={236}
        legend={LEGEND}
      >
        <ValueAxis scale={y} box={BOX} label={`Depth, ${unitOf('depth', units)} per week`} />
        {weeks.map((week) => (
          <WeekMarks key={week.row.start} week={week} x={x} y={(value) => y(depth(value))} />
        ))}
        <NamedAxis scale={x} box={BOX} ticks={monthTicks(days[0].date, days[days.length - 1].date)} />
      </ChartFrame>
      <FiguresBelow summary="The weeks as a table">
        <DataTable
          caption="Gross requirement by week: low, middle and high"
          rows={weeks}
          rowKey={({ row }) => row.start}
          columns={[
            { key: 'week', head: 'Week', rowHead: true, oneLine: true, cell: ({ row }) => dateRange(row.start, row.end) },
            numberColumn('plain', 'This run', ({ plain }) => plain, units),
            numberColumn('p10', 'Low (P10)', ({ row }) => row.p10_mm, units),
            numberColumn('p50', 'Middle (P50)', ({ row }) => row.p50_mm, units),
            numberColumn('p90', 'High (P90)', ({ row }) => row.p90_mm, units),
          ]}
        />
      </FiguresBelow>
    </>
  );
}

function numberColumn(key: string, head: string, pick: (week: Week) => number | null, units: UnitSystem) {
  return { key, head, unit: unitOf('depth', units), numeric: true, cell: (week: Week) => figure(pick(week), 'depth', units) };
}

/** The run's own bar, the band before it, and the middle as a dashed line across. */
function WeekMarks({ week, x, y }: { week: Week; x: (day: number) => number; y: (value: number | null) => number }) {
  const { row, from, to, plain } = week;
  const [left, width] = [x(from) + 1, Math.max(1, x(to) - x(from) - 2)];
  const heightOf = (value: number | null) => Math.max(0, y(0) - y(value));
  return (
    <g>
      {plain > 0 ? <rect className={markClass('irrigation')} x={left} width={width * 0.5} y={y(plain)} height={heightOf(plain)} /> : null}
      {(row.p90_mm ?? 0) > 0 ? (
        <>
          <rect
            className={markClass('band')}
            x={left + width * 0.25}
            width={width * 0.7}
            y={y(row.p90_mm)}
            height={Math.max(0.5, heightOf(row.p90_mm) - heightOf(row.p10_mm))}
          />
          <line className={markClass('limit')} x1={left + width * 0.25} x2={left + width * 0.95} y1={y(row.p50_mm)} y2={y(row.p50_mm)} />
        </>
      ) : null}
    </g>
  );
}

function chartWords(weeks: readonly Week[], units: UnitSystem): string {
  const width = ({ row }: Week) => (row.p90_mm ?? 0) - (row.p10_mm ?? 0);
  const widest = weeks.reduce((a, b) => (width(b) > width(a) ? b : a));
  return `${weeks.length} weeks. Least sure is the week from ${longDate(widest.row.start)}: ${betweenText(widest.row, 'depth', units)}.`;
}
