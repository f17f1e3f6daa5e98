import type { UnitSystem } from '../../../lib/base/units.ts';
import type { FrostRow } from '../../../lib/http/contract/frost.ts';
import { DataTable } from '../../_components/data-table.tsx';
import { figure, plain, unitOf } from '../../_components/figures.ts';
import { Go } from '../../_components/go.tsx';
import { hrefWith, type Query } from '../../_components/query.ts';
import { degree, riskOf, STAGE_FROM, sprinkling, sprinklingUnit, temperature } from './frost-words.ts';

interface RiskTableProps {
  readonly rows: readonly FrostRow[];
  readonly date: string;
  readonly query: Query;
  readonly units: UnitSystem;
}

/** Plantings at risk, the worst first, with the water that sprinkling would take. */
export function RiskTable({ rows, date, query, units }: RiskTableProps) {
  const degrees = (key: string, head: string, pick: (row: FrostRow) => number | null) => ({
    ...{ key, head, unit: degree(units), numeric: true },
    cell: (row: FrostRow) => temperature(pick(row), units),
  });
  return (
    <DataTable
      caption="Plantings at risk"
      unitsBelow
      rows={rows}
      rowKey={(row) => `${row.parcel}/${row.planting}`}
      columns={[
        {
          key: 'parcel',
          head: 'Parcel',
          rowHead: true,
          oneLine: true,
          cell: (row) => (
            <Go
              href={hrefWith('/frost/working', query, { date, parcel: row.parcel, planting: String(row.planting) })}
              aria-label={`Working of parcel ${row.parcel}`}
            >
              {row.parcel}
            </Go>
          ),
        },
        { key: 'crop', head: 'Crop', wide: true, cell: (row) => row.crop_name },
        {
          key: 'risk',
          head: 'Risk',
          cell: (row) => {
            if (row.risk === null) return null;
            const { name, tone } = riskOf(row.risk);
            return <span className={tone ? `tag ${tone}` : 'tag'}>{name}</span>;
          },
        },
        { key: 'stage', head: 'Stage', wide: true, cell: (row) => `${row.stage_name}, ${STAGE_FROM[row.stage_from]}` },
        degrees('air', 'Air, lowest', (row) => row.minimum_c),
        degrees('leaf', 'Bud or leaf', (row) => row.leaf_minimum_c),
        degrees('low', 'Its low end', (row) => row.leaf_minimum_low_c),
        degrees('tenth', '10 % killed at', (row) => row.critical_10_c),
        degrees('most', '90 % killed at', (row) => row.critical_90_c),
        { key: 'area', head: 'Area', unit: unitOf('area', units), numeric: true, cell: (row) => figure(row.area_ha, 'area', units) },
        degrees('start', 'Start sprinkling at', (row) => row.start_air_temperature_c),
        {
          ...{ key: 'rate', head: 'Rate', unit: sprinklingUnit('mm_h', units), numeric: true },
          cell: (row) => (row.sprinkling_rate_mm_h === null ? 'beyond table' : sprinkling(row.sprinkling_rate_mm_h, 'mm_h', units)),
        },
        {
          ...{ key: 'flow', head: 'Flow', unit: sprinklingUnit('l_s', units), numeric: true },
          cell: (row) => sprinkling(row.sprinkling_flow_l_s, 'l_s', units),
        },
        {
          ...{ key: 'flowHour', head: 'Flow', unit: sprinklingUnit('m3_h', units), numeric: true },
          cell: (row) => sprinkling(row.sprinkling_flow_m3_h, 'm3_h', units),
        },
        { key: 'hours', head: 'Time', unit: 'h', numeric: true, cell: (row) => plain(row.sprinkling_hours_h, 1) },
        {
          ...{ key: 'volume', head: 'Water', unit: unitOf('volume', units), numeric: true },
          cell: (row) => figure(row.sprinkling_volume_m3, 'volume', units),
        },
      ]}
    />
  );
}
