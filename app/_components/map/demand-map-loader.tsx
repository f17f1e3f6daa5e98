'use client';

import dynamic from 'next/dynamic';
import { useEffect } from 'react';
import type { UnitSystem } from '../../../lib/base/units.ts';
import type { MapDescription } from '../../../lib/http/contract/run.ts';
import { useAnswer } from './use-map-data.ts';

const load = () => import('./demand-map.tsx').then((module) => module.DemandMap);
const DemandMap = dynamic(load, { ssr: false, loading: () => <Drawing /> });

function Drawing() {
  return (
    <p className="page muted" role="status">
      Drawing the map …
    </p>
  );
}

/** The map draws in the browser only; what it offers is fetched while its code is on the way. */
export function DemandMapLoader({ run, units }: { run: string; units: UnitSystem }) {
  const { data, fault } = useAnswer<MapDescription>(`/api/v1/runs/${run}/map`);
  useEffect(() => void load(), []);
  if (fault) {
    return (
      <p className="notice bad" role="alert">
        {fault}
      </p>
    );
  }
  if (!data) return <Drawing />;
  return <DemandMap key={run} description={data} units={units} />;
}
