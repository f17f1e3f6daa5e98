import { CONVEYANCE_PRESETS } from '../../../lib/canal/conveyance.ts';
import { lossRuleText } from '../../../lib/canal/loss-rule.ts';
import { TIGHT_SHARE } from '../../../lib/canal/reach-period.ts';
import type { RunAnswer } from '../../../lib/http/contract/run.ts';
import { REPORT_CAUTIONS } from '../../../lib/report/cautions.ts';
import { CLASS_METHODS } from '../../../lib/report/classes.ts';
import { LONGEST_GAP_IN_TIME } from '../../../lib/weather/gaps.ts';
import { REGRESSION_LIMITS } from '../../../lib/weather/gaps-regression.ts';
import { RULES } from '../../../lib/weather/quality/rules.ts';
import { FALLBACK, FALLBACK_TEXT, type Fallback } from '../../../lib/weather/variable.ts';
import { DataTable } from '../../_components/data-table.tsx';
import { Cautions } from '../../_components/empty-state.tsx';
import { percent } from '../../_components/figures.ts';
import { Go } from '../../_components/go.tsx';
import { Section } from '../../_components/page-head.tsx';
import { SETTINGS, settingText } from '../../_components/run-words.ts';
import { AheadRules } from './ahead-rules.tsx';
import { BandRules } from './band-rules.tsx';
import { CropRules } from './crop-rules.tsx';
import { GroundRules } from './ground-rules.tsx';
import { RecordRules } from './record-rules.tsx';

/** What is done between the equations: weather to parcels, gaps, checks, canals, classes, and the cautions. */
export function Rules({ run }: { run: RunAnswer | null }) {
  return (
    <>
      <Interpolation run={run} />
      <Gaps />
      <AheadRules />
      <QualityRules />
      <CropRules />
      <GroundRules />
      <RecordRules />
      <Canals />
      <BandRules />
      <Section id="classes" title="Classes of the map">
        <p>
          {Object.values(CLASS_METHODS).join(', ')}. Class i holds the values from its lower limit up to, but not including, its upper; the
          last class holds its upper limit too. Natural breaks are the partition with the least sum of squares (Fisher 1958; Jenks 1967;
          recalled, not re-read).
        </p>
      </Section>
      <Section id="cautions" title="Cautions">
        <Cautions which={REPORT_CAUTIONS} />
      </Section>
    </>
  );
}

/** What a day that was not measured is made of, in the order of the code. */
function Gaps() {
  const { leastR2, leastSlope, greatestSlope, leastDays } = REGRESSION_LIMITS;
  return (
    <Section
      id="gaps"
      title="What stands in for missing weather"
      note="Every value that was filled or estimated carries its method, and every figure that rests on one says how much."
    >
      <ol>
        <li>
          A neighbouring site by regression, y = a + b x, over at least {leastDays} common days, taken with r² of at least {leastR2} and a
          slope from {leastSlope} to {greatestSlope} (FAO-56 Annex 4). Rain only so.
        </li>
        <li>
          The nearest site or cell of another source, with the mean difference or ratio of their common days taken off (common practice).
        </li>
        <li>
          Temperature: a straight line over at most {LONGEST_GAP_IN_TIME} days. Humidity and radiation: the published estimates (FAO-56
          chapter 3).
        </li>
        <li>Temperature and wind: the normal of the day, the mean of the other years within seven days of it (common practice).</li>
        <li>What is left: wind 2 m/s, no rain; a site without temperature carries no weight that day (FAO-56 chapter 3).</li>
      </ol>
      <h3>What a figure says of its weather</h3>
      <ul>
        {(Object.keys(FALLBACK) as Fallback[]).map((name) => (
          <li key={name}>{FALLBACK_TEXT[name]}</li>
        ))}
      </ul>
    </Section>
  );
}

/** The rules of the quality desk with their sources, as the checks use them. */
function QualityRules() {
  const rules = Object.entries(RULES).map(([key, rule]) => ({ key, ...rule }));
  return (
    <Section
      id="quality"
      title="Checks of station weather"
      note="A flag is a question to a person; it never changes a value. Corrections are layers over the record and can each be undone."
    >
      <DataTable
        caption="Rules of the quality desk"
        rows={rules}
        rowKey={(rule) => rule.key}
        columns={[
          { key: 'name', head: 'Rule', rowHead: true, cell: (rule) => rule.name },
          {
            key: 'about',
            head: 'Tells of',
            cell: (rule) => (rule.about === 'day' ? 'the days it names' : 'the instrument or its surroundings'),
          },
          { key: 'source', head: 'Source', cell: (rule) => rule.source },
        ]}
      />
    </Section>
  );
}

function Interpolation({ run }: { run: RunAnswer | null }) {
  return (
    <Section id="interpolation" title="From weather sites to parcels">
      <p className="formula">wᵢ = dᵢ⁻ᵖ / Σ dⱼ⁻ᵖ over the nearest sites; T at the parcel = Σ wᵢ (Tᵢ + Γ (zᵢ − z))</p>
      <p className="source">
        Shepard (1968), Proceedings of the 23rd ACM National Conference, 517–524 (recalled, not re-read); Γ of the international standard
        atmosphere, ISO 2533.
      </p>
      <p className="formula">[γᵢⱼ 1; 1ᵀ 0] [wᵢ; μ] = [γᵢ; 1], σ² = Σ wᵢ γᵢ + μ over at most eight sites; γ(h) fitted with weights N/h²</p>
      <p className="source">
        Ordinary kriging: Isaaks &amp; Srivastava (1989), An Introduction to Applied Geostatistics, chapter 12 (recalled). The semivariogram
        is pooled over the days; <Go href="/weather/desk/interpolation">how far off each way is</Go> is told by leaving one station out at a
        time.
      </p>
      {run ? (
        <DataTable
          caption={`Settings of the run in use, season ${run.season}`}
          showCaption
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
      ) : null}
    </Section>
  );
}

/** A canal of a usual size, to write a preset's rule out in numbers. */
const SAMPLE = { length: 1000, wettedPerimeter: 4 };

function Canals() {
  return (
    <Section
      id="canals"
      title="Canal losses and capacity"
      note={`Inflow of a reach = what it passes on + what its turnouts take + what it loses; sums go up the tree to the headworks. A reach is tight from ${percent(TIGHT_SHARE)} of its capacity and over above it, judged by the mean of its busiest seven days, because turns within a week level out single days.`}
    >
      <p className="formula">I = a O + b T + c, with O outflow, T taken by turnouts; a, b, c from the loss rule of the reach</p>
      <DataTable
        caption={`Loss rules offered where nothing has been measured, for a canal of ${SAMPLE.length} m and a wetted perimeter of ${SAMPLE.wettedPerimeter} m`}
        showCaption
        rows={CONVEYANCE_PRESETS}
        rowKey={(preset) => preset.code}
        columns={[
          { key: 'name', head: 'Canal', rowHead: true, cell: (preset) => preset.name },
          { key: 'rule', head: 'Rule', cell: (preset) => lossRuleText(preset.rule(SAMPLE)) },
          { key: 'source', head: 'Source', cell: (preset) => preset.source },
        ]}
      />
    </Section>
  );
}
