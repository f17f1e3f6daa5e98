import type { UnitSystem } from '../../../lib/base/units.ts';
import { BORDER_UNITS } from '../../../lib/base/units.ts';
import { longDate } from '../../_components/date-words.ts';
import { EmptyState } from '../../_components/empty-state.tsx';
import { figureWithUnit, plain } from '../../_components/figures.ts';
import { Go } from '../../_components/go.tsx';
import { Section } from '../../_components/page-head.tsx';
import type { Query } from '../../_components/query.ts';
import styles from './frost.module.css';
import { RISKS, sprinkling, sprinklingUnit } from './frost-words.ts';
import { type LoadedFrost, MOST_DRAWN, MOST_ROWS } from './load-frost.ts';
import { ProtectionTables } from './protection-tables.tsx';
import { RiskMap } from './risk-map.tsx';
import { RiskTable } from './risk-table.tsx';
import { StationTable } from './station-table.tsx';

interface FrostViewProps {
  readonly loaded: LoadedFrost;
  readonly boundary: unknown;
  readonly query: Query;
  readonly units: UnitSystem;
}

/** One night: what is at risk, where, how cold it gets, and the water that protection takes. */
export function FrostView({ loaded, boundary, query, units }: FrostViewProps) {
  const { night, atRisk, shapes } = loaded;
  return (
    <>
      <Section
        id="risk"
        title={`Night of ${longDate(night.date)}`}
        note={`${night.evening === 'given' ? 'Evening as given' : `Evening of ${night.source}${night.source_role === 'forecast' ? ', a forecast' : ''}`}. The band holds eight nights in ten. Bud or leaf: dry, open to the sky.`}
      >
        {night.total === 0 ? <NothingSensitive /> : <Counts loaded={loaded} units={units} />}
        {night.total > 0 ? (
          <div className={styles.map}>
            <RiskMap night={{ ...night, items: night.items.slice(0, MOST_DRAWN) }} shapes={shapes} boundary={boundary} units={units} />
          </div>
        ) : null}
        {night.total > MOST_DRAWN ? <p className="small muted">The map has the first {plain(MOST_DRAWN, 0)} plantings.</p> : null}
      </Section>
      <Section
        id="stations"
        title="At the stations"
        note="What was known at sunset, and the lowest air temperature expected by the next sunrise. One night in ten is colder than the low end, one in ten stays warmer than the high end."
      >
        <StationTable night={night} units={units} />
      </Section>
      {night.total > 0 ? <AtRisk loaded={loaded} query={query} units={units} rows={atRisk.slice(0, MOST_ROWS)} /> : null}
      <Section id="protection" title="Sprinkling over the plants: printed rates">
        <ProtectionTables units={units} />
      </Section>
    </>
  );
}

function NothingSensitive() {
  return (
    <EmptyState title="Nothing grown here that night has a table of critical temperatures">
      <p>
        Apple, pear, cherry, peach and other stone fruit have one. Look at <Go href="/crops">the crops</Go> and{' '}
        <Go href="/imports">bring in plantings</Go> of a season that holds this night, or choose another night.
      </p>
    </EmptyState>
  );
}

function Counts({ loaded, units }: { loaded: LoadedFrost; units: UnitSystem }) {
  const { counts, area_at_risk_ha, sprinkling_flow_l_s, sprinkling_volume_m3, beyond_table } = loaded.night;
  const flow = `${sprinkling(sprinkling_flow_l_s, 'l_s', units)} ${sprinklingUnit('l_s', units)}`;
  const other =
    units === 'us'
      ? figureWithUnit(sprinkling_flow_l_s / 1000, 'flow', units)
      : `${plain(sprinkling_flow_l_s * BORDER_UNITS.l_s.metric.fromMetric * 3.6, 0)} m³/h`;
  return (
    <>
      <dl className="figures">
        {RISKS.map(({ risk, name }) => (
          <div key={risk}>
            <dt>{name}</dt>
            <dd>
              {plain(counts[risk], 0)} <span className="unit">plantings</span>
            </dd>
          </div>
        ))}
        <div>
          <dt>Dormant or not known</dt>
          <dd>
            {plain(counts.unknown, 0)} <span className="unit">plantings</span>
          </dd>
        </div>
      </dl>
      {sprinkling_flow_l_s > 0 || beyond_table === 0 ? (
        <p>
          {figureWithUnit(area_at_risk_ha, 'area', units)} at risk. Sprinkled all at once they would draw {flow} ({other}) and{' '}
          {figureWithUnit(sprinkling_volume_m3, 'volume', units)} through the night
          {beyond_table > 0 ? `, without ${plain(beyond_table, 0)} plantings that are beyond the printed rates` : ''}.
        </p>
      ) : (
        <p>
          {figureWithUnit(area_at_risk_ha, 'area', units)} at risk. The night is colder or windier than the printed rates of sprinkling go:
          water cannot be relied on to protect them, and may cool them instead.
        </p>
      )}
    </>
  );
}

function AtRisk({ loaded, rows, query, units }: { loaded: LoadedFrost; rows: LoadedFrost['atRisk']; query: Query; units: UnitSystem }) {
  const { night, atRisk } = loaded;
  return (
    <Section
      id="plantings"
      title="Plantings at risk"
      note="The worst first; a parcel’s code opens its working. Flow and water are for sprinkling over the plants from the start temperature until two hours after sunrise, at the printed rate."
    >
      {rows.length > 0 ? (
        <RiskTable rows={rows} date={night.date} query={query} units={units} />
      ) : (
        <p>None of the plantings is at risk that night.</p>
      )}
      {atRisk.length > rows.length ? (
        <p className="small muted">
          {plain(rows.length, 0)} of {plain(atRisk.length, 0)}; the CSV has all.
        </p>
      ) : null}
    </Section>
  );
}
