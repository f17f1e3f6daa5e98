/**
 * The stage of the buds from thermal time, and how a night's temperature stands to what they bear.
 */

/** One stage of a table of critical temperatures. */
export interface BudStage {
  readonly id: string;
  readonly name: string;
  /** at which a tenth of the buds are killed in half an hour [°C] */
  readonly tenthKilled: number;
  /** at which nine tenths are killed [°C] */
  readonly mostKilled: number;
  /** thermal time at which the stage begins [°C d] */
  readonly begins: number;
}

/**
 * Stage that thermal time has reached.
 *
 * @param stages in the order of the season
 * @param thermalTime [°C d]
 * @returns null before the first stage, while the buds are dormant, and for NaN
 * @example stageReached([{ id: 'a', name: '', tenthKilled: -9, mostKilled: -17, begins: 40 }], 39) // null
 * Source: definition.
 */
export function stageReached(stages: readonly BudStage[], thermalTime: number): BudStage | null {
  return stages.findLast(({ begins }) => thermalTime >= begins) ?? null;
}

/**
 * - `severe`: the expected temperature is at or below that at which nine tenths are killed
 * - `damaging`: at or below that at which a tenth is killed
 * - `possible`: only the low end of the band is
 * - `none`: not even that
 */
export type FrostRisk = 'severe' | 'damaging' | 'possible' | 'none';

/** Temperatures of a night at the plant [°C]. */
export interface NightAtPlant {
  readonly expected: number;
  /** low end of the band */
  readonly low: number;
}

/**
 * Risk of a night at a stage.
 *
 * @param mostKilled NaN where no such temperature is known
 * @returns null where the temperature or the critical temperature is missing
 * @example frostRisk({ expected: -2.5, low: -4 }, { tenthKilled: -2.2, mostKilled: -3.9 }) // 'damaging'
 * Source: definition of the critical temperatures, 30 minutes of exposure.
 */
export function frostRisk(
  { expected, low }: NightAtPlant,
  { tenthKilled, mostKilled }: Pick<BudStage, 'tenthKilled' | 'mostKilled'>,
): FrostRisk | null {
  if (Number.isNaN(expected + low + tenthKilled)) return null;
  if (expected <= mostKilled) return 'severe';
  if (expected <= tenthKilled) return 'damaging';
  return low <= tenthKilled ? 'possible' : 'none';
}

/** Standard normal deviate that leaves a tenth on either side of a band: exceeded by one night in ten. Source: normal distribution. */
export const TENTH_DEVIATE = 1.2816;
