/** What shortage of water costs a planting, from its ET by growth stage. */
import type { Stage } from '../crop/curve.ts';
import { relativeYield, relativeYieldOfStages } from '../crop/yield-response.ts';
import type { Crop } from './types.ts';

export const STAGES: readonly Stage[] = ['initial', 'development', 'mid', 'late'];

/** ET of a planting in one stage [mm], and the Ky of the stage, NaN where the source lists none. */
export interface StageEt {
  readonly stage: Stage;
  readonly cropEt: number;
  readonly adjustedCropEt: number;
  readonly response: number;
}

export interface PlantingYield {
  readonly stages: readonly StageEt[];
  /** ETc and ETc adj over the stages [mm] */
  readonly cropEt: number;
  readonly adjustedCropEt: number;
  /** Ya / Ym by the Ky of the season, NaN without one or without ET */
  readonly bySeason: number;
  /** Ya / Ym by the Ky of the stages, NaN where none is listed */
  readonly byStage: number;
}

/**
 * Relative yield of one planting.
 *
 * @param stageEt ETc and ETc adj of the four stages [mm], [4 × 2], as `SeasonOutput.stageEt` has them
 * @throws never; a crop without a listed response gives NaN
 * Source: FAO-56 Eq. 90; FAO-33 Table 24.
 */
export function plantingYield(crop: Pick<Crop, 'yieldResponse' | 'stageResponse'>, stageEt: ArrayLike<number>): PlantingYield {
  const stages = STAGES.map((stage, k): StageEt => {
    const response = crop.stageResponse?.[stage] ?? Number.NaN;
    return { stage, cropEt: stageEt[2 * k], adjustedCropEt: stageEt[2 * k + 1], response };
  });
  const cropEt = stages.reduce((sum, stage) => sum + stage.cropEt, 0);
  const adjustedCropEt = stages.reduce((sum, stage) => sum + stage.adjustedCropEt, 0);
  const listed = stages.filter(({ response }) => !Number.isNaN(response));
  return {
    stages,
    cropEt,
    adjustedCropEt,
    bySeason: cropEt > 0 ? relativeYield(crop.yieldResponse, adjustedCropEt, cropEt) : Number.NaN,
    byStage: cropEt > 0 && listed.length > 0 ? relativeYieldOfStages(listed) : Number.NaN,
  };
}
