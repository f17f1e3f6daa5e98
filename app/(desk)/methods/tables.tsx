import { BORDER_UNITS } from '../../../lib/base/units.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../../lib/weather/variable.ts';
import { type Column, DataTable } from '../../_components/data-table.tsx';
import { MISSING_MARK, percent, significant } from '../../_components/figures.ts';
import { Go } from '../../_components/go.tsx';
import { Section } from '../../_components/page-head.tsx';

type Row = Readonly<Record<string, unknown>>;

/** The tables in use: soils, application methods, units, and the limits of weather values. */
export function Tables({ soils, methods }: { soils: readonly Row[]; methods: readonly Row[] }) {
  return (
    <>
      <Section id="soils" title="Soils">
        <DataTable caption="Soils of the district" rows={soils} rowKey={(row) => String(row.code)} columns={SOIL_COLUMNS} />
      </Section>
      <Section id="application" title="Application methods">
        <DataTable
          caption="Application methods of the district"
          rows={methods}
          rowKey={(row) => String(row.code)}
          columns={METHOD_COLUMNS}
        />
      </Section>
      <Section id="crops" title="Crops">
        <p>
          Coefficients, heights, roots and calendars with the source of every value: <Go href="/crops">the crop library</Go>.
        </p>
      </Section>
      <Units />
      <Limits />
    </>
  );
}

function text(key: string, head: string): Column<Row> {
  return { key, head, cell: (row) => (row[key] === null || row[key] === undefined ? MISSING_MARK : String(row[key])) };
}

function number(key: string, head: string, unit?: string): Column<Row> {
  return { key, head, unit, numeric: true, cell: (row) => significant(row[key] as number | null, 4) };
}

function share(key: string, head: string): Column<Row> {
  return { key, head, numeric: true, cell: (row) => percent(row[key] as number | null) };
}

const SOIL_COLUMNS: readonly Column<Row>[] = [
  { ...text('name', 'Soil'), rowHead: true },
  number('field_capacity_m3_m3', 'Field capacity', 'm³ m⁻³'),
  number('wilting_point_m3_m3', 'Wilting point', 'm³ m⁻³'),
  number('evaporation_depth_m', 'Evaporation depth Ze', 'm'),
  number('readily_evaporable_water_mm', 'REW', 'mm'),
  number('total_evaporable_water_mm', 'TEW', 'mm'),
  number('curve_number', 'Curve number'),
  number('root_limit_m', 'Root limit', 'm'),
  text('source', 'Source'),
];

const METHOD_COLUMNS: readonly Column<Row>[] = [
  { ...text('name', 'Method'), rowHead: true },
  share('efficiency', 'Efficiency'),
  share('wetted_fraction', 'Wetted fraction'),
  { key: 'under_canopy', head: 'Wets under the canopy', cell: (row) => (row.under_canopy ? 'yes' : 'no') },
  number('maximum_daily_depth_mm', 'At most per day, net', 'mm'),
  share('trigger_fraction', 'Starts at this share of RAW'),
  text('source', 'Source'),
];

function Units() {
  return (
    <Section
      id="units"
      title="Units"
      note="Exact conversions: international foot and acre, NIST Special Publication 811 (2008), Appendix B. 1 mm on 1 ha is 10 m³."
    >
      <DataTable
        caption="Units at the border and their United States pairs"
        rows={Object.values(BORDER_UNITS)}
        rowKey={(pair) => pair.metric.suffix}
        columns={[
          { key: 'metric', head: 'Metric', rowHead: true, cell: (pair) => pair.metric.label },
          { key: 'us', head: 'United States', cell: (pair) => pair.us.label },
          {
            key: 'factor',
            head: 'One metric unit is',
            numeric: true,
            cell: (pair) => `${significant(pair.us.fromMetric / pair.metric.fromMetric, 7)} ${pair.us.label}`,
          },
          { key: 'names', head: 'In names', cell: (pair) => <code>{`_${pair.metric.suffix}, _${pair.us.suffix}`}</code> },
        ]}
      />
    </Section>
  );
}

function Limits() {
  return (
    <Section
      id="limits"
      title="Limits of weather values"
      note="A value outside is refused: a wrong unit, a code for missing, or a broken sensor. Wider than accepted surface records (WMO World Weather and Climate Extremes Archive)."
    >
      <DataTable
        caption="Limits of daily weather values"
        rows={Object.keys(WEATHER_VARIABLES) as WeatherVariable[]}
        rowKey={(name) => name}
        columns={[
          { key: 'term', head: 'Quantity', rowHead: true, cell: (name) => WEATHER_VARIABLES[name].term },
          { key: 'low', head: 'Least', numeric: true, cell: (name) => significant(WEATHER_VARIABLES[name].low) },
          { key: 'high', head: 'Greatest', numeric: true, cell: (name) => significant(WEATHER_VARIABLES[name].high) },
          { key: 'unit', head: 'Unit', cell: (name) => WEATHER_VARIABLES[name].unit },
        ]}
      />
    </Section>
  );
}
