import type { UnitSystem } from '../../../../../lib/base/units.ts';
import {
  CARRIED_NAMES,
  CARRIED_VARIABLES,
  type CarriedVariableAnswer,
  type InterpolationAnswer,
} from '../../../../../lib/http/contract/interpolation.ts';
import { dateRange } from '../../../../_components/date-words.ts';
import { Section } from '../../../../_components/page-head.tsx';
import { one, type Query } from '../../../../_components/query.ts';
import { ErrorMap } from './error-map.tsx';
import { errorUnit } from './error-units.ts';
import styles from './interpolation.module.css';
import { INTERPOLATION_PATH } from './load-interpolation.ts';
import { MethodTable } from './method-table.tsx';
import { SiteErrorTable } from './site-error-table.tsx';
import { VariogramChart } from './variogram-chart.tsx';

interface InterpolationViewProps {
  readonly check: InterpolationAnswer;
  readonly shown: CarriedVariableAnswer;
  readonly boundary: unknown;
  readonly query: Query;
  readonly units: UnitSystem;
}

/** The check of one variable: methods, semivariogram, and where the errors are. */
export function InterpolationView({ check, shown, boundary, query, units }: InterpolationViewProps) {
  const unit = errorUnit(shown.unit, units);
  const method = shown.methods.find((each) => each.method === shown.shown_method);
  return (
    <>
      <Choose check={check} shown={shown} query={query} />
      <Section
        id="methods"
        title={`${shown.term}: error of each way`}
        note={`${check.sites.length} stations${check.source === 'stations' ? '' : ` of ${check.source}`}, ${dateRange(check.from, check.to)}. Estimates are held against measured values only; the neighbours they come from may be filled on some days. A run with automatic weather takes the way marked here.`}
      >
        <MethodTable shown={shown} query={query} unit={unit} />
      </Section>
      <Section
        id="semivariogram"
        title="How differences grow with distance"
        note="Half the mean squared difference of two stations on the same day, by their distance, and the curve that kriging takes its weights from. A steep curve means that only near stations tell much."
      >
        {shown.variograms.length > 0 ? (
          <div className={styles.charts}>
            {shown.variograms.map((variogram) => (
              <VariogramChart key={variogram.trend} variogram={variogram} unit={unit} units={units} />
            ))}
          </div>
        ) : (
          <p className="muted">There are too few stations for a semivariogram: kriging needs six at different places.</p>
        )}
      </Section>
      {method ? (
        <Section
          id="errors"
          title={`Where the errors are: ${method.name}`}
          note="A circle is a station left out: its size the RMSE, its sign whether the estimate runs too high (+) or too low (−) on average."
        >
          <div className={styles.map}>
            <ErrorMap check={check} shown={shown} boundary={boundary} unit={unit} units={units} />
          </div>
          <SiteErrorTable check={check} shown={shown} unit={unit} units={units} />
        </Section>
      ) : null}
    </>
  );
}

function Choose({ check, shown, query }: { check: InterpolationAnswer; shown: CarriedVariableAnswer; query: Query }) {
  const source = one(query, 'source');
  return (
    <form action={INTERPOLATION_PATH} className="toolbar">
      {source ? <input type="hidden" name="source" value={source} /> : null}
      <label className="field">
        <span className="label">Variable</span>
        <select name="variable" defaultValue={shown.variable}>
          {CARRIED_NAMES.map((name) => (
            <option key={name} value={name}>
              {CARRIED_VARIABLES[name].term}
            </option>
          ))}
        </select>
      </label>
      <label className="field">
        <span className="label">From</span>
        <input type="date" name="from" defaultValue={check.from} />
      </label>
      <label className="field">
        <span className="label">To</span>
        <input type="date" name="to" defaultValue={check.to} />
      </label>
      <button type="submit" className="button">
        Show
      </button>
    </form>
  );
}
