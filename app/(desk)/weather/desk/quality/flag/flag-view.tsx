import type { QualitySeries } from '../../../../../../lib/http/answers/quality-series.ts';
import type { CorrectionAnswer, FlagAnswer } from '../../../../../../lib/http/contract/quality.ts';
import { RULES, type Rule } from '../../../../../../lib/weather/quality/rules.ts';
import { FactList } from '../../../../../_components/data-table.tsx';
import { Caution } from '../../../../../_components/empty-state.tsx';
import { significant } from '../../../../../_components/figures.ts';
import { Go } from '../../../../../_components/go.tsx';
import { PageHead, Section } from '../../../../../_components/page-head.tsx';
import { CorrectionForm } from '../correction-form.tsx';
import { CorrectionList } from '../correction-list.tsx';
import { SeverityTag } from '../flag-table.tsx';
import { PATH, STATE_WORDS, termOf } from '../quality-words.ts';
import { SeriesView } from '../series-view.tsx';

/** Rules whose limit is a change or a sum, not a level that can be drawn. */
const NO_LEVEL = new Set(['spike', 'step', 'inhomogeneous']);

/** Figures that are said elsewhere on the page. */
const SAID = new Set(['unit', 'suggested_factor']);

interface FlagViewProps {
  readonly flag: FlagAnswer;
  readonly series: QualitySeries;
  /** the correction that settled it; null while it is open */
  readonly decision: CorrectionAnswer | null;
  readonly mayAct: boolean;
  readonly timeZone: string;
}

/** One flag: what was found, the series around it, and what can be done. */
export function FlagView({ flag, series, decision, mayAct, timeZone }: FlagViewProps) {
  const inUnitOfSeries = flag.unit === series.unit && !NO_LEVEL.has(flag.rule);
  const factor = suggestedFactor(flag);
  return (
    <div className="page">
      <PageHead
        title={`${flag.rule_name} at ${flag.site}`}
        lead={flag.detail}
        crumbs={[
          ['/weather', 'Weather'],
          [PATH, 'Quality'],
        ]}
      >
        <Go
          href={`/weather/${encodeURIComponent(flag.site)}?from=${series.dates[0]}&to=${series.dates[series.dates.length - 1]}`}
          className="button"
        >
          The station on these days
        </Go>
      </PageHead>
      <FactList facts={factsOf(flag)} />
      <Section id="series" title="The record around it">
        <SeriesView
          id="flag-series"
          title={`${series.term} at ${flag.site}`}
          series={series}
          marked={{ from: flag.first_day, to: flag.last_day }}
          limit={inUnitOfSeries ? flag.limit : null}
        />
      </Section>
      {decision ? (
        <Section id="decision" title="What was decided">
          <CorrectionList corrections={[decision]} mayAct={mayAct} timeZone={timeZone} />
        </Section>
      ) : null}
      {mayAct ? (
        <Section id="decide" title="Decide">
          <Caution>
            Look at the neighbours first. Accepting keeps the value; rejecting leaves a gap that is filled by the order of the Gaps screen;
            a correction changes reference ET and every parcel that listens to this station. Raw values are kept, and the decision can be
            undone.
          </Caution>
          <CorrectionForm
            {...{ source: flag.source, site: flag.site, variable: flag.variable, unit: series.unit }}
            {...{ from: flag.first_day, to: flag.last_day, rule: flag.rule }}
            act={factor === null ? (/reject/i.test(flag.detail) ? 'reject' : 'accept') : 'factor'}
            amount={factor ?? undefined}
          />
        </Section>
      ) : null}
    </div>
  );
}

function suggestedFactor(flag: FlagAnswer): number | null {
  const { suggested_factor: factor } = flag.figures;
  return typeof factor === 'number' && flag.variable === 'solar_radiation_mj_m2_d' ? Number(factor.toPrecision(4)) : null;
}

function factsOf(flag: FlagAnswer): (readonly [string, React.ReactNode])[] {
  const unit = flag.unit === '1' ? '' : ` ${flag.unit}`;
  const figures = Object.entries(flag.figures).filter(([name, value]) => !SAID.has(name) && value !== null);
  return [
    ['Variable', termOf(flag.variable)],
    ['Days', flag.first_day === flag.last_day ? flag.first_day : `${flag.first_day} to ${flag.last_day} (${flag.day_count})`],
    ['How grave', <SeverityTag key="severity" severity={flag.severity} />],
    ['Value', `${significant(flag.value, 4)}${unit}`],
    ['Limit', `${significant(flag.limit, 4)}${unit}`],
    ['State', STATE_WORDS[flag.state]],
    ['Rule after', RULES[flag.rule as Rule]?.source ?? flag.rule_source],
    ...figures.map(([name, value]) => [figureName(name), typeof value === 'number' ? significant(value, 4) : String(value)] as const),
  ];
}

/** @example figureName('r_squared') // 'r²' */
function figureName(name: string): string {
  const known: Record<string, string> = {
    r_squared: 'r²',
    clear_sky_mj_m2_d: 'Clear sky, MJ m⁻² d⁻¹',
    minimum_c: 'Minimum temperature, °C',
    probability_pct: 'Ellipse, %',
  };
  const words = name.replaceAll('_', ' ');
  return known[name] ?? words.charAt(0).toUpperCase() + words.slice(1);
}
