/** What a decision may be: every refusal says what, where, the limit, and what to do instead. */
import { addDays, dayNumber, isoDate } from '../base/civil-date.ts';
import { type Finding, Refused } from '../base/errors.ts';
import type { CorrectionAct } from '../weather/quality/correction.ts';
import { figureText, seriesOf } from '../weather/quality/flag.ts';
import { RULES } from '../weather/quality/rules.ts';
import { type SiteObservations, WEATHER_VARIABLES, type WeatherVariable } from '../weather/variable.ts';
import type { StoredCorrection } from './correction-rows.ts';

/** A decision as it is asked for. */
export interface CorrectionWanted {
  /** code of the site */
  readonly site: string;
  /** name of the source, where several have a site of this code */
  readonly source?: string;
  /** what is corrected; not looked at for `aridity`, which changes temperature and humidity together */
  readonly variable?: WeatherVariable;
  /** YYYY-MM-DD, both included */
  readonly from: string;
  readonly to: string;
  readonly act: CorrectionAct;
  readonly amount?: number;
  /** replacement by day */
  readonly values?: Readonly<Record<string, number>>;
  /** flag rule it settles */
  readonly rule?: string;
  readonly reason: string;
}

const FACTOR = { low: 0.2, high: 5 } as const;
const KO = { low: 0, high: 5 } as const;
/** Longest period of a decision [d], a hundred years. */
const LONGEST = 36_525;
/** Variable that an aridity adjustment is kept under. */
const ARIDITY_VARIABLE: WeatherVariable = 'air_temperature_min_c';

function refuse(message: string, column: string, more: Partial<Finding> = {}): never {
  throw new Refused(message, [{ severity: 'error', code: 'correction', message, column, ...more }]);
}

/**
 * The decision as it is stored, without its place.
 *
 * @throws {Refused} with the member at fault: dates out of order, a period too long, an unknown rule, an amount that is missing, beyond its
 * limits or not called for, replacement values outside the period or the physical limits
 */
export function checkedCorrection(wanted: CorrectionWanted): Omit<StoredCorrection, 'sourceId' | 'ordinal'> {
  const { from, to, act, rule } = wanted;
  if (from > to) refuse(`from ${from} is after to ${to}: give the first day first`, 'from');
  const today = isoDate(Math.floor(Date.now() / 86_400_000) + 1);
  if (to > today) refuse(`${to} lies ahead: only days that have passed are corrected`, 'to', { limit: today });
  if (dayNumber(to) - dayNumber(from) >= LONGEST)
    refuse(`${from} to ${to} is longer than ${LONGEST} days`, 'to', { limit: `${LONGEST} d` });
  if (rule !== undefined && !(rule in RULES)) refuse(`"${rule}" is not a rule; known: ${Object.keys(RULES).join(', ')}`, 'rule');
  const variable = act === 'aridity' ? ARIDITY_VARIABLE : wanted.variable;
  if (!variable) refuse(`act "${act}" needs the variable it is for`, 'variable');
  if (wanted.values && act !== 'replace') refuse(`values by day go with act "replace", not with "${act}"`, 'values');
  const values = act === 'replace' ? replacementValues(wanted, variable) : null;
  return { variable, fromDay: from, toDay: to, act, amount: amountOf(wanted, variable), values };
}

function amountOf({ act, amount, values }: CorrectionWanted, variable: WeatherVariable): number | null {
  const { low, high, unit } = WEATHER_VARIABLES[variable];
  const need = (what: string) => refuse(`act "${act}" needs an amount: ${what}`, 'amount');
  const within = (least: number, most: number, what: string) => {
    if (amount === undefined) return need(what);
    if (amount < least || amount > most) {
      refuse(`amount ${figureText(amount)} is outside ${figureText(least)} to ${figureText(most)}: ${what}`, 'amount', {
        value: String(amount),
        limit: `${least} to ${most}`,
      });
    }
    return amount;
  };
  switch (act) {
    case 'factor':
      return within(FACTOR.low, FACTOR.high, 'a factor; beyond it the unit is wrong: bring the file in again with the right one');
    case 'offset':
      return within((low - high) / 2, (high - low) / 2, `an offset in ${unit}`);
    case 'replace':
      return values ? null : within(low, high, `a value in ${unit}, or values by day`);
    case 'aridity':
      return within(KO.low, KO.high, 'Ko in °C: 0 with a reference station nearby, 2 without');
    default:
      if (amount !== undefined) refuse(`act "${act}" takes no amount`, 'amount');
      return null;
  }
}

/** @throws {Refused} for a day outside the period or a value outside the limits; at most ten are named */
function replacementValues({ from, to, values, amount }: CorrectionWanted, variable: WeatherVariable): Record<string, number> | null {
  if (!values) return null;
  if (amount !== undefined) refuse('give an amount for every day, or values by day, not both', 'amount');
  const { low, high, unit } = WEATHER_VARIABLES[variable];
  const days = Object.keys(values);
  const findings = days.flatMap((date): Finding[] => {
    const fault = { severity: 'error', code: 'correction', column: `values.${date}` } as const;
    if (date < from || date > to) return [{ ...fault, message: `${date} is outside ${from} to ${to}` }];
    const value = values[date];
    if (value >= low && value <= high) return [];
    const message = `${figureText(value)} ${unit} on ${date} is outside ${figureText(low)} to ${figureText(high)} ${unit}`;
    return [{ ...fault, message, value: String(value), limit: `${low} to ${high}` }];
  });
  if (findings.length > 0) throw new Refused(findings[0].message, findings.slice(0, 10));
  const missing = dayNumber(to) - dayNumber(from) + 1 - days.length;
  if (missing > 0) refuse(`values has ${days.length} days, the period ${missing} more: shorten it, or give them all`, 'values');
  return { ...values };
}

/** @throws {Refused} when nothing is stored there to decide on, or a corrected value is beyond its physical limits */
export function refuseImpossible(
  row: Omit<StoredCorrection, 'sourceId' | 'ordinal'>,
  raw: SiteObservations,
  corrected: SiteObservations,
): void {
  const variable = row.variable as WeatherVariable;
  const { term, unit, low, high } = WEATHER_VARIABLES[variable];
  const stored = seriesOf(raw, variable, 0);
  if (raw.dayCount === 0 || (row.act !== 'replace' && !stored?.some((value) => !Number.isNaN(value)))) {
    refuse(
      `nothing is stored of ${term.toLowerCase()} at this site from ${row.fromDay} to ${row.toDay}: only act "replace" can put a value there`,
      'from',
    );
  }
  refuseCrossed(raw, corrected);
  const series = seriesOf(corrected, variable, 0);
  const bad = series?.findIndex((value) => value < low || value > high) ?? -1;
  if (!series || bad < 0) return;
  refuse(
    `${figureText(series[bad])} ${unit} on ${addDays(raw.startDate, bad)} would be outside ${figureText(low)} to ${figureText(high)} ${unit}: take a smaller correction, or reject that day`,
    'amount',
    { value: String(series[bad]), limit: `${low} to ${high}` },
  );
}

const EXTREMES = [
  ['air_temperature_max_c', 'air_temperature_min_c'],
  ['relative_humidity_max_pct', 'relative_humidity_min_pct'],
] as const;

/** @throws {Refused} when a maximum would fall below its minimum on a day on which it was above it */
function refuseCrossed(raw: SiteObservations, corrected: SiteObservations): void {
  for (const [upper, lower] of EXTREMES) {
    const [rawHigh, rawLow] = [seriesOf(raw, upper, 0), seriesOf(raw, lower, 0)];
    const [high, low] = [seriesOf(corrected, upper, 0), seriesOf(corrected, lower, 0)];
    if (!rawHigh || !rawLow || !high || !low) continue;
    const day = high.findIndex((value, at) => value < low[at] && !(rawHigh[at] < rawLow[at]));
    if (day < 0) continue;
    const { term, unit } = WEATHER_VARIABLES[upper];
    refuse(
      `${term.toLowerCase()} on ${addDays(raw.startDate, day)} would be ${figureText(high[day])} ${unit}, below the minimum of ${figureText(low[day])} ${unit}: take a smaller correction, a shorter period, or correct both`,
      'amount',
      { value: String(high[day]), limit: String(low[day]) },
    );
  }
}
