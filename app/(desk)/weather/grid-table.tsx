import type { WeatherSourceAnswer } from '../../../lib/http/contract/weather.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../../lib/weather/variable.ts';
import { DataTable } from '../../_components/data-table.tsx';
import { plain } from '../../_components/figures.ts';
import { Section } from '../../_components/page-head.tsx';

/** Sources whose sites are the cells of a grid: what each covers. */
export function GridTable({ grids }: { grids: readonly WeatherSourceAnswer[] }) {
  return (
    <Section
      id="grids"
      title={grids.length === 1 ? '1 grid' : `${grids.length} grids`}
      note="Cells around the district. A run names the grid it takes; its values are held within the limits of each variable, and not checked further."
    >
      <DataTable
        caption="Weather grids"
        rows={grids}
        rowKey={(grid) => grid.name}
        columns={[
          { key: 'name', head: 'Grid', rowHead: true, cell: (grid) => grid.name },
          { key: 'cells', head: 'Cells', numeric: true, cell: (grid) => plain(grid.sites, 0) },
          { key: 'first', head: 'First month', oneLine: true, cell: (grid) => grid.first_month?.slice(0, 7) ?? '–' },
          { key: 'last', head: 'Last month', oneLine: true, cell: (grid) => grid.last_month?.slice(0, 7) ?? '–' },
          {
            key: 'variables',
            head: 'Brings',
            wide: true,
            cell: (grid) =>
              grid.variables.map((name) => WEATHER_VARIABLES[name as WeatherVariable]?.term ?? name).join(', ') || 'nothing yet',
          },
        ]}
      />
    </Section>
  );
}
