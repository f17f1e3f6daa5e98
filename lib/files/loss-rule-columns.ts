/**
 * The loss of a reach from its properties: a rule, a value, and for seepage the wetted perimeter.
 */
import type { LossRule } from '../canal/loss-rule.ts';
import { textOf } from './feature-properties.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { RawFeature } from './raw-feature.ts';
import type { BoundTable } from './table-columns.ts';

const RULES = ['none', 'fraction_per_km', 'efficiency', 'seepage_mm_d'];

interface Limits {
  readonly fits: (value: number) => boolean;
  readonly words: string;
}

const LIMITS: Record<string, Limits> = {
  fraction_per_km: { fits: (value) => value >= 0 && value < 1, words: '0 or more and below 1 per km' },
  efficiency: { fits: (value) => value >= 0.05 && value <= 1, words: '0.05 to 1, or 5 to 100 percent' },
  seepage_mm_d: { fits: (value) => value >= 0 && value <= 5000, words: '0 to 5000 mm/d' },
  wetted_perimeter: { fits: (value) => value >= 0.1 && value <= 200, words: '0.1 to 200 m' },
};

/** The loss of a reach, or why it cannot be told. */
type LossReading =
  | { readonly rule: LossRule; readonly percent: boolean }
  | { readonly rule: null; readonly fault: { readonly message: string; readonly column: string; readonly limit: string } };

/**
 * Loss rule of a feature; nothing written is no loss. An efficiency above 1 and up to 100 is percent. What cannot be used is a fault, never
 * "no loss": water would go missing from the canal without a word.
 */
export function lossRuleOf(feature: RawFeature, bound: BoundTable['bound']): LossReading {
  const text = textOf(feature, bound, 'loss_rule');
  const valueText = textOf(feature, bound, 'loss_value');
  if (text === null && (valueText === null || Number(valueText) === 0)) return { rule: { kind: 'none' }, percent: false };
  if (text === null)
    return fault(bound, 'loss_rule', `Loss value "${shown(valueText ?? '')}" stands without a loss rule.`, RULES.join(', '));
  const rule = text.toLowerCase().replace(/[\s-]+/g, '_');
  if (rule === 'none') return { rule: { kind: 'none' }, percent: false };
  if (!RULES.includes(rule)) return fault(bound, 'loss_rule', `Loss rule "${shown(text)}" is not known.`, RULES.join(', '));
  const written = numberIn(feature, bound, 'loss_value');
  const percent = rule === 'efficiency' && written > 1 && written <= 100;
  const value = percent ? written / 100 : written;
  if (!LIMITS[rule].fits(value)) return unfit(feature, bound, 'loss_value', { rule, words: LIMITS[rule].words });
  if (rule === 'fraction_per_km') return { rule: { kind: 'fraction-per-km', fraction: value }, percent };
  if (rule === 'efficiency') return { rule: { kind: 'efficiency', efficiency: value }, percent };
  const wettedPerimeter = numberIn(feature, bound, 'wetted_perimeter');
  if (!LIMITS.wetted_perimeter.fits(wettedPerimeter))
    return unfit(feature, bound, 'wetted_perimeter', { rule, words: LIMITS.wetted_perimeter.words });
  return { rule: { kind: 'seepage', rate: value, wettedPerimeter }, percent };
}

/** Tells a fault of `lossRuleOf` as an error of its feature. */
export function reportLossFault(
  feature: RawFeature,
  reason: string,
  fault: { column: string; limit: string },
  findings: FindingList,
): void {
  findings.error({
    code: 'bad-loss-rule',
    message: reason,
    file: feature.file,
    row: feature.row,
    column: fault.column,
    limit: fault.limit,
    advice: 'Correct the loss of the reach, or write the rule "none".',
  });
}

/** Number of a role, NaN when it is missing or not a number. */
function numberIn(feature: RawFeature, bound: BoundTable['bound'], role: string): number {
  const text = textOf(feature, bound, role);
  return text === null ? Number.NaN : (bound.get(role)?.convert(Number(text)) ?? Number.NaN);
}

function unfit(
  feature: RawFeature,
  bound: BoundTable['bound'],
  role: string,
  { rule, words }: { rule: string; words: string },
): LossReading {
  const text = textOf(feature, bound, role);
  const thing = role === 'wetted_perimeter' ? 'wetted perimeter' : 'loss value';
  const message =
    text === null ? `Loss rule ${rule} has no ${thing}.` : `The ${thing} "${shown(text)}" of loss rule ${rule} is not within ${words}.`;
  return fault(bound, role, message, words);
}

function fault(bound: BoundTable['bound'], role: string, message: string, limit: string): LossReading {
  return { rule: null, fault: { message, column: bound.get(role)?.header ?? role, limit } };
}
