import type { GapsAnswer, SiteRecord } from '../../../../../lib/http/contract/gaps.ts';
import { DataTable } from '../../../../_components/data-table.tsx';
import { dateRange } from '../../../../_components/date-words.ts';
import { Cautions, EmptyState } from '../../../../_components/empty-state.tsx';
import { percent } from '../../../../_components/figures.ts';
import { PageHead, Section } from '../../../../_components/page-head.tsx';
import { hrefWith } from '../../../../_components/query.ts';
import { WeatherNav } from '../../../../_components/weather-nav.tsx';
import { GapTable, RegressionTable, SourceTable } from './gap-table.tsx';
import styles from './gaps.module.css';
import { METHOD_NAMES, METHODS } from './method-words.ts';
import { MethodLegend, RecordStrips } from './record-strip.tsx';

interface Asked {
  readonly source?: string;
  readonly site?: string;
  readonly from?: string;
  readonly to?: string;
}

/** The gaps of the record, how each was filled, and how much of it rests on what. `answer` is a refusal in words where there is none. */
export function GapsView({ answer, asked }: { answer: GapsAnswer | string; asked: Asked }) {
  const refused = typeof answer === 'string';
  return (
    <div className="page">
      <PageHead
        title="Gaps in the weather"
        lead="What the sites did not measure, how each day was filled for the season, and the figures behind it. Stored values are never changed."
        crumbs={[['/weather', 'Weather']]}
      >
        {refused || answer.items.length === 0 ? null : (
          <a className="button" href={hrefWith('/api/v1/weather/gaps.csv', {}, csvQuery(answer, asked))}>
            Gaps as CSV
          </a>
        )}
      </PageHead>
      <WeatherNav here="/weather/desk/gaps" />
      <SpanForm answer={refused ? null : answer} asked={asked} />
      {refused ? (
        <p className="notice bad" role="alert">
          {answer}
        </p>
      ) : (
        <Record answer={answer} />
      )}
    </div>
  );
}

function csvQuery({ from, to }: GapsAnswer, { source, site }: Asked): Record<string, string | null> {
  return { source: source ?? null, site: site ?? null, from, to };
}

function SpanForm({ answer, asked }: { answer: GapsAnswer | null; asked: Asked }) {
  return (
    <form className="toolbar no-print" method="get" action="/weather/desk/gaps">
      <label>
        Source{' '}
        <select name="source" defaultValue={asked.source ?? ''}>
          <option value="">every set of stations</option>
          {(answer?.sources ?? []).map(({ name, kind }) => (
            <option key={name} value={name}>
              {kind === 'grid' ? `${name} (grid)` : name}
            </option>
          ))}
        </select>
      </label>
      <label>
        Site or cell <input type="text" name="site" size={10} defaultValue={asked.site ?? ''} />
      </label>
      <label>
        From <input type="date" name="from" defaultValue={asked.from ?? answer?.from ?? ''} />
      </label>
      <label>
        to <input type="date" name="to" defaultValue={asked.to ?? answer?.to ?? ''} />
      </label>
      <button type="submit" className="button">
        Show these days
      </button>
    </form>
  );
}

function Record({ answer }: { answer: GapsAnswer }) {
  const { from, to, sites, items, limits } = answer;
  if (!from || !to || sites.length === 0) {
    return <EmptyState title="No weather yet">Import stations, then their weather. The gaps of their record appear here.</EmptyState>;
  }
  return (
    <>
      <Section id="order" title="The order in which a gap is filled">
        <FillOrder limits={limits} />
        <MethodLegend />
      </Section>
      <Section
        id="shares"
        title={`Shares by method, ${dateRange(from, to)}`}
        note="In per cent of the days. Series that were measured on every day are left out."
      >
        <ShareTable sites={sites} />
      </Section>
      <Section id="records" title="The record of each site">
        {sites.map((record) => (
          <section key={record.site} className={styles.site} aria-label={record.name}>
            <h3>
              {record.name} <span className="small muted">{shareWords(record.estimated_share)}</span>
            </h3>
            <RecordStrips record={record} from={from} to={to} />
          </section>
        ))}
      </Section>
      <Section
        id="gaps"
        title={items.length === 1 ? '1 gap' : `${items.length} gaps`}
        note="A gap that began before these days or goes on after them is counted whole."
      >
        {items.length === 0 ? <p>Every series that the sites measure is complete on these days.</p> : <GapTable rows={items} />}
      </Section>
      {items.length === 0 ? null : (
        <>
          <Section
            id="regressions"
            title="Regressions on neighbours"
            note={`y = a + b x over the days that both sites have within 60 days of the gap (else the same days of other years). Taken with r² of at least ${limits.least_r2} and a slope from ${limits.least_slope} to ${limits.greatest_slope} (FAO-56 Annex 4). Where none was good enough, the best that was tried is shown.`}
          >
            <RegressionTable rows={items} limits={limits} />
          </Section>
          <Section id="sources" title="Other sources">
            <SourceTable rows={items} />
          </Section>
        </>
      )}
      <Cautions which={['estimates']} />
    </>
  );
}

function FillOrder({ limits }: { limits: GapsAnswer['limits'] }) {
  return (
    <ol className="small">
      <li>A neighbouring site, by regression within its published limits. Rain only so: a day dry at the neighbour is dry.</li>
      <li>The nearest site or cell of another source, with the mean difference (or ratio) of the common days taken off. Not for rain.</li>
      <li>
        Temperature: a straight line over at most {limits.longest_in_time_days} days. Humidity and radiation: the published estimates of
        FAO-56 chapter 3.
      </li>
      <li>Temperature and wind: the normal of the day, from the other years of the site.</li>
      <li>What is left: wind 2 m/s, no rain; a site without temperature carries no weight that day.</li>
    </ol>
  );
}

interface ShareRow {
  readonly key: string;
  readonly site: string;
  readonly series: SiteRecord['series'][number];
}

function ShareTable({ sites }: { sites: readonly SiteRecord[] }) {
  const all: ShareRow[] = sites.flatMap((record) =>
    record.series.map((series) => ({ key: `${record.site} ${series.series}`, site: record.name, series })),
  );
  const rows = all.filter(({ series }) => series.estimated_share !== 0);
  if (rows.length === 0) return <p>Every series of every site was measured on all of these days.</p>;
  const used = METHOD_NAMES.filter((method) => rows.some(({ series }) => (series.days[method] ?? 0) > 0));
  return (
    <DataTable
      caption="Days of each series by how they were got"
      rows={rows}
      rowKey={(row) => row.key}
      columns={[
        { key: 'site', head: 'Site', rowHead: true, cell: (row) => row.site },
        { key: 'series', head: 'Series', cell: (row) => row.series.term },
        ...used.map((method) => ({
          key: method,
          head: METHODS[method].name,
          unit: '%',
          numeric: true,
          cell: (row: ShareRow) => shareText(row.series.days, method),
        })),
      ]}
    />
  );
}

/** How much of a site's record was not measured. */
function shareWords(share: number | null): string {
  if (share === null) return '';
  if (share === 0) return 'nothing filled or estimated';
  return share < 0.005 ? 'under 1 % filled, estimated or missing' : `${percent(share)} filled, estimated or missing`;
}

function shareText(days: Readonly<Record<string, number>>, method: string): string {
  const total = Object.values(days).reduce((sum, count) => sum + count, 0);
  const share = (days[method] ?? 0) / total;
  if (share === 0) return '–';
  return share < 0.005 ? 'under 1' : String(Math.round(100 * share));
}
