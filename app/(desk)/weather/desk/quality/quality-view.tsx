import type { FlagPage } from '../../../../../lib/http/answers/quality.ts';
import type { CheckAnswer, CorrectionAnswer } from '../../../../../lib/http/contract/quality.ts';
import { moment } from '../../../../_components/date-words.ts';
import { Caution, EmptyState } from '../../../../_components/empty-state.tsx';
import { plain } from '../../../../_components/figures.ts';
import { Go } from '../../../../_components/go.tsx';
import { PageHead, Section } from '../../../../_components/page-head.tsx';
import { hrefWith, type Query } from '../../../../_components/query.ts';
import { WeatherNav } from '../../../../_components/weather-nav.tsx';
import { AridityOffers } from './aridity-offers.tsx';
import { CheckAgain } from './check-again.tsx';
import { CorrectionList } from './correction-list.tsx';
import { FlagFilter } from './flag-filter.tsx';
import { FlagTable } from './flag-table.tsx';
import { PyranometerTable } from './pyranometer-table.tsx';
import { CAUTION, PATH } from './quality-words.ts';
import { RuleCounts } from './rule-counts.tsx';

interface QualityViewProps {
  readonly checks: readonly CheckAnswer[];
  readonly flags: FlagPage;
  readonly corrections: readonly CorrectionAnswer[];
  readonly query: Query;
  readonly mayAct: boolean;
  readonly timeZone: string;
}

/** The quality desk: what the checks found, what was decided on it, and what is offered. */
export function QualityView({ checks, flags, corrections, query, mayAct, timeZone }: QualityViewProps) {
  const stations = checks.filter(({ kind }) => kind === 'stations');
  const checked = stations.some(({ checked_at }) => checked_at !== null);
  const sites = [...new Set(stations.flatMap(({ counts }) => counts.map(({ site }) => site)))].sort();
  return (
    <div className="page">
      <PageHead
        title="Weather quality"
        crumbs={[['/weather', 'Weather']]}
        lead="What the published checks found in the record of each station, and what was decided on it. Values are in the units of the record."
      >
        {mayAct ? (
          <Go href={`${PATH}/correct`} className="button">
            Correct a period
          </Go>
        ) : null}
        {mayAct && stations.length > 0 ? <CheckAgain /> : null}
      </PageHead>
      <WeatherNav here={PATH} />
      <Caution>{CAUTION}</Caution>
      {stations.length === 0 ? (
        <EmptyState title="No stations yet">
          The checks look at stations. <Go href="/imports">Bring in</Go> stations and their daily weather; the record is checked as soon as
          it is applied.
        </EmptyState>
      ) : (
        <>
          <CheckFacts checks={checks} timeZone={timeZone} />
          <Section id="counts" title="Open flags by rule and site" note="Flags, and the days they cover. Choose a number to see them.">
            <RuleCounts checks={stations} />
          </Section>
          <Section
            id="flags"
            title={`${plain(flags.total, 0)} ${flags.total === 1 ? 'flag' : 'flags'}`}
            actions={<Go href={`/api/v1/weather/flags.csv`}>All flags as CSV</Go>}
          >
            <FlagFilter query={query} sites={sites} />
            <FlagTable flags={flags.items} />
            <nav className="pager no-print" aria-label="Pages of flags">
              {query.cursor ? <Go href={`${hrefWith(PATH, query, { cursor: null })}#flags`}>First page</Go> : null}
              {flags.next_cursor ? <Go href={`${hrefWith(PATH, query, { cursor: flags.next_cursor })}#flags`}>Next page</Go> : null}
            </nav>
          </Section>
        </>
      )}
      <Section id="corrections" title="Corrections" note="The newest first. Of two on one day the later one stands.">
        <CorrectionList corrections={corrections} mayAct={mayAct} timeZone={timeZone} />
      </Section>
      {checked ? (
        <>
          <Section
            id="pyranometers"
            title="Pyranometers against the clear sky"
            note="On the clearest days measured radiation should touch the clear-sky curve; 3 to 5 % off is sound (FAO-56 Annex 5, ASCE-EWRI 2005 Appendix D)."
          >
            <PyranometerTable checks={stations} />
          </Section>
          <Section
            id="aridity"
            title="Stations in dry surroundings"
            note="Months with rain below half of reference ET, a minimum temperature more than Ko above the dew point and an aridity index above 0.05 (FAO-56 Annex 6). The adjustment is offered, never made by itself."
          >
            <AridityOffers checks={stations} mayAct={mayAct} />
          </Section>
        </>
      ) : null}
    </div>
  );
}

function CheckFacts({ checks, timeZone }: { checks: readonly CheckAnswer[]; timeZone: string }) {
  return (
    <ul className="small muted">
      {checks.map((check) => (
        <li key={check.source}>
          {check.source}: {checkWords(check, timeZone)}
        </li>
      ))}
    </ul>
  );
}

function checkWords(check: CheckAnswer, timeZone: string): string {
  if (check.kind === 'grid') return 'a grid; its cells have no instruments and are not checked.';
  if (!check.checked_at) return 'not checked yet: a check follows each change of its weather.';
  const { impossible, suspect, note } = check.open;
  const span = check.first_day && check.last_day ? `${check.first_day} to ${check.last_day}` : 'no days';
  return `${check.sites} ${check.sites === 1 ? 'station' : 'stations'}, ${span}, checked ${moment(check.checked_at, timeZone)}. Open: ${impossible} that cannot be, ${suspect} suspect, ${note} ${note === 1 ? 'note' : 'notes'}; settled: ${check.settled}.`;
}
