/**
 * What a reach loses between its head and its tail, as a rule of its length and of what it carries.
 *
 * Every rule is affine in the flow leaving at the tail (outflow O) and in what its turnouts draw (T), both m³ d⁻¹:
 *   I = a O + b T + c·[O + T > 0]
 * so one roll-up serves all of them.
 */
import { Malformed, RangeViolation } from '../base/errors.ts';

export type LossRule =
  | { readonly kind: 'none' }
  /** share of the flow lost in each kilometre, compounding, 0 ≤ fraction < 1 */
  | { readonly kind: 'fraction-per-km'; readonly fraction: number }
  /** outflow and deliveries as a share of the inflow, 0 < efficiency ≤ 1 */
  | { readonly kind: 'efficiency'; readonly efficiency: number }
  /** seepage through the wetted perimeter: rate [mm d⁻¹], wettedPerimeter [m] */
  | { readonly kind: 'seepage'; readonly rate: number; readonly wettedPerimeter: number };

/** The three numbers of a rule on a reach of known length: inflow = perOutflow·O + perTurnout·T + whenRunning (only if O + T > 0). */
export interface LossCoefficients {
  readonly perOutflow: number;
  readonly perTurnout: number;
  /** m³ d⁻¹ */
  readonly whenRunning: number;
}

/**
 * Coefficients of a loss rule on a reach.
 *
 * `fraction-per-km`: with k = −ln(1 − f) per km, flow Q and turnouts drawing evenly along the reach, dQ/dx = −k Q − T/L, hence
 *   I = O e^{kL} + T (e^{kL} − 1)/(kL)
 * `efficiency`: I = (O + T)/E. `seepage`: I = O + T + rate/1000 · wettedPerimeter · L while the reach runs.
 *
 * @param length of the reach [m]
 * @throws {RangeViolation} when the rule or the length is outside its limits.
 * @example lossCoefficients({ kind: 'efficiency', efficiency: 0.8 }, 1000).perOutflow // 1.25
 * Source: continuity of steady flow with a loss proportional to flow; the closed form is derived above.
 */
export function lossCoefficients(rule: LossRule, length: number): LossCoefficients {
  checkLossRule(rule);
  if (!(length >= 0)) throw new RangeViolation(`reach length ${length} m is not a number ≥ 0: give the length of the line in metres`);
  if (rule.kind === 'none') return { perOutflow: 1, perTurnout: 1, whenRunning: 0 };
  if (rule.kind === 'efficiency') return { perOutflow: 1 / rule.efficiency, perTurnout: 1 / rule.efficiency, whenRunning: 0 };
  if (rule.kind === 'seepage') return { perOutflow: 1, perTurnout: 1, whenRunning: (rule.rate / 1000) * rule.wettedPerimeter * length };
  const decay = -Math.log1p(-rule.fraction) * (length / 1000);
  return { perOutflow: Math.exp(decay), perTurnout: decay === 0 ? 1 : Math.expm1(decay) / decay, whenRunning: 0 };
}

/** What a reach passes on and what its turnouts draw [m³ d⁻¹]. */
export interface ReachFlow {
  readonly outflow: number;
  readonly turnoutDemand: number;
}

/**
 * Inflow a reach needs at its head. NaN in gives NaN out; a reach that carries nothing needs nothing.
 *
 * @param length [m]
 * @returns head inflow [m³ d⁻¹]
 * @example headInflow({ kind: 'efficiency', efficiency: 0.8 }, 1000, { outflow: 70, turnoutDemand: 10 }) // 100
 * Source: see `lossCoefficients`.
 */
export function headInflow(rule: LossRule, length: number, flow: ReachFlow): number {
  const { perOutflow, perTurnout, whenRunning } = lossCoefficients(rule, length);
  const running = flow.outflow + flow.turnoutDemand > 0 ? whenRunning : 0;
  return perOutflow * flow.outflow + perTurnout * flow.turnoutDemand + running;
}

/**
 * Outflow left at the tail for a given head inflow; the inverse of `headInflow`. Negative when the inflow cannot meet the turnouts and losses.
 *
 * @param length [m]
 * @returns tail outflow [m³ d⁻¹]
 * @example tailOutflow({ kind: 'efficiency', efficiency: 0.8 }, 1000, { inflow: 100, turnoutDemand: 10 }) // 70
 */
export function tailOutflow(rule: LossRule, length: number, flow: { readonly inflow: number; readonly turnoutDemand: number }): number {
  const { perOutflow, perTurnout, whenRunning } = lossCoefficients(rule, length);
  const running = flow.inflow > 0 ? whenRunning : 0;
  return (flow.inflow - perTurnout * flow.turnoutDemand - running) / perOutflow;
}

/** @throws {RangeViolation} naming the value, its limit and the reach when `where` is given. */
export function checkLossRule(rule: LossRule, where = 'loss rule'): void {
  if (rule.kind === 'fraction-per-km' && !(rule.fraction >= 0 && rule.fraction < 1))
    refuse(where, 'fraction per km', rule.fraction, '0 ≤ value < 1');
  if (rule.kind === 'efficiency' && !(rule.efficiency > 0 && rule.efficiency <= 1))
    refuse(where, 'efficiency', rule.efficiency, '0 < value ≤ 1');
  if (rule.kind !== 'seepage') return;
  if (!(rule.rate >= 0 && rule.rate <= 10000)) refuse(where, 'seepage rate', rule.rate, '0–10 000 mm/d');
  if (!(rule.wettedPerimeter >= 0 && rule.wettedPerimeter <= 200)) refuse(where, 'wetted perimeter', rule.wettedPerimeter, '0–200 m');
}

function refuse(where: string, name: string, value: number, limit: string): never {
  throw new RangeViolation(`${where}: ${name} ${value} is outside ${limit}; correct it or choose the rule 'none'`, [
    { severity: 'error', code: 'value-out-of-range', message: `${name} ${value} of ${where}`, value: String(value), limit },
  ]);
}

const NUMBERS_OF: Record<string, readonly string[]> = {
  none: [],
  'fraction-per-km': ['fraction'],
  efficiency: ['efficiency'],
  seepage: ['rate', 'wettedPerimeter'],
};

/**
 * A loss rule from untyped JSON.
 *
 * @throws {Malformed} for an unknown kind or a missing number; {RangeViolation} outside the limits.
 */
export function parseLossRule(value: unknown, where = 'loss rule'): LossRule {
  const record = typeof value === 'object' && value !== null ? (value as Record<string, unknown>) : {};
  const kind = String(record.kind);
  const names = Object.hasOwn(NUMBERS_OF, kind) ? NUMBERS_OF[kind] : null;
  if (!names) throw new Malformed(`${where}: kind '${kind}' is not one of ${Object.keys(NUMBERS_OF).join(', ')}`);
  for (const name of names) {
    if (typeof record[name] !== 'number') throw new Malformed(`${where}: '${kind}' needs the number '${name}'`);
  }
  const rule = Object.fromEntries([['kind', kind], ...names.map((name) => [name, record[name]])]) as unknown as LossRule;
  checkLossRule(rule, where);
  return rule;
}

/** The rule in words. @example lossRuleText({ kind: 'efficiency', efficiency: 0.8 }) // 'delivers 80 % of what enters' */
export function lossRuleText(rule: LossRule): string {
  if (rule.kind === 'none') return 'no loss';
  if (rule.kind === 'efficiency') return `delivers ${percent(rule.efficiency)} % of what enters`;
  if (rule.kind === 'fraction-per-km') return `loses ${percent(rule.fraction)} % of its flow per kilometre`;
  return `seeps ${rule.rate} mm/d over a wetted perimeter of ${rule.wettedPerimeter} m`;
}

function percent(fraction: number): number {
  return Math.round(fraction * 1000) / 10;
}
