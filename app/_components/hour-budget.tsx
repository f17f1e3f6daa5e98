import { scaleLinear } from 'd3-scale';
import type { UnitSystem } from '../../lib/base/units.ts';
import type { SiteHour, SiteHoursAnswer } from '../../lib/http/contract/weather.ts';
import { type Box, ChartFrame, type MarkName, markClass, NamedAxis, seriesPath, ValueAxis, valueScale } from './chart-frame.tsx';
import { type Column, DataTable, FiguresBelow } from './data-table.tsx';
import { longDate } from './date-words.ts';
import { figure, type Maybe, plain, unitOf } from './figures.ts';

const BOX: Box = { left: 52, right: 950, top: 30, bottom: 230 };
const HOURS = 24;

const LINES: readonly { label: string; mark: MarkName; pick: (hour: SiteHour) => Maybe }[] = [
  { label: 'Rn, net radiation', mark: 'second', pick: (hour) => hour.net_radiation_w_m2 },
  { label: 'G, into the soil', mark: 'fourth', pick: (hour) => hour.soil_heat_w_m2 },
  { label: 'λE, evaporating water', mark: 'first', pick: (hour) => hour.latent_heat_w_m2 },
  { label: 'H, warming the air', mark: 'third', pick: (hour) => hour.sensible_heat_w_m2 },
];

const STAND_IN_WORDS = {
  solar_radiation: 'solar radiation is the day’s, shared among the hours as the radiation above the atmosphere is',
  wind_speed: 'wind is the day’s mean at every hour',
} as const;

/** The 24 hours of the budget as lines, with their table. */
export function HourBudget({ answer, units }: { answer: SiteHoursAnswer; units: UnitSystem }) {
  const { items } = answer;
  if (items.length === 0) return <p className="small muted">The site has no hours on {longDate(answer.date)}.</p>;
  const series = LINES.map((line) => ({ ...line, values: items.map((hour) => line.pick(hour) ?? Number.NaN) }));
  const x = scaleLinear().domain([0, HOURS]).range([BOX.left, BOX.right]);
  const y = valueScale(
    series.map((line) => line.values),
    BOX,
  );
  const most = (values: readonly number[]) => values.filter(Number.isFinite).reduce((a, b) => Math.max(a, b), Number.NEGATIVE_INFINITY);
  const ticks = [0, 3, 6, 9, 12, 15, 18, 21].map((offset) => ({ offset, name: `${offset}` }));
  return (
    <>
      <ChartFrame
        id="hours"
        title={`Hours of ${longDate(answer.date)}, FAO-56, short surface`}
        description={series.map((line) => `${line.label}: at most ${plain(most(line.values), 0)} W m⁻²`).join('. ')}
        width={960}
        height={276}
        legend={series}
        narrowest={640}
      >
        <ValueAxis scale={y} box={BOX} label="W m⁻²" />
        {series.map((line) => (
          <path key={line.label} className={markClass(line.mark)} d={seriesPath(line.values, (hour) => x(hour + 0.5), y)} />
        ))}
        <NamedAxis scale={x} box={BOX} ticks={ticks} label={`hour of standard time, UTC${offsetText(answer.utc_offset_h)}`} />
      </ChartFrame>
      {answer.estimated.length > 0 ? (
        <p className="small muted">Not reported by the hour: {answer.estimated.map((name) => STAND_IN_WORDS[name]).join('; ')}.</p>
      ) : null}
      <FiguresBelow summary="The hours as a table" printed>
        <DataTable
          caption={`Hours of ${longDate(answer.date)}`}
          unitsBelow
          rows={items}
          rowKey={(hour) => String(hour.hour)}
          columns={columnsOf(units)}
        />
      </FiguresBelow>
    </>
  );
}

function offsetText(hours: number): string {
  const minutes = Math.round(Math.abs(hours) * 60);
  return `${hours < 0 ? '−' : '+'}${String(Math.floor(minutes / 60)).padStart(2, '0')}:${String(minutes % 60).padStart(2, '0')}`;
}

function columnsOf(units: UnitSystem): Column<SiteHour>[] {
  const fixed = (key: keyof SiteHour, head: string, unit: string, decimals: number): Column<SiteHour> => ({
    key,
    head,
    unit,
    numeric: true,
    cell: (hour) => plain(hour[key], decimals),
  });
  const depth = (key: keyof SiteHour, head: string): Column<SiteHour> => ({
    key,
    head,
    unit: unitOf('depth', units),
    numeric: true,
    cell: (hour) => (units === 'us' ? plain((hour[key] ?? Number.NaN) / 25.4, 3) : plain(hour[key], 2)),
  });
  return [
    { key: 'hour', head: 'Hour', rowHead: true, oneLine: true, cell: ({ hour }) => `${hour}–${hour + 1}` },
    {
      key: 'temperature',
      head: 'Air',
      unit: unitOf('temperature', units),
      numeric: true,
      cell: (hour) => figure(hour.air_temperature_c, 'temperature', units),
    },
    fixed('vapour_pressure_kpa', 'Vapour pressure', 'kPa', 2),
    fixed('solar_radiation_mj_m2_h', 'Solar radiation', 'MJ m⁻² h⁻¹', 2),
    {
      key: 'wind',
      head: 'Wind at 2 m',
      unit: unitOf('speed', units),
      numeric: true,
      cell: (hour) => figure(hour.wind_speed_2m_m_s, 'speed', units),
    },
    fixed('net_radiation_w_m2', 'Rn', 'W m⁻²', 0),
    fixed('soil_heat_w_m2', 'G', 'W m⁻²', 0),
    fixed('latent_heat_w_m2', 'λE', 'W m⁻²', 0),
    fixed('sensible_heat_w_m2', 'H', 'W m⁻²', 0),
    depth('reference_et_fao56_short_mm', 'FAO-56 short'),
    depth('reference_et_asce2005_short_mm', 'ASCE short'),
    depth('reference_et_asce2005_tall_mm', 'ASCE tall'),
  ];
}
