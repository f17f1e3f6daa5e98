'use client';

import type { MapPreview, TablePreview, Understood } from '../../lib/files/reading.ts';
import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import { moment } from './date-words.ts';
import { ImportActions } from './import-actions.tsx';
import { ImportChanges } from './import-changes.tsx';
import { ReadingChoices } from './import-choices.tsx';
import { type CropChoice, CropTable } from './import-crops.tsx';
import { FindingTable } from './import-findings.tsx';
import { kindName } from './import-kinds.ts';
import { ImportLineage } from './import-lineage.tsx';
import { StateTag } from './import-list.tsx';
import { ColumnPlanTable } from './import-plan.tsx';
import { PreviewPart } from './import-preview.tsx';
import type { RoleChoice } from './import-roles.ts';
import { SoilTable } from './import-soils.tsx';
import { UnderstoodFacts } from './import-understood.tsx';
import { countWords, isWorking, sizeWords } from './import-words.ts';
import { PageHead, Section } from './page-head.tsx';
import { useImport } from './use-import.ts';

interface ImportViewProps {
  readonly first: ImportAnswer;
  readonly roles: readonly RoleChoice[];
  readonly crops: readonly CropChoice[];
  readonly mayWrite: boolean;
  readonly timeZone: string;
}

/** One import from upload to undo: how far it is, what was understood, what is at fault, and what can be done now. */
export function ImportView(props: ImportViewProps) {
  const { now, act, patch, fault, busy } = useImport(props.first);
  const understood = now.understood as (Understood & Record<string, unknown>) | null;
  const mayChange = props.mayWrite && (now.state === 'ready' || now.state === 'failed');
  const shown = understood !== null && now.state !== 'reading';
  return (
    <div className="page">
      <PageHead
        title={`${kindName(now.kind)}: ${now.files[0]?.name ?? 'no file'}`}
        crumbs={[['/imports', 'Imports']]}
        lead={now.files.map((file) => `${file.name} (${sizeWords(file.size_bytes)})`).join(', ')}
      >
        <StateTag state={now.state} />
        {props.mayWrite ? <ImportActions now={now} mayApply={!nothingUsable(now)} act={act} reread={() => patch({})} busy={busy} /> : null}
      </PageHead>
      <Progress now={now} />
      {now.error ? (
        <p className="notice bad" role="alert">
          {now.error}
        </p>
      ) : null}
      {fault ? (
        <p className="notice bad" role="alert">
          {fault}
        </p>
      ) : null}
      {nothingUsable(now) ? (
        <p className="notice caution">
          Nothing in these files can be applied as they were understood. The findings say why; correct the columns below, or the file.
        </p>
      ) : null}
      <ImportChanges now={now} when={{ applied: moment(now.applied_at, props.timeZone), undone: moment(now.undone_at, props.timeZone) }} />
      {shown ? (
        <>
          <UnderstoodFacts understood={understood} options={now.options} />
          {mayChange ? <ReadingChoices key={`choices ${JSON.stringify(now.options)}`} now={now} patch={patch} busy={busy} /> : null}
          <Section title={`Findings: ${countWords(now.finding_counts)}`} id="findings">
            <FindingTable findings={now.findings} counts={now.finding_counts} id={now.id} />
          </Section>
          {understood.lineage ? <ImportLineage lineage={understood.lineage} /> : null}
          {understood.columns?.length ? (
            <ColumnPlanTable
              key={`plan ${now.options.plan ? JSON.stringify(now.options.plan) : ''}`}
              now={now}
              roles={props.roles}
              mayChange={mayChange}
              patch={patch}
              busy={busy}
            />
          ) : null}
          {understood.crops?.length ? (
            <CropTable
              key={`crops ${JSON.stringify(now.options.cropMappings ?? {})}`}
              now={now}
              crops={props.crops}
              mayChange={mayChange}
              patch={patch}
              busy={busy}
            />
          ) : null}
          {understood.soilClasses?.length ? (
            <SoilTable
              key={`soils ${JSON.stringify(now.options.soilMappings ?? {})}`}
              now={now}
              classes={understood.soilClasses}
              mayChange={mayChange}
              patch={patch}
              busy={busy}
            />
          ) : null}
          <PreviewPart preview={(now.preview ?? null) as TablePreview | MapPreview | null} />
        </>
      ) : null}
    </div>
  );
}

/** Read, but no row of it is usable. */
function nothingUsable(now: ImportAnswer): boolean {
  return now.state === 'ready' && (now.understood as { usableRows?: number } | null)?.usableRows === 0;
}

const WORKING: Readonly<Record<string, string>> = { reading: 'Reading the files', applying: 'Applying', undoing: 'Putting back' };

function Progress({ now }: { now: ImportAnswer }) {
  const working = isWorking(now.state);
  const percent = Math.round(now.progress * 100);
  return (
    <div className="stack" aria-live="polite">
      {working ? (
        <>
          <p>
            {WORKING[now.state]}: {percent} %
          </p>
          <progress value={now.progress} max={1} aria-label={WORKING[now.state]} />
        </>
      ) : null}
    </div>
  );
}
