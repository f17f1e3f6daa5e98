import type { Metadata } from 'next';
import { EmptyState } from '../../../../_components/empty-state.tsx';
import { Go } from '../../../../_components/go.tsx';
import { callerInView, districtInView, runInView } from '../../../../_components/in-view.ts';
import { PageHead } from '../../../../_components/page-head.tsx';
import type { Query } from '../../../../_components/query.ts';
import { WeatherNav } from '../../../../_components/weather-nav.tsx';
import { InterpolationView } from './interpolation-view.tsx';
import { loadInterpolation } from './load-interpolation.ts';

export const metadata: Metadata = { title: 'Interpolation of weather' };

export default async function InterpolationPage({ searchParams }: { searchParams: Promise<Query> }) {
  const [caller, district, run, query] = await Promise.all([callerInView(), districtInView(), runInView(), searchParams]);
  const loaded = await loadInterpolation(caller, query, run?.season);
  return (
    <div className="page">
      <PageHead
        title="Interpolation"
        lead="How weather between the stations is made, and how far off it is: every station in turn is left out and estimated from the others."
        crumbs={[['/weather', 'Weather']]}
      >
        {'check' in loaded ? (
          <a className="button" href={loaded.csv} download>
            CSV of the figures
          </a>
        ) : null}
      </PageHead>
      <WeatherNav here="/weather/desk/interpolation" />
      {'check' in loaded ? (
        <InterpolationView {...loaded} boundary={district.boundary} query={query} units={caller.units} />
      ) : (
        <EmptyState title="Nothing to compare">
          {loaded.refusal} <Go href="/imports">Bring in weather</Go>, or <Go href="/weather/desk/interpolation">take the usual days</Go>.
        </EmptyState>
      )}
    </div>
  );
}
