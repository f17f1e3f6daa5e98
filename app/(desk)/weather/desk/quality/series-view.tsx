import { scaleLinear } from 'd3-scale';
import type { QualitySeries } from '../../../../../lib/http/answers/quality-series.ts';
import {
  type Box,
  ChartFrame,
  type LegendItem,
  markClass,
  NamedAxis,
  seriesPath,
  ValueAxis,
  valueScale,
} from '../../../../_components/chart-frame.tsx';
import { DataTable, FiguresBelow } from '../../../../_components/data-table.tsx';
import { longDate, monthTicks } from '../../../../_components/date-words.ts';
import { significant } from '../../../../_components/figures.ts';

const BOX: Box = { left: 56, right: 950, top: 34, bottom: 244 };

interface SeriesViewProps {
  readonly id: string;
  readonly title: string;
  readonly series: QualitySeries;
  /** days in question, shaded */
  readonly marked?: { readonly from: string; readonly to: string };
  /** limit in the unit of the series */
  readonly limit?: number | null;
}

/** A stretch of a record: as stored, as decided, what it is held against, the limit, and the days in question. */
export function SeriesView({ id, title, series, marked, limit }: SeriesViewProps) {
  const { dates, raw, standing, against, unit, term } = series;
  const decided = raw.some((value, day) => !Object.is(value, standing[day]));
  const x = scaleLinear().domain([0, dates.length]).range([BOX.left, BOX.right]);
  const middle = (day: number) => x(day + 0.5);
  const y = valueScale([raw, standing, against?.values ?? [], limit === null || limit === undefined ? [] : [limit]], BOX, true);
  const inside = marked ? dates.flatMap((date, day) => (date >= marked.from && date <= marked.to ? [day] : [])) : [];
  const legend: LegendItem[] = [
    { label: 'As stored', mark: 'first' },
    ...(decided ? [{ label: 'As decided', mark: 'third' as const }] : []),
    ...(against ? [{ label: against.label, mark: 'quiet' as const }] : []),
    ...(limit === null || limit === undefined ? [] : [{ label: 'Limit', mark: 'raw' as const }]),
    ...(inside.length > 0 ? [{ label: 'Days in question', mark: 'band' as const }] : []),
  ];
  return (
    <ChartFrame
      id={id}
      title={title}
      description={words(series, marked)}
      width={960}
      height={296}
      legend={legend}
      below={<Days series={series} decided={decided} />}
    >
      {inside.length > 0 ? (
        <rect
          className={markClass('band')}
          x={x(inside[0])}
          width={x(inside[inside.length - 1] + 1) - x(inside[0])}
          y={BOX.top}
          height={BOX.bottom - BOX.top}
        />
      ) : null}
      <ValueAxis scale={y} box={BOX} label={`${term}, ${unit}`} />
      {against ? <path className={markClass('quiet')} d={seriesPath(against.values, middle, y)} /> : null}
      {limit === null || limit === undefined ? null : (
        <line className={markClass('raw')} x1={BOX.left} x2={BOX.right} y1={y(limit)} y2={y(limit)} />
      )}
      <path className={markClass('first')} d={seriesPath(raw, middle, y)} />
      {dots(raw, middle, y)}
      {decided ? <path className={markClass('third')} d={seriesPath(standing, middle, y)} /> : null}
      <NamedAxis scale={x} box={BOX} ticks={ticksOf(dates)} label={`Day, ${longDate(dates[0])} to ${longDate(dates[dates.length - 1])}`} />
    </ChartFrame>
  );
}

/** Values that stand alone between gaps would draw no line. */
function dots(values: readonly number[], x: (day: number) => number, y: (value: number) => number) {
  return values.map((value, day) =>
    Number.isFinite(value) && !Number.isFinite(values[day - 1]) && !Number.isFinite(values[day + 1]) ? (
      // biome-ignore lint/suspicious/noArrayIndexKey: the day is its own place
      <circle key={day} className={markClass('first')} cx={x(day)} cy={y(value)} r={2} />
    ) : null,
  );
}

function ticksOf(dates: readonly string[]): { offset: number; name: string }[] {
  const months = monthTicks(dates[0], dates[dates.length - 1]);
  if (dates.length > 75) {
    const step = Math.ceil(months.length / 13);
    return months.filter((_, at) => at % step === 0).map(({ offset, name }) => ({ offset, name }));
  }
  const step = Math.max(1, Math.ceil(dates.length / 9));
  return dates.map((date, offset) => ({ offset, name: date.slice(5) })).filter((_, offset) => offset % step === 0);
}

function words({ term, unit, raw, dates, site }: QualitySeries, marked?: { from: string; to: string }): string {
  const known = raw.filter(Number.isFinite);
  if (known.length === 0) return `${term} at ${site.code}: nothing stored from ${dates[0]} to ${dates[dates.length - 1]}.`;
  const [least, most] = known.reduce(([low, high], value) => [Math.min(low, value), Math.max(high, value)], [known[0], known[0]]);
  const asked = marked ? ` Days in question: ${marked.from} to ${marked.to}.` : '';
  return `${term} at ${site.code}, ${dates[0]} to ${dates[dates.length - 1]}: ${significant(least, 4)} to ${significant(most, 4)} ${unit}, ${known.length} days.${asked}`;
}

function Days({ series, decided }: { series: QualitySeries; decided: boolean }) {
  const { dates, raw, standing, against, unit } = series;
  const rows = dates.map((date, day) => ({ date, raw: raw[day], standing: standing[day], against: against?.values[day] ?? Number.NaN }));
  return (
    <FiguresBelow summary={`The figures as a table (${dates.length} days)`}>
      <DataTable
        caption={`${series.term} at ${series.site.code}, day by day`}
        rows={rows}
        rowKey={(row) => row.date}
        columns={[
          { key: 'date', head: 'Day', rowHead: true, oneLine: true, cell: (row) => row.date },
          { key: 'raw', head: 'As stored', unit, numeric: true, cell: (row) => significant(row.raw, 4) },
          ...(decided
            ? [
                {
                  key: 'standing',
                  head: 'As decided',
                  unit,
                  numeric: true,
                  cell: (row: (typeof rows)[number]) => significant(row.standing, 4),
                },
              ]
            : []),
          ...(against
            ? [
                {
                  key: 'against',
                  head: against.label,
                  unit,
                  numeric: true,
                  cell: (row: (typeof rows)[number]) => significant(row.against, 4),
                },
              ]
            : []),
        ]}
      />
    </FiguresBelow>
  );
}
