import type { Metadata } from 'next';
import { answerSites, answerSources } from '../../../lib/http/answers/weather.ts';
import { callerInView, runInView } from '../../_components/in-view.ts';
import { PageHead } from '../../_components/page-head.tsx';
import { WeatherNav } from '../../_components/weather-nav.tsx';
import { ForecastTable } from './forecast-table.tsx';
import { GridTable } from './grid-table.tsx';
import { loadSiteSeries } from './load-site-series.ts';
import { SiteTable } from './site-table.tsx';

export const metadata: Metadata = { title: 'Weather' };

export default async function WeatherPage() {
  const [caller, run] = await Promise.all([callerInView(), runInView()]);
  const [sites, sources] = await Promise.all([answerSites(caller), answerSources(caller)]);
  const forecasts = sources.filter(({ role }) => role === 'forecast');
  const grids = sources.filter(({ kind, role }) => kind === 'grid' && role === 'observed');
  const series = await loadSiteSeries(caller, sites, run);
  return (
    <div className="page">
      <PageHead
        title="Weather"
        lead="Every site the district’s weather comes from, how complete its record is, and the reference ET that follows from it."
      />
      <WeatherNav here="/weather" />
      {sites.length > 0 || grids.length === 0 ? (
        <SiteTable sites={sites} series={series} season={run?.season ?? null} units={caller.units} />
      ) : null}
      {grids.length > 0 ? <GridTable grids={grids} /> : null}
      {forecasts.length > 0 ? <ForecastTable forecasts={forecasts} /> : null}
    </div>
  );
}
