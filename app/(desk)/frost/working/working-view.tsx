import type { FrostWorkingAnswer } from '../../../../lib/http/contract/frost.ts';
import { longDate } from '../../../_components/date-words.ts';
import { Cautions } from '../../../_components/empty-state.tsx';
import { PageHead } from '../../../_components/page-head.tsx';
import { hrefWith, type Query } from '../../../_components/query.ts';
import { StepGroups } from '../../../_components/working-steps.tsx';
import { riskOf } from '../frost-words.ts';
import { FROST_PATH } from '../load-frost.ts';

/** The derivation of one planting's frost night, as a page of a handbook. */
export function FrostWorkingView({ working, query }: { working: FrostWorkingAnswer; query: Query }) {
  const { row } = working;
  const risk = row.risk ? riskOf(row.risk) : null;
  return (
    <div className="page">
      <PageHead
        title={`Frost night of parcel ${working.parcel}, ${longDate(working.date)}`}
        lead={`${row.crop_name}${row.stage_name ? `, ${row.stage_name.toLowerCase()}` : ''}. ${risk ? `Risk: ${risk.name.toLowerCase()}, ${risk.says}.` : 'No risk can be told: the buds are dormant or the stage is not known.'} Units are those of the published equations.`}
        crumbs={[[hrefWith(FROST_PATH, query, { parcel: null, planting: null }), 'Frost nights']]}
      />
      <Cautions which={['frost']}>
        An estimate, no warning service. Every table marked “recalled” has to be looked up before it is acted upon.
      </Cautions>
      <StepGroups steps={working.steps} />
    </div>
  );
}
