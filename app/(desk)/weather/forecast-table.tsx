import type { WeatherSourceAnswer } from '../../../lib/http/contract/weather.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../../lib/weather/variable.ts';
import { DataTable } from '../../_components/data-table.tsx';
import { plain } from '../../_components/figures.ts';
import { Section } from '../../_components/page-head.tsx';

/** Sources of days to come: what each brings. */
export function ForecastTable({ forecasts }: { forecasts: readonly WeatherSourceAnswer[] }) {
  return (
    <Section
      id="forecasts"
      title={forecasts.length === 1 ? '1 forecast' : `${forecasts.length} forecasts`}
      note="Days to come, newest issue over older. A forecast never stands in for a measured day, and enters no normal, check or variogram: a run takes it for the days past the last observation only."
    >
      <DataTable
        caption="Forecasts"
        rows={forecasts}
        rowKey={(source) => source.name}
        columns={[
          { key: 'name', head: 'Forecast', rowHead: true, cell: (source) => source.name },
          { key: 'kind', head: 'Of', cell: (source) => (source.kind === 'grid' ? 'grid cells' : 'stations') },
          { key: 'sites', head: 'Sites', numeric: true, cell: (source) => plain(source.sites, 0) },
          { key: 'issued', head: 'Last brought in', oneLine: true, cell: (source) => source.issued ?? '–' },
          { key: 'last', head: 'Last month', oneLine: true, cell: (source) => source.last_month?.slice(0, 7) ?? '–' },
          {
            key: 'variables',
            head: 'Brings',
            wide: true,
            cell: (source) =>
              source.variables.map((name) => WEATHER_VARIABLES[name as WeatherVariable]?.term ?? name).join(', ') || 'nothing yet',
          },
        ]}
      />
    </Section>
  );
}
