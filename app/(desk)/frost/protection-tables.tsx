import { celsiusFromFahrenheit, METRES_PER_SECOND_PER_MPH, MILLIMETRES_PER_INCH, type UnitSystem } from '../../../lib/base/units.ts';
import {
  heatOfFreezing,
  RATE_MOST_WIND,
  RATE_SOURCE,
  RATE_TEMPERATURES,
  RATES,
  VINE_RATES,
  VINE_TEMPERATURES,
  WIND_RATES_PRINTED,
} from '../../../lib/energy/frost-protection.ts';
import { answerCriticalTemperatures } from '../../../lib/http/answers/frost.ts';
import { DataTable, FiguresBelow } from '../../_components/data-table.tsx';
import { figureWithUnit, plain } from '../../_components/figures.ts';
import { degree, sprinkling, sprinklingUnit, temperature } from './frost-words.ts';

interface RateRow {
  readonly name: string;
  readonly rates: readonly number[];
}

const RATE_ROWS: readonly RateRow[] = (['tall', 'short'] as const).flatMap((height) =>
  ([30, 60] as const).map((rotation) => ({
    name: `${height === 'tall' ? 'Tall' : 'Short'} crop, turning once in ${rotation} s`,
    rates: RATES[height][rotation],
  })),
);

/** The printed rates and the critical temperatures, with the mark that they have to be looked up before use. */
export function ProtectionTables({ units }: { units: UnitSystem }) {
  return (
    <>
      <p className="notice caution">
        <strong>Open the source before use.</strong> The rates here are recalled, not re-read: {RATE_SOURCE}. They hold up to{' '}
        {figureWithUnit(RATE_MOST_WIND, 'speed', units)} of wind. A rate too low for the wind cools the plant instead of warming it.
      </p>
      <RateTable caption="Rate by lowest air temperature" rows={RATE_ROWS} temperatures={RATE_TEMPERATURES} units={units} />
      <p className="small muted">
        Water that freezes gives off heat: {sprinkling(1, 'mm_h', units)} {sprinklingUnit('mm_h', units)} gives{' '}
        {plain(heatOfFreezing(1), 1)} W m⁻². It evaporates too, at seven and a half times the heat, so sprinkling starts and stops by the
        wet bulb, and runs until the ice has melted by itself.
      </p>
      <FiguresBelow summary="Grapevine leaves, and rates by wind">
        <RateTable
          caption="Grapevine leaves, rate by lowest air temperature (Schultz & Lider, recalled)"
          rows={VINE_RATES.map(({ wind, rotation, rates }) => ({
            name: `${windOf(wind, units)} of wind, turning once in ${rotation} s`,
            rates,
          }))}
          temperatures={VINE_TEMPERATURES}
          units={units}
        />
        <WindTable units={units} />
      </FiguresBelow>
      <FiguresBelow summary="Critical temperatures by crop and stage">
        <CriticalTable units={units} />
      </FiguresBelow>
    </>
  );
}

function windOf(metresPerSecond: string, units: UnitSystem): string {
  if (units === 'metric') return `${metresPerSecond} m/s`;
  return `${metresPerSecond
    .split('–')
    .map((speed) => plain(Number(speed) / METRES_PER_SECOND_PER_MPH, 1))
    .join('–')} mph`;
}

function RateTable({
  caption,
  rows,
  temperatures,
  units,
}: {
  caption: string;
  rows: readonly RateRow[];
  temperatures: readonly number[];
  units: UnitSystem;
}) {
  return (
    <DataTable
      caption={caption}
      showCaption
      unitsBelow
      rows={rows}
      rowKey={(row) => row.name}
      columns={[
        { key: 'name', head: 'Sprinkler', rowHead: true, cell: (row) => row.name },
        ...temperatures.map((limit, at) => ({
          key: String(limit),
          head: `${temperature(limit, units)} ${degree(units)}`,
          unit: sprinklingUnit('mm_h', units),
          numeric: true,
          cell: (row: RateRow) => sprinkling(row.rates[at], 'mm_h', units),
        })),
      ]}
    />
  );
}

function WindTable({ units }: { units: UnitSystem }) {
  const winds = ['0–1', '2–4', '5–8'];
  return (
    <DataTable
      caption="Rate by temperature of a dry leaf and wind (Gerber & Martsolf, recalled)"
      showCaption
      unitsBelow
      rows={WIND_RATES_PRINTED}
      rowKey={(row) => String(row.fahrenheit)}
      columns={[
        {
          ...{ key: 'leaf', head: 'Dry leaf', unit: degree(units), rowHead: true },
          cell: (row) => temperature(celsiusFromFahrenheit(row.fahrenheit), units),
        },
        ...winds.map((wind, at) => ({
          key: wind,
          head: `Wind ${wind} mph`,
          unit: sprinklingUnit('mm_h', units),
          numeric: true,
          cell: (row: (typeof WIND_RATES_PRINTED)[number]) => sprinkling(row.rates[at] * MILLIMETRES_PER_INCH, 'mm_h', units),
        })),
      ]}
    />
  );
}

function CriticalTable({ units }: { units: UnitSystem }) {
  const { items } = answerCriticalTemperatures();
  return (
    <>
      <DataTable
        caption="Critical temperatures of fruit buds, 30 minutes of exposure"
        showCaption
        unitsBelow
        rows={items}
        rowKey={(row) => `${row.table}/${row.stage}`}
        columns={[
          { key: 'table', head: 'Fruit', cell: (row) => row.table_name },
          { key: 'stage', head: 'Stage', rowHead: true, cell: (row) => row.stage_name },
          { key: 'tenth', head: '10 % killed', unit: degree(units), numeric: true, cell: (row) => temperature(row.critical_10_c, units) },
          { key: 'most', head: '90 % killed', unit: degree(units), numeric: true, cell: (row) => temperature(row.critical_90_c, units) },
          {
            ...{ key: 'printed', head: 'As printed', unit: '°F', numeric: true },
            cell: (row) => `${row.printed_10_fahrenheit} / ${row.printed_90_fahrenheit}`,
          },
          { key: 'begins', head: 'Begins at about', unit: '°C d', numeric: true, cell: (row) => plain(row.begins_thermal_time_c_d, 0) },
        ]}
      />
      <p className="source">{items[0].source}. Variety, vigour and hardening move them by a degree or two.</p>
      <p className="source">Stage: {items[0].stage_source}.</p>
    </>
  );
}
