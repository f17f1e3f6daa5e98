import { scaleLinear } from 'd3-scale';
import { area } from 'd3-shape';
import type { UnitSystem } from '../../lib/base/units.ts';
import type { ParcelDay } from '../../lib/http/contract/run.ts';
import { AheadNote, AheadShade, aheadLegend, aheadWords } from './ahead-shade.tsx';
import { type Box, ChartFrame, type LegendItem, markClass, NamedAxis, seriesPath, ValueAxis, valueScale } from './chart-frame.tsx';
import { longDate, monthTicks } from './date-words.ts';
import { figureWithUnit, inUnits, sumOf, unitOf } from './figures.ts';

const WIDTH = 960;
const UPPER: Box = { left: 48, right: 950, top: 30, bottom: 190 };
const LOWER: Box = { left: 48, right: 950, top: 240, bottom: 400 };

const LEGEND: readonly LegendItem[] = [
  { label: 'Rain', mark: 'rain' },
  { label: 'Irrigation, net', mark: 'irrigation' },
  { label: 'Crop ET', mark: 'cropEt' },
  { label: 'Crop ET, adjusted for stress', mark: 'adjusted' },
  { label: 'Root-zone depletion', mark: 'depletion' },
  { label: 'Readily available water (RAW)', mark: 'raw' },
  { label: 'Total available water (TAW)', mark: 'taw' },
];

/** The season of a parcel day by day: water in and out above, soil water between its limits below. */
export function DailyChart({ days, units, marked }: { days: readonly ParcelDay[]; units: UnitSystem; marked?: string }) {
  const x = scaleLinear().domain([0, days.length]).range([UPPER.left, UPPER.right]);
  const ticks = monthTicks(days[0].date, days[days.length - 1].date);
  const at = days.findIndex((day) => day.date === marked);
  return (
    <ChartFrame
      id="daily"
      title="The season day by day"
      description={chartWords(days, units)}
      width={WIDTH}
      height={436}
      legend={[...LEGEND, ...aheadLegend(days)]}
      below={<AheadNote days={days} />}
    >
      <AheadShade days={days} x={x} boxes={[UPPER, LOWER]} />
      <WaterPart days={days} units={units} x={x} />
      <SoilPart days={days} units={units} x={x} />
      <NamedAxis scale={x} box={LOWER} ticks={ticks} label={`${longDate(days[0].date)} to ${longDate(days[days.length - 1].date)}`} />
      {at >= 0 ? <line className={markClass('limit')} x1={x(at + 0.5)} x2={x(at + 0.5)} y1={UPPER.top} y2={LOWER.bottom} /> : null}
    </ChartFrame>
  );
}

interface PartProps {
  readonly days: readonly ParcelDay[];
  readonly units: UnitSystem;
  readonly x: (offset: number) => number;
}

function WaterPart({ days, units, x }: PartProps) {
  const depth = (pick: (day: ParcelDay) => number | null) => days.map((day) => inUnits(pick(day), 'depth', units));
  const rain = depth((day) => day.precipitation_mm);
  const irrigation = depth((day) => day.net_requirement_mm);
  const cropEt = depth((day) => day.crop_et_mm);
  const adjusted = depth((day) => day.adjusted_crop_et_mm);
  const y = valueScale([rain, irrigation, cropEt], UPPER);
  const middle = (index: number) => x(index + 0.5);
  return (
    <>
      <ValueAxis scale={y} box={UPPER} label={`Depth, ${unitOf('depth', units)} per day`} />
      <Bars values={irrigation} mark="irrigation" x={x} y={y} />
      <Bars values={rain} mark="rain" x={x} y={y} />
      <path className={markClass('cropEt')} d={seriesPath(cropEt, middle, y)} />
      <path className={markClass('adjusted')} d={seriesPath(adjusted, middle, y)} />
    </>
  );
}

function Bars({
  values,
  mark,
  x,
  y,
}: {
  values: readonly number[];
  mark: 'rain' | 'irrigation';
  x: (offset: number) => number;
  y: (value: number) => number;
}) {
  const width = x(1) - x(0);
  const inset = mark === 'rain' ? 0 : width * 0.5;
  const bars = values.map((value, index) => ({ value, index })).filter(({ value }) => value > 0);
  return bars.map(({ value, index }) => (
    <rect
      key={index}
      className={markClass(mark)}
      x={x(index) + inset}
      width={Math.max(1, width * 0.5)}
      y={y(value)}
      height={Math.max(0.5, y(0) - y(value))}
    />
  ));
}

function SoilPart({ days, units, x }: PartProps) {
  const depth = (pick: (day: ParcelDay) => number | null) => days.map((day) => inUnits(pick(day), 'depth', units));
  const depletion = depth((day) => day.root_zone_depletion_mm);
  const raw = depth((day) => day.readily_available_water_mm);
  const taw = depth((day) => day.total_available_water_mm);
  const upward = valueScale([depletion, taw], LOWER);
  const y = upward.copy().range([LOWER.top, LOWER.bottom]);
  const middle = (index: number) => x(index + 0.5);
  const fill = area<number>()
    .defined(Number.isFinite)
    .x((_, index) => middle(index))
    .y0(y(0))
    .y1((value) => y(value));
  return (
    <>
      <ValueAxis scale={y} box={LOWER} label={`Soil water below field capacity, ${unitOf('depth', units)} (0 = full)`} />
      <path className={markClass('depletion')} d={fill(depletion) ?? ''} />
      <path className={markClass('raw')} d={seriesPath(raw, middle, y)} />
      <path className={markClass('taw')} d={seriesPath(taw, middle, y)} />
    </>
  );
}

function chartWords(days: readonly ParcelDay[], units: UnitSystem): string {
  const total = (pick: (day: ParcelDay) => number | null) => figureWithUnit(sumOf(days, pick), 'depth', units);
  const deepest = days.reduce((a, b) => ((b.root_zone_depletion_mm ?? -1) > (a.root_zone_depletion_mm ?? -1) ? b : a));
  return [
    `${days.length} days. Rain ${total((day) => day.precipitation_mm)}, net irrigation ${total((day) => day.net_requirement_mm)},`,
    `crop ET ${total((day) => day.crop_et_mm)}.`,
    `The soil is driest on ${longDate(deepest.date)}: ${figureWithUnit(deepest.root_zone_depletion_mm, 'depth', units)} below field capacity.`,
    aheadWords(days),
  ]
    .join(' ')
    .trim();
}
