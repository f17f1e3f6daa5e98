import { scaleLinear } from 'd3-scale';
import type { QualitySeries } from '../../../../../../lib/http/answers/quality-series.ts';
import type { PyranometerSummary } from '../../../../../../lib/weather/quality/summary.ts';
import { type Box, ChartFrame, markClass, NamedAxis, seriesPath, ValueAxis, valueScale } from '../../../../../_components/chart-frame.tsx';
import { DataTable, FactList, FiguresBelow } from '../../../../../_components/data-table.tsx';
import { percent, plain } from '../../../../../_components/figures.ts';
import { Go } from '../../../../../_components/go.tsx';
import { PageHead, Section } from '../../../../../_components/page-head.tsx';
import { PATH } from '../quality-words.ts';
import { SeriesView } from '../series-view.tsx';

interface PyranometerViewProps {
  readonly source: string;
  readonly pyranometer: PyranometerSummary;
  readonly series: QualitySeries | null;
  readonly year: string | null;
  readonly years: readonly string[];
  readonly mayAct: boolean;
}

const BOX: Box = { left: 56, right: 950, top: 34, bottom: 204 };

/** One pyranometer over a year against the clear sky, and its clearest days over the record. */
export function PyranometerView({ source, pyranometer, series, year, years, mayAct }: PyranometerViewProps) {
  const { site, suggestedFactor } = pyranometer;
  const here = (changes: Record<string, string>) => `${PATH}/pyranometer?${new URLSearchParams({ source, site, ...changes })}`;
  const correct = new URLSearchParams({
    ...{ source, site, variable: 'solar_radiation_mj_m2_d', act: 'factor' },
    ...(suggestedFactor ? { amount: suggestedFactor.toPrecision(4) } : {}),
    ...(year ? { from: `${year}-01-01`, to: `${year}-12-31` } : {}),
  });
  return (
    <div className="page">
      <PageHead
        title={`Pyranometer at ${site}`}
        lead="On the clearest days measured radiation should touch the clear-sky curve; 3 to 5 % off is sound (FAO-56 Annex 5, ASCE-EWRI 2005 Appendix D)."
        crumbs={[
          ['/weather', 'Weather'],
          [PATH, 'Quality'],
        ]}
      >
        {mayAct ? (
          <Go href={`${PATH}/correct?${correct}`} className="button">
            Correct by a factor
          </Go>
        ) : null}
      </PageHead>
      <FactList
        facts={[
          [
            'Clear days by year',
            pyranometer.years.map((each) => `${each.year}: ${percent(each.ratio, 1)}`).join(', ') || percent(pyranometer.level, 1),
          ],
          [
            'Drift',
            pyranometer.driftPct === null
              ? 'record too short to say'
              : `${plain(pyranometer.driftPct, 1)} ± ${plain(pyranometer.driftErrorPct, 1)} % per year${pyranometer.drifting ? ', more than chance' : ''}`,
          ],
          ['Factor to the curve', plain(suggestedFactor, 3)],
        ]}
      />
      <p className="notice" role="note">
        A year without clear days, a wrong elevation or clean mountain air move clear days off the curve as well. Have the instrument
        calibrated before a factor is laid over years.
      </p>
      {series ? (
        <Section id="year" title={`The year ${year ?? ''}`}>
          <nav className="row no-print" aria-label="Year">
            {years.map((each) => (
              <Go key={each} href={here({ year: each })} aria-current={each === year ? 'page' : undefined}>
                {each}
              </Go>
            ))}
          </nav>
          <SeriesView id="pyranometer-year" title={`Solar radiation at ${site} under the clear sky`} series={series} />
        </Section>
      ) : null}
      <Section
        id="windows"
        title="The clearest days, window by window"
        note="Second highest day of each thirty, over the nearer of the two published clear-sky curves; 100 % between them."
      >
        <Windows pyranometer={pyranometer} />
      </Section>
    </div>
  );
}

function Windows({ pyranometer: { windows, site } }: { pyranometer: PyranometerSummary }) {
  if (windows.length === 0) return <p className="muted">Too few days to say anything.</p>;
  const ratios = windows.map(({ ratio }) => ratio * 100);
  const x = scaleLinear().domain([0, windows.length]).range([BOX.left, BOX.right]);
  const middle = (at: number) => x(at + 0.5);
  const y = valueScale([ratios, [92, 108]], BOX, true);
  const step = Math.max(1, Math.ceil(windows.length / 9));
  const ticks = windows.map(({ from }, offset) => ({ offset, name: from.slice(0, 7) })).filter((_, at) => at % step === 0);
  return (
    <ChartFrame
      id="windows-chart"
      title="Clearest days as a share of clear sky"
      description={`${windows.length} windows of thirty days at ${site}: ${plain(Math.min(...ratios), 1)} to ${plain(Math.max(...ratios), 1)} % of clear-sky radiation.`}
      width={960}
      height={252}
      legend={[
        { label: 'Clearest days', mark: 'first' },
        { label: '95 % and 105 %', mark: 'raw' },
      ]}
      below={
        <FiguresBelow summary={`The figures as a table (${windows.length} windows)`}>
          <DataTable
            caption="Clearest days by window"
            rows={windows}
            rowKey={(row) => row.from}
            columns={[
              { key: 'from', head: 'From', rowHead: true, oneLine: true, cell: (row) => row.from },
              { key: 'to', head: 'To', oneLine: true, cell: (row) => row.to },
              { key: 'ratio', head: 'Of clear sky', numeric: true, cell: (row) => percent(row.ratio, 1) },
            ]}
          />
        </FiguresBelow>
      }
    >
      <ValueAxis scale={y} box={BOX} label="Share of clear-sky radiation, %" />
      {[95, 105].map((level) => (
        <line key={level} className={markClass('raw')} x1={BOX.left} x2={BOX.right} y1={y(level)} y2={y(level)} />
      ))}
      <path className={markClass('first')} d={seriesPath(ratios, middle, y)} />
      <NamedAxis scale={x} box={BOX} ticks={ticks} label="Month in which the window begins" />
    </ChartFrame>
  );
}
