/** One parcel over one period. Depths are sums over the parcel's area [mm]; NaN where not computed. */
export interface ParcelPeriodRow {
  readonly parcel: string;
  readonly turnout: string | null;
  readonly reach: string | null;
  /** names of the crops, in order of planting */
  readonly crops: readonly string[];
  readonly method: string;
  readonly soil: string;
  /** m² */
  readonly area: number;
  readonly start: string;
  readonly end: string;
  readonly referenceEt: number;
  readonly cropEt: number;
  readonly adjustedCropEt: number;
  readonly precipitation: number;
  readonly effectivePrecipitation: number;
  readonly netRequirement: number;
  readonly grossRequirement: number;
  readonly deepPercolation: number;
  /** at the end of the period [mm] */
  readonly rootZoneDepletion: number;
  /** mean of the days, 0–1 */
  readonly stressCoefficient: number;
  /** gross requirement [m³] */
  readonly grossVolume: number;
}
