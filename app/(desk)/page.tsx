import type { Metadata } from 'next';
import { answerRuns } from '../../lib/http/answers/run.ts';
import { answerSites } from '../../lib/http/answers/weather.ts';
import { GettingStarted } from '../_components/getting-started.tsx';
import { callerInView, districtInView, runInView } from '../_components/in-view.ts';
import { DemandMapLoader } from '../_components/map/demand-map-loader.tsx';

export const metadata: Metadata = { title: 'Demand map' };

/** Home: the demand map of the season in view, or what to bring until there is one. */
export default async function DemandMapPage() {
  const [caller, run] = await Promise.all([callerInView(), runInView()]);
  if (!run || run.parcel_count === 0) return <NothingYet />;
  return <DemandMapLoader run={run.id} units={caller.units} />;
}

async function NothingYet() {
  const caller = await callerInView();
  const [district, sites, runs] = await Promise.all([districtInView(), answerSites(caller), answerRuns(caller)]);
  return (
    <GettingStarted
      district={district}
      sitesWithWeather={sites.filter((site) => site.day_count > 0).length}
      runs={runs}
      mayChange={caller.scope !== 'read'}
    />
  );
}
