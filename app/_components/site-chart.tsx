import { scaleLinear } from 'd3-scale';
import { area } from 'd3-shape';
import type { UnitSystem } from '../../lib/base/units.ts';
import type { SiteDay } from '../../lib/http/contract/rest.ts';
import { AheadShade, aheadLegend } from './ahead-shade.tsx';
import {
  type Box,
  ChartFrame,
  type LegendItem,
  type MarkName,
  markClass,
  NamedAxis,
  seriesPath,
  ValueAxis,
  valueScale,
} from './chart-frame.tsx';
import { longDate, monthTicks } from './date-words.ts';
import { inUnits, plain, unitOf } from './figures.ts';

const BOX: Box = { left: 48, right: 950, top: 30, bottom: 170 };

interface Series {
  readonly label: string;
  readonly mark: MarkName;
  readonly values: readonly number[];
}

interface SeriesChartProps {
  readonly id: string;
  readonly title: string;
  readonly unit: string;
  readonly days: readonly SiteDay[];
  readonly lines: readonly Series[];
  /** filled between two series */
  readonly band?: { readonly label: string; readonly low: readonly number[]; readonly high: readonly number[] };
  readonly bars?: Series;
  /** the axis need not begin at zero */
  readonly fromData?: boolean;
}

/** One quantity of a site through time: lines, a band or bars over a month axis. */
export function SeriesChart(props: SeriesChartProps) {
  const { days, lines, band, bars } = props;
  const x = scaleLinear().domain([0, days.length]).range([BOX.left, BOX.right]);
  const middle = (index: number) => x(index + 0.5);
  const y = valueScale([...lines.map((each) => each.values), band?.low ?? [], band?.high ?? [], bars?.values ?? []], BOX, props.fromData);
  const legend: LegendItem[] = [...(bars ? [bars] : []), ...(band ? [{ label: band.label, mark: 'band' as const }] : []), ...lines];
  return (
    <ChartFrame
      id={props.id}
      title={props.title}
      description={chartWords(props)}
      width={960}
      height={206}
      legend={[...legend.map(({ label, mark }) => ({ label, mark })), ...aheadLegend(days)]}
    >
      <AheadShade days={days} x={x} boxes={[BOX]} />
      <ValueAxis scale={y} box={BOX} label={props.unit} ticks={4} />
      {band ? <path className={markClass('band')} d={bandPath(band.low, band.high, middle, y)} /> : null}
      {bars ? <DayBars series={bars} x={x} y={y} /> : null}
      {lines.map((each) => (
        <path key={each.label} className={markClass(each.mark)} d={seriesPath(each.values, middle, y)} />
      ))}
      <NamedAxis scale={x} box={BOX} ticks={dayTicks(days)} />
    </ChartFrame>
  );
}

function DayBars({ series, x, y }: { series: Series; x: (offset: number) => number; y: (value: number) => number }) {
  const width = Math.max(1, (x(1) - x(0)) * 0.8);
  const bars = series.values.map((value, index) => ({ value, index })).filter(({ value }) => value > 0);
  return bars.map(({ value, index }) => (
    <rect key={index} className={markClass(series.mark)} x={x(index)} width={width} y={y(value)} height={y(0) - y(value)} />
  ));
}

function bandPath(low: readonly number[], high: readonly number[], x: (index: number) => number, y: (value: number) => number): string {
  const path = area<number>()
    .defined((_, index) => Number.isFinite(low[index]) && Number.isFinite(high[index]))
    .x((_, index) => x(index))
    .y0((_, index) => y(low[index]))
    .y1((value) => y(value));
  return path([...high]) ?? '';
}

/** Month names along a season; single days when the range is short. */
export function dayTicks(days: readonly { readonly date: string }[]): { offset: number; name: string }[] {
  const months = monthTicks(days[0].date, days[days.length - 1].date);
  if (months.length >= 2) return thinned(months);
  const step = Math.max(1, Math.ceil(days.length / 8));
  return days.map((day, offset) => ({ offset, name: day.date.slice(5) })).filter((_, offset) => offset % step === 0);
}

function thinned(months: readonly { readonly offset: number; readonly name: string }[]): { offset: number; name: string }[] {
  const step = Math.ceil(months.length / 14);
  return months.filter((_, at) => at % step === 0);
}

function chartWords({ days, lines, bars, unit }: SeriesChartProps): string {
  const parts = [...lines, ...(bars ? [bars] : [])].map((each) => {
    const known = each.values.filter(Number.isFinite);
    if (known.length === 0) return `${each.label}: no values`;
    const [least, most] = known.reduce(([low, high], value) => [Math.min(low, value), Math.max(high, value)], [known[0], known[0]]);
    return `${each.label}: ${plain(least, 1)} to ${plain(most, 1)} ${unit}, ${known.length} days`;
  });
  return `${longDate(days[0].date)} to ${longDate(days[days.length - 1].date)}. ${parts.join('. ')}.`;
}

type Completed = keyof SiteDay['completed'];

/** The completed weather of a site, one chart per quantity. */
export function SiteCharts({ days, units }: { days: readonly SiteDay[]; units: UnitSystem }) {
  const completed = (key: Completed) => days.map((day) => day.completed[key] ?? Number.NaN);
  const celsius = (key: Completed) => completed(key).map((value) => inUnits(value, 'temperature', units));
  const [high, low] = [celsius('air_temperature_max_c'), celsius('air_temperature_min_c')];
  const clear = days.map((day) => day.clear_sky_radiation_mj_m2_d ?? Number.NaN);
  return (
    <>
      <SeriesChart
        id="temperature"
        title="Air temperature"
        unit={unitOf('temperature', units)}
        days={days}
        lines={[]}
        band={{ label: 'Minimum to maximum', low, high }}
        fromData
      />
      <SeriesChart
        id="radiation"
        title="Solar radiation under its clear-sky envelope"
        unit="MJ m⁻² d⁻¹"
        days={days}
        lines={[
          { label: 'Solar radiation', mark: 'cropEt', values: completed('solar_radiation_mj_m2_d') },
          { label: 'Clear sky', mark: 'raw', values: clear },
        ]}
      />
      <SeriesChart
        id="humidity"
        title="Actual vapour pressure"
        unit="kPa"
        days={days}
        lines={[{ label: 'Actual vapour pressure', mark: 'first', values: completed('vapour_pressure_kpa') }]}
      />
      <SeriesChart
        id="wind"
        title="Wind at 2 m"
        unit={unitOf('speed', units)}
        days={days}
        lines={[
          { label: 'Daily mean', mark: 'quiet', values: completed('wind_speed_2m_m_s').map((value) => inUnits(value, 'speed', units)) },
        ]}
      />
      <SeriesChart
        id="rain"
        title="Rain"
        unit={`${unitOf('depth', units)} per day`}
        days={days}
        lines={[]}
        bars={{ label: 'Rain', mark: 'rain', values: completed('precipitation_mm').map((value) => inUnits(value, 'depth', units)) }}
      />
    </>
  );
}
