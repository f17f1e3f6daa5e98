import type { Metadata } from 'next';
import { environment } from '../../../lib/access/environment.ts';
import { answerImports } from '../../../lib/http/answers/import.ts';
import { answerSites } from '../../../lib/http/answers/weather.ts';
import { EmptyState } from '../../_components/empty-state.tsx';
import { Go } from '../../_components/go.tsx';
import { ImportForm } from '../../_components/import-form.tsx';
import { ImportList } from '../../_components/import-list.tsx';
import { callerInView, districtInView } from '../../_components/in-view.ts';
import { PageHead, Section } from '../../_components/page-head.tsx';
import type { PageProps } from '../../_components/page-props.ts';
import { one } from '../../_components/query.ts';

export const metadata: Metadata = { title: 'Imports' };

export default async function ImportsPage({ searchParams }: PageProps) {
  const [caller, district, query] = await Promise.all([callerInView(), districtInView(), searchParams]);
  if (caller.parcels !== null) {
    return (
      <div className="page narrow">
        <PageHead title="Imports" />
        <p className="notice">Imports show the land of the whole district. Growers may not see them.</p>
      </div>
    );
  }
  const [imports, sites] = await Promise.all([answerImports(caller), answerSites(caller)]);
  return (
    <div className="page">
      <PageHead
        title="Imports"
        lead="Bring in files, see what was understood and every row at fault, then apply all of it or none. An applied import can be undone."
      />
      {caller.scope === 'read' ? (
        <p className="notice">Your role may look at imports, not make them.</p>
      ) : (
        <Section title="New import">
          {district.seasons.length === 0 ? <NoSeason /> : null}
          <ImportForm
            key={one(query, 'kind')}
            wanted={one(query, 'kind')}
            seasons={district.seasons}
            sources={[...new Set(sites.map((site) => site.source))]}
            limitMegabytes={environment().TILLWATER_UPLOAD_LIMIT_MB}
          />
        </Section>
      )}
      <Section title="Past imports">
        {imports.length > 0 ? (
          <ImportList imports={imports} timeZone={caller.district.timeZone} />
        ) : (
          <EmptyState title="Nothing has been imported yet">
            <p>
              A new district needs weather stations, daily weather, canals, parcels and plantings, in that order. Each kind above has a
              template.
            </p>
          </EmptyState>
        )}
      </Section>
    </div>
  );
}

/** Plantings belong to a season, so one must be there before they are read. */
function NoSeason() {
  return (
    <p className="notice caution">
      The district has no season yet: <Go href="/settings#seasons">add a season first</Go>. Plantings, and parcels that bring their crop,
      belong to one.
    </p>
  );
}
