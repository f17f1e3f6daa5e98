/**
 * What a reach loses between its head and its tail, as a rule of its length and of what it carries.
 *
 * Every rule is affine in the flow leaving at the tail (outflow O) and in what its turnouts draw (T), both m³ d⁻¹:
 *   I = a O + b T + c·[O + T > 0]
 * so one roll-up serves all of them.
 */
import { RangeViolation } from '../base/errors.ts';

export type LossRule =
  | { readonly kind: 'none' }
  /** share of the flow lost in each kilometre, compounding, 0 ≤ fraction < 1 */
  | { readonly kind: 'fraction-per-km'; readonly fraction: number }
  /** outflow and deliveries as a share of the inflow, 0 < efficiency ≤ 1 */
  | { readonly kind: 'efficiency'; readonly efficiency: number }
  /** seepage through the wetted perimeter: rate [mm d⁻¹], wettedPerimeter [m] */
  | { readonly kind: 'seepage'; readonly rate: number; readonly wettedPerimeter: number };

/** The three numbers of a rule on a reach of known length: inflow = perOutflow·O + perTurnout·T + whenRunning (only if O + T > 0). */
interface LossCoefficients {
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
