import type { Metadata } from 'next';
import Link from 'next/link';
import { answerSites } from '../../lib/http/answers/weather.ts';
import { callerInView, districtInView, runInView } from '../_components/in-view.ts';
import { DemandMapLoader } from '../_components/map/demand-map-loader.tsx';

export const metadata: Metadata = { title: 'Demand map' };

/** Home: the demand map of the season in view, or what to bring until there is one. */
export default async function DemandMapPage() {
  const [caller, run] = await Promise.all([callerInView(), runInView()]);
  if (!run || run.parcel_count === 0) return <NothingYet />;
  return <DemandMapLoader run={run.id} units={caller.units} />;
}

/** What the district has, what is still to bring, in the order that works. */
async function NothingYet() {
  const [{ counts, seasons }, sites] = await Promise.all([districtInView(), callerInView().then(answerSites)]);
  const withWeather = sites.filter((site) => site.day_count > 0).length;
  const steps = [
    { name: 'Weather stations', what: 'where each one stands: code, latitude, longitude, elevation', have: counts.sites },
    { name: 'Weather', what: 'daily or hourly records of those stations', have: withWeather },
    { name: 'Canals', what: 'lines with their code, the canal that feeds them, and capacity', have: counts.reaches },
    { name: 'Parcels', what: 'outlines with their code and turnout or canal', have: counts.parcels },
    { name: 'Plantings', what: 'which crop stands on which parcel, from when', have: counts.plantings },
  ];
  return (
    <div className="page narrow">
      <div className="page-head">
        <h1>No demand map yet</h1>
        <p className="lede">
          The map shows what every parcel needs once a season has been computed. Bring these in, in this order, then start a run.
        </p>
      </div>
      <ol className="stack">
        {steps.map((step) => (
          <li key={step.name}>
            <Link href="/imports">{step.name}</Link>: {step.what}.{' '}
            {step.have > 0 ? <span className="tag good">there</span> : <span className="tag">still to bring</span>}
          </li>
        ))}
        <li>
          <Link href="/runs">Run the season</Link>
          {seasons.length === 0
            ? ': plantings bring the season with them, or Settings makes one.'
            : ': the figures appear here when it is done.'}
        </li>
      </ol>
    </div>
  );
}
