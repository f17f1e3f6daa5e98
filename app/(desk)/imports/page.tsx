import type { Metadata } from 'next';
import { environment } from '../../../lib/access/environment.ts';
import { answerImports } from '../../../lib/http/answers/import.ts';
import { answerSites } from '../../../lib/http/answers/weather.ts';
import { EmptyState } from '../../_components/empty-state.tsx';
import { ImportForm } from '../../_components/import-form.tsx';
import { ImportList } from '../../_components/import-list.tsx';
import { callerInView, districtInView } from '../../_components/in-view.ts';
import { PageHead, Section } from '../../_components/page-head.tsx';

export const metadata: Metadata = { title: 'Imports' };

export default async function ImportsPage() {
  const [caller, district] = await Promise.all([callerInView(), districtInView()]);
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
          <ImportForm
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
              A new district needs canals, parcels, weather stations, daily weather and plantings, in that order. Each kind above has a
              template.
            </p>
          </EmptyState>
        )}
      </Section>
    </div>
  );
}
