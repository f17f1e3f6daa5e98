/**
 * One day of one strip as the loop went through it: the numbers behind its working. Water [mm], coefficients and fractions [1], depths [m].
 */

/** What came, and what the strip carried over. */
interface Opening {
  readonly day: number;
  readonly planted: boolean;
  readonly planting: number;
  /** Dr, Db, De, X of the day before, and the share of the surface that dried: few, times what plastic leaves open */
  readonly openingDepletion: number;
  readonly openingBelow: number;
  readonly openingSurface: number;
  readonly openingPond: number;
  readonly openingExposed: number;
  /** TAW of the day before, of the day, and of the soil to the deepest root */
  readonly availableBefore: number;
  readonly available: number;
  readonly deepest: number;
  /** depletion that came with the soil the roots grew into; negative when the root zone became shallower */
  readonly moved: number;
  readonly grownDepletion: number;
  readonly belowGrown: number;
}

/** Rain, melt and ground. */
interface Rain {
  readonly precipitation: number;
  readonly snowBefore: number;
  readonly snowWater: number;
  readonly liquid: number;
  readonly frozen: boolean;
  readonly ponded: boolean;
  /** CN of the day where the surface layer decides it, else NaN */
  readonly curveNumber: number;
  readonly surfaceRunoff: number;
  readonly infiltration: number;
  readonly rainedDepletion: number;
  readonly rainExcess: number;
  readonly rainedBelow: number;
  readonly deepPercolation: number;
}

/** Why water was put on, or not. */
export type Call =
  | 'none'
  | 'rain-fed'
  | 'depletion'
  | 'short'
  | 'goes-on'
  | 'due'
  | 'recorded'
  | 'prescribed'
  | 'refill'
  | 'pond'
  | 'too-little'
  | 'waits';

/** The irrigation of the day. */
interface Irrigation {
  readonly call: Call;
  /** TAW of the soil down to the scheduling depth, and its depletion after rain */
  readonly scheduleAvailable: number;
  readonly scheduleDepletion: number;
  readonly rainedSurface: number;
  /** depletion that calls for water */
  readonly calling: number;
  readonly triggerFraction: number;
  readonly trigger: number;
  /** depletion the refill goes down to */
  readonly goal: number;
  readonly leachingRequirement: number;
  /** depth asked for before the limits of the system */
  readonly wanted: number;
  readonly irrigation: number;
  readonly efficiency: number;
  readonly gross: number;
  /** X after rain; pores, minimum and target of the pond */
  /** X after rain; pores of the puddled soil and height of the bunds */
  readonly pondRained: number;
  readonly pores: number;
  readonly bund: number;
  /** what left X over the bund, downwards, and when the field was drained */
  readonly spill: number;
  readonly seepage: number;
  readonly released: number;
  /** X after all this, before the day's ET */
  readonly pond: number;
  /** irrigation that passed the root zone, and what of it the soil below kept */
  readonly irrigationExcess: number;
  readonly irrigationKept: number;
  readonly irrigationPercolation: number;
  readonly wettedDepletion: number;
  readonly capillaryRise: number;
  readonly refilled: number;
  readonly below: number;
}

/** Evaporation, transpiration and the end of the day. */
interface Use {
  readonly referenceEt: number;
  readonly basal: number;
  readonly wettedSurface: number;
  readonly wettedFraction: number;
  readonly maximum: number;
  readonly covered: number;
  readonly exposedWetted: number;
  readonly reduction: number;
  readonly evaporationCoefficient: number;
  readonly cropEt: number;
  readonly depletionFraction: number;
  readonly waterStress: number;
  readonly saltStress: number;
  readonly stress: number;
  readonly left: number;
  readonly transpiration: number;
  readonly evaporation: number;
  readonly closingSurface: number;
  readonly closingDepletion: number;
  readonly closingPond: number;
  readonly residual: number;
}

/** A strip's day. */
export interface DayRecord extends Opening, Rain, Irrigation, Use {}
