import { fahrenheitFromCelsius, METRES_PER_SECOND_PER_MPH, type UnitSystem } from '../../../lib/base/units.ts';
import { FROST_GROUNDS, GROUND_NAMES } from '../../../lib/energy/frost-cooling.ts';
import { SKY_FORMULAS, SKY_NAMES } from '../../../lib/energy/frost-sky.ts';
import { answerCriticalTemperatures, type FrostAsked } from '../../../lib/http/answers/frost.ts';
import type { FrozenNightAnswer } from '../../../lib/http/contract/frost.ts';
import { longDate } from '../../_components/date-words.ts';
import { unitOf } from '../../_components/figures.ts';
import { Go } from '../../_components/go.tsx';
import { hrefWith, one, type Query } from '../../_components/query.ts';
import styles from './frost.module.css';
import { degree, temperature } from './frost-words.ts';
import { FROST_PATH, STAGE_KEY } from './load-frost.ts';

interface FrostFormProps {
  readonly asked: FrostAsked;
  readonly nights: readonly FrozenNightAnswer[];
  readonly tables: readonly string[];
  readonly query: Query;
  readonly units: UnitSystem;
}

/** Night, stage of each fruit, an evening of one's own, and how it is computed. */
export function FrostForm({ asked, nights, tables, query, units }: FrostFormProps) {
  const source = one(query, 'source');
  return (
    <form action={FROST_PATH} className={`form no-print ${styles.form}`}>
      {source ? <input type="hidden" name="source" value={source} /> : null}
      <input type="hidden" name="in" value={units} />
      <div className={styles.fields}>
        <label className="field">
          <span className="label">Evening of the night</span>
          <input type="date" name="date" defaultValue={asked.date} required />
        </label>
        {tables.map((table) => (
          <StageField key={table} table={table} chosen={one(query, `${STAGE_KEY}${table}`) ?? 'auto'} />
        ))}
        <button type="submit" className="button primary">
          Show the night
        </button>
      </div>
      <OwnEvening asked={asked} units={units} />
      <HowComputed asked={asked} />
      <FrozenNights nights={nights} query={query} units={units} />
    </form>
  );
}

function StageField({ table, chosen }: { table: string; chosen: string }) {
  const stages = answerCriticalTemperatures().items.filter((row) => row.table === table);
  return (
    <label className="field">
      <span className="label">{stages[0]?.table_name ?? table}: stage of the buds</span>
      <select name={`${STAGE_KEY}${table}`} defaultValue={chosen}>
        <option value="auto">By thermal time (rough)</option>
        {stages.map((row) => (
          <option key={row.stage} value={row.stage}>
            {row.stage_name}
          </option>
        ))}
      </select>
    </label>
  );
}

function OwnEvening({ asked, units }: { asked: FrostAsked; units: UnitSystem }) {
  const us = units === 'us';
  const shown = (value: number | undefined, by: (value: number) => number = (same) => same) =>
    value === undefined ? undefined : Math.round((us ? by(value) : value) * 10) / 10;
  const { air_temperature_c, dew_point_c, wind_speed_m_s, cloud_share } = asked;
  const inputs = [
    ['temperature', `Air temperature at sunset, ${degree(units)}`, shown(air_temperature_c, fahrenheitFromCelsius)],
    ['dew', `Dew point at sunset, ${degree(units)}`, shown(dew_point_c, fahrenheitFromCelsius)],
    ['wind', `Wind of the night, ${unitOf('speed', units)}`, shown(wind_speed_m_s, (speed) => speed / METRES_PER_SECOND_PER_MPH)],
    ['cloud', 'Sky covered, %', cloud_share === undefined ? undefined : Math.round(cloud_share * 100)],
  ] as const;
  return (
    <details open={air_temperature_c !== undefined}>
      <summary>An evening of your own, for tonight</summary>
      <p className="hint">
        All four are needed. They hold for the whole district. Where they are left empty, the evening is that of the weather record.
      </p>
      <div className={styles.fields}>
        {inputs.map(([name, label, value]) => (
          <label key={name} className="field">
            <span className="label">{label}</span>
            <input name={name} inputMode="decimal" pattern="-?[0-9]+([.][0-9]+)?" defaultValue={value} size={8} />
          </label>
        ))}
      </div>
    </details>
  );
}

function HowComputed({ asked }: { asked: FrostAsked }) {
  return (
    <details>
      <summary>How it is computed</summary>
      <div className={styles.fields}>
        <label className="field">
          <span className="label">Minimum</span>
          <select name="method" defaultValue={asked.method}>
            <option value="auto">Own line of the station where it has one</option>
            <option value="brunt">Brunt’s square-root law</option>
          </select>
        </label>
        <label className="field">
          <span className="label">Radiation of the sky</span>
          <select name="sky" defaultValue={asked.sky}>
            {SKY_NAMES.map((name) => (
              <option key={name} value={name}>
                {SKY_FORMULAS[name].name}
              </option>
            ))}
          </select>
        </label>
        <label className="field">
          <span className="label">Ground</span>
          <select name="ground" defaultValue={asked.ground}>
            {GROUND_NAMES.map((name) => (
              <option key={name} value={name}>
                {FROST_GROUNDS[name].name}
              </option>
            ))}
          </select>
        </label>
        <label className="field">
          <span className="label">Sprinkler turns once in</span>
          <select name="rotation" defaultValue={asked.rotation_s}>
            <option value="30">30 s</option>
            <option value="60">60 s</option>
          </select>
        </label>
      </div>
    </details>
  );
}

const MOST_NIGHTS = 24;

function FrozenNights({ nights, query, units }: { nights: readonly FrozenNightAnswer[]; query: Query; units: UnitSystem }) {
  const inBud = nights.filter((night) => night.in_bud).slice(0, MOST_NIGHTS);
  if (inBud.length === 0) return null;
  const away = { temperature: null, dew: null, wind: null, cloud: null };
  return (
    <details>
      <summary>Nights on record that froze on open buds</summary>
      <ul className={styles.nights}>
        {inBud.map((night) => (
          <li key={night.date}>
            <Go href={hrefWith(FROST_PATH, query, { ...away, date: night.date })}>{longDate(night.date)}</Go>{' '}
            <span className="muted small">
              {temperature(night.minimum_c, units)} {degree(units)} at {night.site}
            </span>
          </li>
        ))}
      </ul>
    </details>
  );
}
