/**
 * The loss of a reach from its properties: a rule, a value, and for seepage the wetted perimeter.
 */
import type { LossRule } from '../canal/loss-rule.ts';
import { numberOf, textOf } from './feature-properties.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { RawFeature } from './geojson.ts';
import type { BoundTable } from './table-columns.ts';

const NO_LOSS: LossRule = { kind: 'none' };
const RULES = ['none', 'fraction_per_km', 'efficiency', 'seepage_mm_d'];
const LIMITS: Record<string, { low: number; high: number; unit: string }> = {
  fraction_per_km: { low: 0, high: 0.5, unit: 'per km' },
  efficiency: { low: 0.05, high: 1, unit: '' },
  seepage_mm_d: { low: 0, high: 5000, unit: 'mm/d' },
};

/** Loss rule of a feature; a missing or unusable one is "none", with a warning when something was written. */
export function lossRuleOf(feature: RawFeature, bound: BoundTable['bound'], findings: FindingList): LossRule {
  const text = textOf(feature, bound, 'loss_rule');
  if (text === null) return NO_LOSS;
  const rule = text.toLowerCase().replace(/[\s-]+/g, '_');
  const bad = (message: string, advice: string, limit?: string): LossRule => {
    findings.warn({
      code: 'bad-loss-rule',
      message: `${message} The reach is taken without loss.`,
      file: feature.file,
      row: feature.row,
      column: bound.get('loss_rule')?.header,
      value: shown(text),
      limit,
      advice,
    });
    return NO_LOSS;
  };
  if (rule === 'none') return NO_LOSS;
  const limits = LIMITS[rule];
  if (!limits) return bad(`Loss rule "${shown(text)}" is not known.`, 'Use one of the rules.', RULES.join(', '));
  const value = numberOf(feature, bound, { role: 'loss_value', ...limits }, findings);
  if (value === null)
    return bad(
      `Loss rule ${rule} has no usable value.`,
      'Give it in "loss_value".',
      `${limits.low} to ${limits.high} ${limits.unit}`.trim(),
    );
  if (rule === 'fraction_per_km') return { kind: 'fraction-per-km', fraction: value };
  if (rule === 'efficiency') return { kind: 'efficiency', efficiency: value };
  const wettedPerimeter = numberOf(feature, bound, { role: 'wetted_perimeter', low: 0.1, high: 200, unit: 'm' }, findings);
  return wettedPerimeter === null
    ? bad('Seepage needs a wetted perimeter.', 'Give it in "wetted_perimeter_m".')
    : { kind: 'seepage', rate: value, wettedPerimeter };
}
