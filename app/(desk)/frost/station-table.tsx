import type { UnitSystem } from '../../../lib/base/units.ts';
import type { FrostAnswer, FrostStationAnswer } from '../../../lib/http/contract/frost.ts';
import { type Column, DataTable, FiguresBelow } from '../../_components/data-table.tsx';
import { figure, percent, plain, unitOf } from '../../_components/figures.ts';
import { degree, difference, EVENING_FROM, METHODS, temperature } from './frost-words.ts';

type Row = FrostStationAnswer;

/** Evening and expected minimum at every station; behind it both methods with their errors on past nights. */
export function StationTable({ night, units }: { night: FrostAnswer; units: UnitSystem }) {
  const name: Column<Row> = { key: 'site', head: 'Station', rowHead: true, cell: (row) => row.name || row.site };
  const degrees = (key: string, head: string, pick: (row: Row) => number | null): Column<Row> => ({
    ...{ key, head, unit: degree(units), numeric: true },
    cell: (row) => temperature(pick(row), units),
  });
  const spans = (key: string, head: string, pick: (row: Row) => number | null): Column<Row> => ({
    ...{ key, head, unit: degree(units), numeric: true },
    cell: (row) => difference(pick(row), units),
  });
  const estimated = [...new Set(night.stations.flatMap((row) => row.estimated))];
  return (
    <>
      <DataTable
        caption="Evening and minimum at the stations"
        unitsBelow
        rows={night.stations}
        rowKey={(row) => row.site}
        columns={[
          name,
          { key: 'from', head: 'Evening', cell: (row) => EVENING_FROM[row.evening_from] },
          { key: 'sunset', head: 'Sunset', unit: 'h, standard time', numeric: true, cell: (row) => row.sunset },
          degrees('t0', 'Air at sunset', (row) => row.air_temperature_c),
          degrees('td', 'Dew point', (row) => row.dew_point_c),
          {
            key: 'u',
            head: 'Wind',
            unit: unitOf('speed', units),
            numeric: true,
            cell: (row) => figure(row.wind_speed_2m_m_s, 'speed', units),
          },
          { key: 'cloud', head: 'Cloud', numeric: true, cell: (row) => percent(row.cloud_share) },
          { key: 'rn', head: 'Net radiation', unit: 'W m⁻²', numeric: true, cell: (row) => plain(row.net_radiation_w_m2, 0) },
          degrees('min', 'Minimum expected', (row) => row.minimum_c),
          degrees('low', 'Low end', (row) => row.minimum_low_c),
          degrees('high', 'High end', (row) => row.minimum_high_c),
          degrees('observed', 'Measured', (row) => row.observed_minimum_c),
          degrees('start', 'Start sprinkling at', (row) => row.start_air_temperature_c),
        ]}
      />
      {estimated.length > 0 ? <p className="small muted">Estimated: {estimated.join('; ')}.</p> : null}
      <FiguresBelow summary="Both methods, and how far off they were on past nights of the same kind">
        <DataTable
          caption="Minimum by method with errors"
          unitsBelow
          rows={night.stations}
          rowKey={(row) => row.site}
          columns={[
            name,
            { key: 'kind', head: 'Night', cell: (row) => (row.night_kind === 'clear-calm' ? 'clear, calm' : 'cloudy or windy') },
            { key: 'method', head: 'Taken', cell: (row) => METHODS[row.method] },
            degrees('brunt', 'Square-root law', (row) => row.square_root_minimum_c),
            spans('bias', 'Its bias', (row) => row.square_root_bias_k),
            spans('rmse', 'Its RMSE', (row) => row.square_root_rmse_k),
            { key: 'n', head: 'Nights', numeric: true, cell: (row) => plain(row.square_root_nights, 0) },
            degrees('line', 'Own line', (row) => row.regression_minimum_c),
            spans('lineRmse', 'Its RMSE', (row) => row.regression?.rmse_k ?? null),
            { key: 'a', head: 'a, of air', numeric: true, cell: (row) => plain(row.regression?.air_temperature_factor, 3) },
            { key: 'b', head: 'b, of dew point', numeric: true, cell: (row) => plain(row.regression?.dew_point_factor, 3) },
            { key: 'c', head: 'c', unit: '°C', numeric: true, cell: (row) => plain(row.regression?.constant, 2) },
            { key: 'errorFrom', head: 'Band from', cell: (row) => (row.error_from === 'record' ? 'past nights' : 'assumed: short record') },
          ]}
        />
        <p className="small muted">
          The station’s own line is Tmin = a T0 + b Td + c in °C, fitted to its nights of the same kind (clear and calm, or not) within 45
          days of the date, the night itself left out; RMSE by leaving each night out in turn. The square-root law draws the whole loss from
          the ground.
        </p>
      </FiguresBelow>
    </>
  );
}
