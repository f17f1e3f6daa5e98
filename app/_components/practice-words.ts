/** How a planting is watered and covered, in words. */
import type { UnitSystem } from '../../lib/base/units.ts';
import type { PlantingPracticeAnswer } from '../../lib/http/contract/practice.ts';
import { figure, percent, unitOf } from './figures.ts';

type Irrigation = NonNullable<PlantingPracticeAnswer['irrigation']>;

/** One phrase for each thing said of the planting; none where nothing was said. */
export function practiceWords(practice: PlantingPracticeAnswer, units: UnitSystem): string[] {
  const { irrigation, mulch, canopy, pre_irrigation, germination } = practice;
  const net = (depth: number | null) => `${figure(depth, 'depth', units)} ${unitOf('depth', units)} net`;
  return [
    ...(irrigation ? [irrigationWords(irrigation, net)] : []),
    ...(pre_irrigation
      ? [
          `${pre_irrigation.depth_mm === null ? 'soil refilled' : net(pre_irrigation.depth_mm)} ${pre_irrigation.days_before} d before planting`,
        ]
      : []),
    ...germination.map(({ days_after, depth_mm }) => `${net(depth_mm)} ${days_after} d after planting`),
    ...(mulch ? [`${mulch.kind} mulch on ${percent(mulch.cover)}`] : []),
    ...(canopy
      ? [`canopy over ${percent(canopy.cover)}, ${figure(canopy.height_m, 'length', units)} ${unitOf('length', units)} high`]
      : []),
  ];
}

function irrigationWords(
  { kind, trigger, refill, interval_d, depth_mm, stages }: Irrigation,
  net: (depth: number | null) => string,
): string {
  switch (kind) {
    case 'none':
      return 'not irrigated';
    case 'daily':
      return 'every day';
    case 'interval':
      return `every ${interval_d} d`;
    case 'fixed-depth':
      return `${net(depth_mm)} at a time`;
    case 'deficit':
      return `runs short on purpose: starts at ${
        stages
          ? Object.values(stages)
              .map((stage) => percent(stage.trigger))
              .join(', ')
          : ''
      } of readily available water by stage`;
    default:
      return [
        trigger === null ? 'by depletion' : `starts at ${percent(trigger)} of readily available water`,
        ...(refill === null ? [] : [`refills ${percent(refill)}`]),
      ].join(', ');
  }
}
