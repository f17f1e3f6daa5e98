import { isIsoDate } from '../../../../../lib/base/civil-date.ts';
import { RULES, type Rule } from '../../../../../lib/weather/quality/rules.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../../../../lib/weather/variable.ts';
import { Go } from '../../../../_components/go.tsx';
import { one, oneOf, type Query } from '../../../../_components/query.ts';
import { PATH, ruleName, SEVERITY_WORDS, STATE_WORDS, termOf } from './quality-words.ts';

/** Flags that a page of the list holds. */
export const PAGE_FLAGS = 100;

const STATES = ['open', 'accepted', 'corrected', 'rejected', 'any'] as const;
const SEVERITIES = ['any', 'impossible', 'suspect', 'note'] as const;
const RULE_NAMES = Object.keys(RULES) as Rule[];
const VARIABLE_NAMES = Object.keys(WEATHER_VARIABLES) as WeatherVariable[];

/** What the address asks to see of the flags: open ones unless it says otherwise. */
export function filterAsked(query: Query) {
  const state = oneOf(query, 'state', STATES, 'open');
  const severity = oneOf(query, 'severity', SEVERITIES, 'any');
  const date = (key: string) => {
    const text = one(query, key);
    return text && isIsoDate(text) ? text : undefined;
  };
  const [from, to] = [date('from'), date('to')];
  return {
    source: one(query, 'source'),
    site: one(query, 'site'),
    rule: RULE_NAMES.find((rule) => rule === one(query, 'rule')),
    variable: VARIABLE_NAMES.find((name) => name === one(query, 'variable')),
    state: state === 'any' ? undefined : state,
    severity: severity === 'any' ? undefined : severity,
    ...(from && to && from > to ? { from: to, to: from } : { from, to }),
  };
}

/** The page of the list that the address asks for; a cursor it did not give out is passed over. */
export function pageAsked(query: Query): { limit: number; cursor?: string } {
  const cursor = one(query, 'cursor');
  const known = cursor !== undefined && /^\[\d{1,9}\]$/.test(Buffer.from(cursor, 'base64url').toString('utf8'));
  return known ? { limit: PAGE_FLAGS, cursor } : { limit: PAGE_FLAGS };
}

/** Narrows the list; works without script. */
export function FlagFilter({ query, sites }: { query: Query; sites: readonly string[] }) {
  const asked = filterAsked(query);
  return (
    <form action={PATH} className="toolbar no-print" aria-label="Which flags to show">
      <Select
        name="state"
        label="State"
        value={asked.state ?? 'any'}
        options={STATES.map((s) => [s, s === 'any' ? 'any' : STATE_WORDS[s]])}
      />
      <Select
        name="severity"
        label="How grave"
        value={asked.severity ?? 'any'}
        options={SEVERITIES.map((s) => [s, s === 'any' ? 'any' : SEVERITY_WORDS[s]])}
      />
      <Select name="site" label="Site" value={asked.site ?? ''} options={[['', 'any'], ...sites.map((s) => [s, s] as const)]} />
      <Select
        name="rule"
        label="Rule"
        value={asked.rule ?? ''}
        options={[['', 'any'], ...RULE_NAMES.map((r) => [r, ruleName(r)] as const)]}
      />
      <Select
        name="variable"
        label="Variable"
        value={asked.variable ?? ''}
        options={[['', 'any'], ...VARIABLE_NAMES.map((v) => [v, termOf(v)] as const)]}
      />
      <label className="field">
        <span className="label">From</span>
        <input type="date" name="from" defaultValue={asked.from} />
      </label>
      <label className="field">
        <span className="label">To</span>
        <input type="date" name="to" defaultValue={asked.to} />
      </label>
      <button type="submit" className="button">
        Show
      </button>
      <Go href={PATH}>All open flags</Go>
    </form>
  );
}

function Select(props: { name: string; label: string; value: string; options: readonly (readonly [string, string])[] }) {
  return (
    <label className="field" style={{ maxWidth: '100%' }}>
      <span className="label">{props.label}</span>
      <select name={props.name} defaultValue={props.value}>
        {props.options.map(([value, label]) => (
          <option key={value} value={value}>
            {label}
          </option>
        ))}
      </select>
    </label>
  );
}
