import type { Metadata } from 'next';
import { Cautions, EmptyState } from '../../_components/empty-state.tsx';
import { Go } from '../../_components/go.tsx';
import { callerInView, districtInView } from '../../_components/in-view.ts';
import { PageHead } from '../../_components/page-head.tsx';
import type { Query } from '../../_components/query.ts';
import { FrostForm } from './frost-form.tsx';
import { FrostView } from './frost-view.tsx';
import { loadFrost } from './load-frost.ts';

export const metadata: Metadata = { title: 'Frost nights' };

export default async function FrostPage({ searchParams }: { searchParams: Promise<Query> }) {
  const [caller, district, query] = await Promise.all([callerInView(), districtInView(), searchParams]);
  const loaded = await loadFrost(caller, query);
  return (
    <div className="page">
      <PageHead
        title="Frost nights"
        lead="How cold a clear, calm night gets at the buds, which plantings that hurts, and the water that sprinkling would take."
      >
        {'night' in loaded && loaded.night.total > 0 ? (
          <a className="button" href={loaded.csv} download>
            CSV of the plantings
          </a>
        ) : null}
      </PageHead>
      <Cautions which={['frost']}>
        An estimate, no warning service. Hollows where cold air gathers can be 2 to 3 °C (4 to 5 °F) colder than the stations: go by
        thermometers at bud height, local advice and local codes. Whether water may be taken for protection is a matter of the water right.
      </Cautions>
      {loaded.asked ? (
        <FrostForm asked={loaded.asked} nights={loaded.nights} query={query} units={caller.units} tables={tablesOf(loaded)} />
      ) : null}
      {'night' in loaded ? (
        <FrostView loaded={loaded} boundary={district.boundary} query={query} units={caller.units} />
      ) : (
        <EmptyState title="This night cannot be computed">
          <p>
            {loaded.refusal} <Go href="/imports">Bring in weather</Go>, or choose another night.
          </p>
        </EmptyState>
      )}
    </div>
  );
}

/** Tables of critical temperatures in use that night. */
function tablesOf(loaded: Awaited<ReturnType<typeof loadFrost>>): string[] {
  if (!('night' in loaded)) return [];
  return [...new Set(loaded.night.items.flatMap(({ critical_table }) => critical_table ?? []))];
}
