import type { Metadata } from 'next';
import { answerImport } from '../../../../lib/http/answers/import.ts';
import { answerCrops } from '../../../../lib/http/answers/land.ts';
import { roleChoices } from '../../../_components/import-roles.ts';
import { ImportView } from '../../../_components/import-view.tsx';
import { callerInView } from '../../../_components/in-view.ts';
import { orNotFound } from '../../../_components/or-not-found.ts';
import { PageHead } from '../../../_components/page-head.tsx';
import type { PageProps } from '../../../_components/page-props.ts';

export const metadata: Metadata = { title: 'Import' };

export default async function ImportPage({ params }: PageProps<'id'>) {
  const [caller, { id }] = await Promise.all([callerInView(), params]);
  if (caller.parcels !== null) {
    return (
      <div className="page narrow">
        <PageHead title="Import" crumbs={[['/imports', 'Imports']]} />
        <p className="notice">Imports show the land of the whole district. Growers may not see them.</p>
      </div>
    );
  }
  const [answer, crops] = await Promise.all([orNotFound(answerImport(caller, id)), answerCrops(caller)]);
  return (
    <ImportView
      first={answer}
      roles={roleChoices(answer.kind)}
      crops={crops.map((crop) => ({ code: crop.code, name: crop.name }))}
      mayWrite={caller.scope !== 'read'}
      timeZone={caller.district.timeZone}
    />
  );
}
