import type { DistrictAnswer } from '../../../lib/http/contract/rest.ts';
import { EmptyState } from '../../_components/empty-state.tsx';
import { Go } from '../../_components/go.tsx';
import { Section } from '../../_components/page-head.tsx';
import { type Named, RunForm } from '../../_components/run-form.tsx';

export interface StartRunProps {
  readonly district: DistrictAnswer;
  readonly soils: readonly Readonly<Record<string, unknown>>[];
  readonly methods: readonly Readonly<Record<string, unknown>>[];
  readonly sources: readonly string[];
  /** names of the forecasts */
  readonly forecasts: readonly string[];
  readonly allowed: boolean;
}

/** The form that starts a run, or what is missing before one can start. */
export function StartRun({ district, soils, methods, sources, forecasts, allowed }: StartRunProps) {
  if (!allowed) return <p className="muted">Operators and managers start runs.</p>;
  const { parcels, sites } = district.counts;
  if (district.seasons.length === 0 || parcels === 0 || sites === 0) {
    const missing: [string, string][] = [
      ...(district.seasons.length === 0 ? [['/settings#seasons', 'add a season'] as [string, string]] : []),
      ...(sites === 0 ? [['/imports?kind=stations', 'bring weather stations and their weather'] as [string, string]] : []),
      ...(parcels === 0 ? [['/imports?kind=parcels', 'bring parcels'] as [string, string]] : []),
    ];
    return (
      <EmptyState title="A run cannot start yet">
        <ol>
          {missing.map(([href, name]) => (
            <li key={href}>
              First <Go href={href}>{name}</Go>.
            </li>
          ))}
        </ol>
      </EmptyState>
    );
  }
  return (
    <Section id="start" title="Start a run" note="Settings left as they are take the usual values.">
      <RunForm
        seasons={district.seasons.map((season) => ({
          code: season.code,
          name: `${season.name || season.code}, ${season.start_date} to ${season.end_date}`,
        }))}
        soils={soils.map(named)}
        methods={methods.map(named)}
        sources={sources}
        forecasts={forecasts}
      />
    </Section>
  );
}

function named(row: Readonly<Record<string, unknown>>): Named {
  return { code: String(row.code), name: String(row.name ?? row.code) };
}
