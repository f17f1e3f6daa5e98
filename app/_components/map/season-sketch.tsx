import { scaleLinear } from 'd3-scale';
import { area, line } from 'd3-shape';
import type { UnitSystem } from '../../../lib/base/units.ts';
import type { ParcelDay } from '../../../lib/http/contract/run.ts';
import { isAhead } from '../../../lib/weather/day-kind.ts';
import { aheadWords } from '../ahead-shade.tsx';
import { monthTicks } from '../date-words.ts';
import { figureWithUnit } from '../figures.ts';
import type { WeekSpan } from './map-values.ts';

const WIDTH = 330;
const FLOW = { top: 14, bottom: 70 };
const SOIL = { top: 92, bottom: 140 };

/** A parcel's season at a glance: rain, irrigation and crop ET above, root-zone depletion below; the chosen days have a ground. */
export function SeasonSketch({ days, span, units }: { days: readonly ParcelDay[]; span: WeekSpan; units: UnitSystem }) {
  if (days.length === 0) return null;
  const x = scaleLinear().domain([0, days.length]).range([0, WIDTH]);
  const most = days.reduce((top, day) => Math.max(top, day.crop_et_mm ?? 0, day.precipitation_mm ?? 0, day.net_requirement_mm ?? 0), 1);
  const y = scaleLinear().domain([0, most]).range([FLOW.bottom, FLOW.top]);
  const first = days.findIndex((day) => day.date >= span.start);
  const last = days.findLastIndex((day) => day.date <= span.end);
  const firstAhead = days.findIndex(({ day_kind }) => isAhead(day_kind));
  const et = line<ParcelDay>()
    .defined((day) => day.crop_et_mm !== null)
    .x((_, index) => x(index + 0.5))
    .y((day) => y(day.crop_et_mm ?? 0));
  return (
    <figure>
      <figcaption className="small muted">
        <span className="key" data-water="rain" />
        Rain <span className="key" data-water="irrigation" />
        Irrigation <span className="key" data-water="et" />
        Crop ET <span className="key" data-water="soil" />
        Depletion
        {firstAhead < 0 ? null : `; hatched: ${aheadWords(days).replace('From', 'from').replace(/\.$/, '')}`}
      </figcaption>
      <svg
        className="chart"
        viewBox={`0 0 ${WIDTH} 158`}
        role="img"
        aria-label="The parcel's season: rain, irrigation, crop ET and root-zone depletion by day"
      >
        <rect x={x(first)} width={Math.max(2, x(last + 1) - x(first))} y={0} height={SOIL.bottom} fill="var(--accent-soft)" />
        {firstAhead < 0 ? null : (
          <>
            <defs>
              <pattern id="sketch-ahead" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(-45)">
                <line x1="0" y1="0" x2="0" y2="6" stroke="var(--ink-2)" strokeOpacity={0.4} />
              </pattern>
            </defs>
            <rect x={x(firstAhead)} width={WIDTH - x(firstAhead)} y={FLOW.top} height={SOIL.bottom - FLOW.top} fill="url(#sketch-ahead)" />
          </>
        )}
        <text x={0} y={10}>{`${figureWithUnit(most, 'depth', units)} a day`}</text>
        <Bars days={days} x={x} y={y} pick={(day) => day.net_requirement_mm} water="irrigation" />
        <Bars days={days} x={x} y={y} pick={(day) => day.precipitation_mm} water="rain" />
        <path d={et([...days]) ?? ''} fill="none" stroke="var(--et)" strokeWidth={1.5} />
        <line x2={WIDTH} y1={FLOW.bottom} y2={FLOW.bottom} stroke="var(--edge)" />
        <SoilLine days={days} x={x} units={units} />
        {monthTicks(days[0].date, days[days.length - 1].date).map((tick) => (
          <text key={tick.offset} x={x(tick.offset)} y={154}>
            {tick.name}
          </text>
        ))}
      </svg>
    </figure>
  );
}

type Along = (value: number) => number;

function Bars(props: {
  days: readonly ParcelDay[];
  x: Along;
  y: Along;
  pick: (day: ParcelDay) => number | null;
  water: 'rain' | 'irrigation';
}) {
  const { x, y } = props;
  const width = Math.max(1.2, x(1) - x(0));
  return props.days.map((day, index) => {
    const value = props.pick(day) ?? 0;
    return value > 0 ? (
      <rect key={day.date} x={x(index)} width={width} y={y(value)} height={y(0) - y(value)} fill={`var(--${props.water})`} />
    ) : null;
  });
}

function SoilLine({ days, x, units }: { days: readonly ParcelDay[]; x: Along; units: UnitSystem }) {
  const most = days.reduce((top, day) => Math.max(top, day.total_available_water_mm ?? 0), 1);
  const y = scaleLinear().domain([0, most]).range([SOIL.top, SOIL.bottom]);
  const fill = area<ParcelDay>()
    .defined((day) => day.root_zone_depletion_mm !== null)
    .x((_, index) => x(index + 0.5))
    .y0(y(0))
    .y1((day) => y(day.root_zone_depletion_mm ?? 0));
  const limit = line<ParcelDay>()
    .defined((day) => day.readily_available_water_mm !== null)
    .x((_, index) => x(index + 0.5))
    .y((day) => y(day.readily_available_water_mm ?? 0));
  return (
    <>
      <text x={0} y={SOIL.top - 5}>{`0 to ${figureWithUnit(most, 'depth', units)} below field capacity; dashed: stress begins`}</text>
      <path d={fill([...days]) ?? ''} fill="var(--soil)" fillOpacity={0.75} />
      <path d={limit([...days]) ?? ''} fill="none" stroke="var(--ink)" strokeDasharray="3 2" />
      <line x2={WIDTH} y1={y(0)} y2={y(0)} stroke="var(--edge)" />
    </>
  );
}
