import type { UnitSystem } from '../../../../../lib/base/units.ts';
import type { CarriedVariableAnswer, InterpolationAnswer } from '../../../../../lib/http/contract/interpolation.ts';
import { DataTable } from '../../../../_components/data-table.tsx';
import { figure, type Maybe, plain, unitOf } from '../../../../_components/figures.ts';
import { Go } from '../../../../_components/go.tsx';
import { type ErrorUnit, inSentence } from './error-units.ts';

interface SiteErrorTableProps {
  readonly check: InterpolationAnswer;
  readonly shown: CarriedVariableAnswer;
  readonly unit: ErrorUnit;
  readonly units: UnitSystem;
}

/** The figures of the map, station by station. */
export function SiteErrorTable({ check, shown, unit, units }: SiteErrorTableProps) {
  const sites = new Map(check.sites.map((site) => [site.code, site]));
  const error = (value: Maybe) => plain(value === null || value === undefined ? value : value * unit.factor, unit.decimals);
  return (
    <DataTable
      caption={`Errors of ${inSentence(shown.term)} by station`}
      rows={shown.site_errors}
      rowKey={(row) => row.site}
      columns={[
        {
          key: 'site',
          head: 'Station',
          rowHead: true,
          oneLine: true,
          cell: (row) => <Go href={`/weather/${encodeURIComponent(row.site)}`}>{row.site}</Go>,
        },
        { key: 'name', head: 'Name', cell: (row) => sites.get(row.site)?.name },
        {
          key: 'elevation',
          head: 'Elevation',
          unit: unitOf('elevation', units),
          numeric: true,
          cell: (row) => figure(sites.get(row.site)?.elevation_m, 'elevation', units),
        },
        { key: 'bias', head: 'Bias', unit: unit.unit, numeric: true, cell: (row) => error(row.bias) },
        { key: 'rmse', head: 'RMSE', unit: unit.unit, numeric: true, cell: (row) => error(row.rmse) },
        { key: 'n', head: 'Values', numeric: true, cell: (row) => plain(row.n, 0) },
      ]}
    />
  );
}
