import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { RunAnswer } from '../../../../lib/http/contract/run.ts';
import { DataTable, FactList } from '../../../_components/data-table.tsx';
import { dateRange, moment } from '../../../_components/date-words.ts';
import { DistrictBand, type DistrictBandFigures } from '../../../_components/district-band.tsx';
import { EstimatedShare, FallbackShares } from '../../../_components/fallback-words.tsx';
import { plain, significant } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { PageHead, Section } from '../../../_components/page-head.tsx';
import { ReportLinks } from '../../../_components/report-links.tsx';
import { RunProgress } from '../../../_components/run-progress.tsx';
import { isOver, SETTINGS, STATES, settingText } from '../../../_components/run-words.ts';
import { RestedOn } from './rested-on.tsx';

interface RunViewProps {
  readonly run: RunAnswer;
  /** null until the run is done */
  readonly band: DistrictBandFigures | null;
  readonly timeZone: string;
  readonly units: UnitSystem;
  readonly mayCancel: boolean;
}

/** One run: what it was asked, what it rested on, and whether its books close. */
export function RunView({ run, band, timeZone, units, mayCancel }: RunViewProps) {
  return (
    <div className="page">
      <PageHead title={`Run of season ${run.season}`} lead={leadOf(run, timeZone)} crumbs={[['/runs', 'Runs']]}>
        {run.state === 'done' ? (
          <Go className="button" href={`/parcels?run=${run.id}`}>
            Its parcels
          </Go>
        ) : null}
      </PageHead>
      {run.error ? <p className="notice bad">{run.error}</p> : null}
      {run.stale_since ? (
        <p className="notice caution">
          An input has changed since this run was made ({run.stale_reason}, {moment(run.stale_since, timeZone)}): start a run to bring it
          in.
        </p>
      ) : null}
      {isOver(run.state) ? null : (
        <RunProgress id={run.id} season={run.season} state={run.state} stage={run.stage} progress={run.progress} mayCancel={mayCancel} />
      )}
      {run.warnings.length ? (
        <Section id="warnings" title="Warnings">
          <ul>
            {run.warnings.map((warning) => (
              <li key={warning}>{warning}</li>
            ))}
          </ul>
        </Section>
      ) : null}
      {run.state === 'done' ? <Checks run={run} /> : null}
      {band ? <DistrictBand {...band} units={units} /> : null}
      {run.state === 'done' ? (
        <Section id="downloads" title="Downloads">
          <ReportLinks run={run.id} units={units} />
        </Section>
      ) : null}
      <RestedOn run={run} units={units} />
      <Settings run={run} />
      <Manifest manifest={run.manifest} />
    </div>
  );
}

function leadOf(run: RunAnswer, timeZone: string): string {
  const when = run.finished_at ? `finished ${moment(run.finished_at, timeZone)}` : `asked for ${moment(run.created_at, timeZone)}`;
  return `${dateRange(run.start_date, run.end_date)}, ${plain(run.parcel_count, 0)} parcels; ${STATES[run.state]}, ${when}.${run.standing ? ' This run is in use: every screen shows its figures.' : ''}`;
}

function Checks({ run }: { run: RunAnswer }) {
  const { balance } = run;
  return (
    <Section
      id="checks"
      title="Do the books close?"
      note="Rain + irrigation = ET + runoff + percolation + change in the soil, for every parcel and day; inflow at the headworks = deliveries + losses."
    >
      <FactList
        facts={[
          ['Parcel-days', plain(balance.parcel_days, 0)],
          ['Every soil water balance closes to', `${significant(balance.max_residual_mm, 1)} mm`],
          ['The canals’ balance closes to', `${significant(balance.roll_up_relative, 1)} of the flow`],
          ['Time it took', `${plain(balance.seconds, 1)} s`],
        ]}
      />
      <h3>What was estimated in the weather</h3>
      <EstimatedShare share={balance.estimated_share} of="the parcel-days" />
      <FallbackShares shares={balance.fallback_shares ?? {}} of="parcel-days" />
    </Section>
  );
}

function Settings({ run }: { run: RunAnswer }) {
  return (
    <Section id="settings" title="Settings">
      <DataTable
        caption="Settings of this run"
        rows={SETTINGS}
        rowKey={(setting) => setting.key}
        columns={[
          { key: 'name', head: 'Setting', rowHead: true, cell: (setting) => setting.name },
          {
            key: 'value',
            head: 'Value',
            cell: (setting) => settingText(run.settings[setting.key as keyof RunAnswer['settings']], setting.key),
          },
          { key: 'help', head: 'What it does', cell: (setting) => setting.help },
        ]}
      />
    </Section>
  );
}

interface Entry {
  readonly path: string;
  readonly value: string;
}

/** What went in, by name and hash: equal manifests mean equal results. */
function Manifest({ manifest }: { manifest: RunAnswer['manifest'] }) {
  const entries = entriesOf(manifest, '');
  if (entries.length === 0) return null;
  return (
    <Section id="manifest" title="Manifest" note="SHA-256 of every input, and the version of the code. Equal manifests give equal results.">
      <DataTable
        caption="Manifest of the run"
        rows={entries}
        rowKey={(entry) => entry.path}
        columns={[
          { key: 'path', head: 'Input', rowHead: true, cell: (entry) => entry.path },
          { key: 'value', head: 'Value', cell: (entry) => <code>{entry.value}</code> },
        ]}
      />
    </Section>
  );
}

function entriesOf(value: unknown, path: string): Entry[] {
  if (typeof value !== 'object' || value === null) return [{ path, value: String(value) }];
  return Object.entries(value).flatMap(([key, member]) =>
    entriesOf(member, path ? `${path} / ${key.replaceAll('_', ' ')}` : key.replaceAll('_', ' ')),
  );
}
