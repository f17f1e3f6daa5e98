/** Words of the quality desk. */
import { RULES, type Rule } from '../../../../../lib/weather/quality/rules.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../../../../lib/weather/variable.ts';

export const PATH = '/weather/desk/quality';

export const SEVERITY_WORDS = { impossible: 'cannot be', suspect: 'suspect', note: 'note' } as const;
export const SEVERITY_TONE = { impossible: 'bad', suspect: 'caution', note: '' } as const;
export const STATE_WORDS = { open: 'open', accepted: 'accepted', corrected: 'corrected', rejected: 'rejected' } as const;

export const ACT_WORDS = {
  accept: 'Accept as it is',
  factor: 'Multiply by a factor',
  offset: 'Add an offset',
  replace: 'Replace by a value',
  reject: 'Reject: leave a gap',
  aridity: 'Bring to a reference surface',
} as const;

export function ruleName(rule: string): string {
  return RULES[rule as Rule]?.name ?? rule;
}

export function termOf(variable: string): string {
  return WEATHER_VARIABLES[variable as WeatherVariable]?.term ?? variable;
}

/** What every reader of the desk should know before acting. */
export const CAUTION =
  'A flag is a question, not a verdict: rare weather breaks rules too. Look at the series and at the neighbours before you correct. Every correction moves reference ET, and with it what parcels are said to need; raw values are kept, and every decision can be undone.';
