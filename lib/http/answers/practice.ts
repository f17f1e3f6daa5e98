/** How a planting is watered and covered, as the answers carry it. */
import type { PlantingPractice } from '../../files/reading.ts';
import type { IrrigationRule } from '../../season/types.ts';
import type { PlantingPracticeAnswer } from '../contract/practice.ts';

/** Members of a planting that the answers name; null where the planting says nothing. */
export function practiceMembers({ irrigation, mulch, canopy, preIrrigation, germination }: PlantingPractice): PlantingPracticeAnswer {
  return {
    irrigation: irrigation ? ruleMembers(irrigation) : null,
    mulch: mulch ? { kind: mulch.kind, cover: mulch.cover } : null,
    canopy: canopy
      ? {
          cover: canopy.cover,
          height_m: canopy.height,
          ground_basal: canopy.groundBasal ?? null,
          stomatal_factor: canopy.stomatalFactor ?? null,
        }
      : null,
    pre_irrigation: preIrrigation ? { days_before: preIrrigation.daysBefore, depth_mm: preIrrigation.depth ?? null } : null,
    germination: (germination ?? []).map(({ daysAfter, depth }) => ({ days_after: daysAfter, depth_mm: depth })),
  };
}

function ruleMembers(rule: IrrigationRule): NonNullable<PlantingPracticeAnswer['irrigation']> {
  return {
    kind: rule.kind,
    trigger: rule.kind === 'depletion' ? (rule.trigger ?? null) : null,
    refill: rule.kind === 'depletion' ? (rule.refill ?? null) : null,
    interval_d: rule.kind === 'interval' ? rule.days : null,
    depth_mm: rule.kind === 'fixed-depth' ? rule.depth : null,
    stages: rule.kind === 'deficit' ? { ...rule.stages } : null,
  };
}
