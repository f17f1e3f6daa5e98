/** How a planting is watered and covered, as the answers carry it. */

import type { z } from 'zod';
import type { PlantingPractice } from '../../files/reading.ts';
import type { IrrigationRule } from '../../season/types.ts';
import type { PlantingPracticeAnswer, practiceColumns } from '../contract/practice.ts';

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

/** The members of a practice as columns of a table. */
export function practiceRow({
  irrigation,
  mulch,
  canopy,
  pre_irrigation,
  germination,
}: PlantingPracticeAnswer): z.infer<typeof practiceColumns> {
  const stages = irrigation?.stages;
  return {
    irrigation_rule: irrigation?.kind ?? null,
    irrigation_trigger: irrigation?.trigger ?? null,
    irrigation_refill: irrigation?.refill ?? null,
    irrigation_interval_d: irrigation?.interval_d ?? null,
    irrigation_depth_mm: irrigation?.depth_mm ?? null,
    trigger_initial: stages?.initial.trigger ?? null,
    refill_initial: stages?.initial.refill ?? null,
    trigger_development: stages?.development.trigger ?? null,
    refill_development: stages?.development.refill ?? null,
    trigger_mid: stages?.mid.trigger ?? null,
    refill_mid: stages?.mid.refill ?? null,
    trigger_late: stages?.late.trigger ?? null,
    refill_late: stages?.late.refill ?? null,
    mulch: mulch?.kind ?? null,
    mulch_cover: mulch?.cover ?? null,
    canopy_cover: canopy?.cover ?? null,
    canopy_height_m: canopy?.height_m ?? null,
    pre_irrigation_days: pre_irrigation?.days_before ?? null,
    pre_irrigation_depth_mm: pre_irrigation?.depth_mm ?? null,
    germination: germination.map(({ days_after, depth_mm }) => `${days_after}:${depth_mm}`).join(';') || null,
  };
}
