/**
 * What goes into a season and what comes out of it. The jobs room builds a `SeasonInput` from the database; the kernel packs it into
 * typed arrays and runs it; `explain` walks the same code for one parcel and day.
 */
import type { IsoDate } from '../base/civil-date.ts';
import type { WorkingStep } from '../base/working.ts';
import type { Stage } from '../crop/curve.ts';
import type { CarriedSeries, CompletedWeather, SeriesWeights, Site, SiteWeight } from '../weather/variable.ts';

/** Which published combination equation gives the reference ET that drives the crops. Both for the short surface here: the crop library is on grass. */
type ReferenceMethod = 'fao56' | 'asce2005';

/** How the reference ET of a site-day was got: given by the source, summed over its hours, or computed from its daily weather. */
export type SiteReferenceEt = 'given' | 'hourly-sum' | 'at-sites';

/** A layer of a soil, from `top` to `bottom` [m below the surface]; water contents [m³ m⁻³]. */
export interface SoilLayer {
  readonly top: number;
  readonly bottom: number;
  readonly fieldCapacity: number;
  readonly wiltingPoint: number;
}

/** How fast a soil lifts water from a water table: saturated conductivity [mm d⁻¹], bubbling head [m], exponent b of the retention curve [1]. */
export interface CapillaryProperties {
  readonly conductivity: number;
  readonly bubblingHead: number;
  readonly exponent: number;
}

/** Soil class. Water contents [m³ m⁻³], depths [m], water depths [mm]. */
export interface Soil {
  readonly code: string;
  readonly name: string;
  readonly fieldCapacity: number;
  readonly wiltingPoint: number;
  /** depth of the layer that dries by evaporation, Ze [m] */
  readonly evaporationDepth: number;
  readonly readilyEvaporableWater: number;
  readonly totalEvaporableWater: number;
  /** runoff curve number of the class under row crops, or NaN for no runoff */
  readonly curveNumber: number;
  /** rooting limited by a hard layer at this depth [m], or NaN */
  readonly rootLimit: number;
  /** layers from the surface down, without gaps; below the last one its values go on. Left out: one layer of the values above */
  readonly layers?: readonly SoilLayer[];
  /** θs [m³ m⁻³], for ponded rice; left out: 0.45 */
  readonly saturation?: number;
  /** shifts p (FAO-56, text of Table 22): fine soils −10 %, coarse soils +10 % of p. Left out: medium */
  readonly texture?: 'coarse' | 'medium' | 'fine';
  /** seepage and percolation under ponded water, after puddling [mm d⁻¹] */
  readonly percolationRate?: number;
  readonly capillary?: CapillaryProperties;
}

/** How water is put on a field. */
export interface ApplicationMethod {
  readonly code: string;
  readonly name: string;
  /** application efficiency Ea, 0–1 */
  readonly efficiency: number;
  /** fraction of soil surface wetted fw, 0–1 (FAO-56 Table 20) */
  readonly wettedFraction: number;
  /** true when wetted soil lies under the canopy (drip), FAO-56 Eq. 75 note */
  readonly underCanopy: boolean;
  /** most that the system can put on in a day, net [mm d⁻¹] */
  readonly maximumDailyDepth: number;
  /** share of readily available water at which an irrigation starts, 0–1 */
  readonly triggerFraction: number;
  /** least net depth worth an application [mm]; left out: 0 */
  readonly minimumDepth?: number;
  /** flow of the system over the field [L s⁻¹ ha⁻¹], bounds the gross depth of a day; left out: no bound */
  readonly flow?: number;
  /** Ea by net depth applied [mm], ascending; between the points linear, beyond them the end values. Left out: `efficiency` at every depth */
  readonly efficiencyByDepth?: readonly { readonly depth: number; readonly efficiency: number }[];
}

/**
 * When water is put on.
 *
 * depletion: when the depletion passes `trigger` × RAW (left out: the method's), refill up to `refill` of the depletion (1 = field capacity)
 * interval: every `days` from the planting on, refill
 * fixed-depth: `depth` each time the depletion passes it, or RAW where that is less
 * daily: the depletion of the day before is replaced every day
 * deficit: as depletion, with a trigger and refill of its own in each stage; a trigger above 1 lets the crop run short on purpose
 * none: rain-fed
 */
export type IrrigationRule =
  | { readonly kind: 'depletion'; readonly trigger?: number; readonly refill?: number }
  | { readonly kind: 'interval'; readonly days: number }
  | { readonly kind: 'fixed-depth'; readonly depth: number }
  | { readonly kind: 'daily' }
  | { readonly kind: 'deficit'; readonly stages: Readonly<Record<Stage, { readonly trigger: number; readonly refill: number }>> }
  | { readonly kind: 'none' };

/** Ponded rice. Depths [mm], times [d] counted from the planting (before it: negative) or the harvest (before it: positive). */
export interface Paddy {
  /** day the field is flooded for puddling, counted from the planting; −10 is ten days before */
  readonly floodFrom: number;
  /** day supply ends and the field drains, so many days before harvest */
  readonly drainBefore: number;
  /** ponded depth an application fills to, and the depth at which it starts */
  readonly pondTarget: number;
  readonly pondMinimum: number;
  /** height of the bunds; water above it spills */
  readonly bund: number;
  /** depth of soil brought to saturation by puddling [m] */
  readonly puddledDepth: number;
}

/** A canopy that does not cover the ground: orchard, vineyard, wide rows. FAO-56 chapter 9. */
export interface Canopy {
  /** fraction of the ground covered or shaded at noon in the mid season, fc eff, 0–1 */
  readonly cover: number;
  /** m */
  readonly height: number;
  /** Kcb of ground between the plants: 0.15 bare … of active ground cover */
  readonly groundBasal?: number;
  /** resistance correction Fr of stomatal control, 0–1 (FAO-56 Eq. 102) */
  readonly stomatalFactor?: number;
}

/** Mulch on the soil. */
export interface Mulch {
  readonly kind: 'plastic' | 'organic';
  /** fraction of the soil surface covered, 0–1 */
  readonly cover: number;
}

/** A crop of the library; coefficients are for the short (grass) surface in the standard climate (u2 = 2 m/s, RHmin = 45 %). */
export interface Crop {
  readonly code: string;
  readonly name: string;
  readonly group: string;
  readonly type: 'annual' | 'perennial' | 'forage' | 'forage-cut' | 'orchard';
  readonly surface: 'short' | 'tall';
  readonly basalInitial: number;
  readonly basalMid: number;
  readonly basalEnd: number;
  /** m */
  readonly heightMax: number;
  /** m */
  readonly rootDepthMin: number;
  /** m */
  readonly rootDepthMax: number;
  /** soil water depletion fraction p for ETc ≈ 5 mm/d (FAO-56 Table 22) */
  readonly depletionFraction: number;
  /** yield response factor Ky of the season, NaN when not listed */
  readonly yieldResponse: number;
  /** last irrigation, as a fraction of the late stage (0 = its start, 1 = harvest) */
  readonly lastIrrigation: number;
  /** single coefficients Kc of the table; left out: Kcb + 0.05 (mid, end), Kcb + 0.15 (initial) */
  readonly single?: { readonly initial: number; readonly mid: number; readonly end: number };
  /** salt tolerance: threshold of the saturation extract [dS m⁻¹], decline of yield [% per dS m⁻¹] */
  readonly salinity?: { readonly threshold: number; readonly slope: number };
  /** Ky by stage; a stage left out is not listed */
  readonly stageResponse?: Partial<Readonly<Record<Stage, number>>>;
  readonly canopy?: Canopy;
  readonly paddy?: Paddy;
  /** Kcb before green-up and after a killing frost, for perennials; left out: 0 */
  readonly dormantBasal?: number;
  /** crop of the table of critical temperatures (frost) */
  readonly frostTable?: string;
}

/**
 * A start that the weather decides, searched from the planting date of the planting (then the earliest day) to `latest` days after it; when the rule is
 * not met by then, `latest` is the start.
 *
 * air-temperature: running mean of `days` days reaches `threshold` [°C] (falling: drops to it)
 * soil-temperature: as above, of the estimated soil temperature
 * rain: `depth` [mm] falls within `days` days
 * frost-free: day after the last minimum below `threshold` [°C] in the window
 * growing-degree-days: sum above `base` from the earliest day reaches `sum` [°C d]
 */
export type StartRule = {
  readonly latest: number;
  /** days from the day found to the start; negative: before it, but never before the planting date. Left out: 0 */
  readonly offset?: number;
} & (
  | {
      readonly kind: 'air-temperature' | 'soil-temperature';
      readonly threshold: number;
      readonly days: number;
      readonly falling?: boolean;
    }
  | { readonly kind: 'rain'; readonly depth: number; readonly days: number }
  | { readonly kind: 'frost-free'; readonly threshold: number }
  | { readonly kind: 'growing-degree-days'; readonly base: number; readonly sum: number }
);

/** Stage lengths as sums of growing degree days [°C d] above `base`, temperatures held below `ceiling` [°C]. */
export interface ThermalStages {
  readonly base: number;
  readonly ceiling: number;
  readonly initial: number;
  readonly development: number;
  readonly mid: number;
  readonly late: number;
}

/** Lengths of the growth stages [d]; for cut forage the first cycle, with `laterCycle` after each cut. */
export interface CropCalendar {
  readonly code: string;
  readonly name: string;
  readonly initial: number;
  readonly development: number;
  readonly mid: number;
  readonly late: number;
  readonly laterCycle: { readonly initial: number; readonly development: number; readonly mid: number; readonly late: number } | null;
  /** stages by thermal time; the lengths in days above are then what stands in where no weather tells */
  readonly thermal?: ThermalStages;
  /** stages after a cut by thermal time */
  readonly laterThermal?: ThermalStages;
  readonly start?: StartRule;
  /** season ends on the first day after `notBefore` days from the start with a minimum at or below `threshold` [°C], or `after` days later: killing frost */
  readonly killingFrost?: { readonly threshold: number; readonly notBefore: number; readonly after?: number };
  /** coefficients of single cycles of a cut forage, from the first; a cycle past the end has the last one's */
  readonly cycles?: readonly { readonly basalInitial: number; readonly basalMid: number; readonly basalEnd: number }[];
}

/** One crop on a share of a parcel. Stages past `harvestDate` are cut off; cut dates restart the cycle. */
export interface Planting {
  readonly crop: Crop;
  readonly calendar: CropCalendar;
  readonly plantingDate: IsoDate;
  readonly harvestDate: IsoDate | null;
  readonly cutDates: readonly IsoDate[];
  /** share of the parcel's area, 0–1 */
  readonly areaShare: number;
  /** left out: refill at the allowed depletion of the method */
  readonly irrigation?: IrrigationRule;
  readonly mulch?: Mulch;
  /** stands in for the crop's canopy */
  readonly canopy?: Canopy;
  /** soil to the scheduling depth refilled so many days before planting; `depth` [mm] net instead where given */
  readonly preIrrigation?: { readonly daysBefore: number; readonly depth?: number };
  /** net depths [mm] given after planting whatever the soil says, for germination */
  readonly germination?: readonly { readonly daysAfter: number; readonly depth: number }[];
}

/** Soil water with depth: depletion below field capacity of each piece of the profile [mm], from the surface down, without gaps. */
export type DepletionProfile = readonly { readonly bottom: number; readonly depletion: number }[];

/** What the soil of a parcel holds on a morning. */
export interface InitialWater {
  readonly profile: DepletionProfile;
  /** De as a share of TEW, 0–1; left out: as the top of the profile */
  readonly surfaceShare?: number;
  /** snow on the ground, as water [mm] */
  readonly snow?: number;
}

/** Something measured or given at a parcel on some days; offsets from the first day of the run, ascending, negative before it. */
export interface DatedValues {
  readonly days: readonly number[];
  readonly values: readonly number[];
}

export interface ParcelInput {
  readonly code: string;
  /** m², on the ellipsoid */
  readonly area: number;
  /** degrees */
  readonly latitude: number;
  readonly longitude: number;
  /** m */
  readonly elevation: number;
  readonly soil: Soil;
  readonly method: ApplicationMethod;
  readonly plantings: readonly Planting[];
  readonly weights: readonly SiteWeight[];
  /** series that are carried with weights of their own; every other one goes by `weights` and the lapse rate of the settings */
  readonly series?: Partial<Record<CarriedSeries, SeriesWeights>>;
  /** Ea given for this parcel, in place of the method's */
  readonly efficiency?: number;
  /** electrical conductivity of the soil's saturation extract and of the irrigation water [dS m⁻¹] */
  readonly salinity?: { readonly soil: number; readonly water: number };
  /** depth of the water table [m]; between dates linear, beyond them the end values */
  readonly waterTable?: DatedValues;
  /** left out: the rule of the settings */
  readonly initialWater?: InitialWater;
  /** recorded deliveries: gross depth over the parcel [mm d⁻¹] */
  readonly deliveries?: DatedValues;
  /** observed basal coefficient, from images; between dates linear, within the planting that stands on them */
  readonly observedBasal?: DatedValues;
}

export interface SeasonSettings {
  readonly method: ReferenceMethod;
  /** root-zone depletion on the first day as a fraction of TAW */
  readonly initialDepletion: number;
  /** temperature lapse applied between site and parcel elevation [°C m⁻¹]; 0.0065 is the ISA value */
  readonly lapseRate: number;
  /** false: rain-fed, no irrigation is applied */
  readonly irrigate: boolean;
  /** true: curve-number runoff where the soil has one */
  readonly runoff: boolean;
  /** where the reference ET at the sites comes from, when the weather carries one; left out when it is computed at the parcels */
  readonly referenceEt?: SiteReferenceEt;
  /** dual: Kcb + Ke; single: Kc with the initial stage from the wetting interval. Left out: dual */
  readonly coefficient?: 'dual' | 'single';
  /** curve number by antecedent moisture: as it is, by the rain of five days before, or by the surface layer. Left out: average */
  readonly antecedentMoisture?: 'average' | 'five-day-rain' | 'surface-layer';
  /** true: precipitation on cold days is kept as snow and melts by degree-days */
  readonly snow?: boolean;
  /** true: frozen ground takes up no melt or rain, and does not evaporate */
  readonly frozenGround?: boolean;
  /** true: water rises from water tables where a parcel has one and its soil the properties */
  readonly capillaryRise?: boolean;
  /** salt stress on the crop; and the leaching requirement on top of irrigation. Left out: off */
  readonly salinity?: 'off' | 'stress' | 'stress-and-leaching';
  /** water as the rule of each planting asks, as recorded, or as recorded up to `recordedUntil` and by the rule from then on. Left out: rule */
  readonly water?: 'rule' | 'recorded' | 'recorded-then-rule';
  /** day offset of the first day that is not recorded */
  readonly recordedUntil?: number;
  /** what stands on ground between plantings. Left out: bare */
  readonly fallow?: 'bare' | 'weeds';
}

export interface SeasonInput {
  readonly startDate: IsoDate;
  readonly dayCount: number;
  readonly settings: SeasonSettings;
  readonly sites: readonly Site[];
  readonly weather: CompletedWeather;
  readonly parcels: readonly ParcelInput[];
  /** days at the start of weather and calendar that are stepped but not kept: spin-up. `startDate` is the first of them. Left out: 0 */
  readonly leadDays?: number;
}

/**
 * The stored daily variables, in storage order. Depths are over the whole parcel area (strips weighted by area share).
 * stored = round(value × scale) as Uint16; 65535 is missing.
 */
export const DAILY_VARIABLES = [
  { id: 'reference_et', unit: 'mm', scale: 100, term: 'Reference ET' },
  { id: 'crop_et', unit: 'mm', scale: 100, term: 'Crop ET, unstressed' },
  { id: 'adjusted_crop_et', unit: 'mm', scale: 100, term: 'Crop ET, adjusted for stress' },
  { id: 'evaporation', unit: 'mm', scale: 100, term: 'Soil evaporation' },
  { id: 'precipitation', unit: 'mm', scale: 100, term: 'Rain' },
  { id: 'surface_runoff', unit: 'mm', scale: 100, term: 'Runoff' },
  { id: 'effective_precipitation', unit: 'mm', scale: 100, term: 'Effective rain' },
  { id: 'net_requirement', unit: 'mm', scale: 100, term: 'Net irrigation requirement' },
  { id: 'gross_requirement', unit: 'mm', scale: 100, term: 'Gross irrigation requirement' },
  { id: 'deep_percolation', unit: 'mm', scale: 100, term: 'Deep percolation' },
  { id: 'root_zone_depletion', unit: 'mm', scale: 100, term: 'Root-zone depletion' },
  { id: 'total_available_water', unit: 'mm', scale: 100, term: 'Total available water' },
  { id: 'readily_available_water', unit: 'mm', scale: 100, term: 'Readily available water' },
  { id: 'basal_crop_coefficient', unit: '1', scale: 10000, term: 'Basal crop coefficient' },
  { id: 'stress_coefficient', unit: '1', scale: 10000, term: 'Stress coefficient' },
  { id: 'soil_water_depletion', unit: 'mm', scale: 100, term: 'Depletion of the soil to the deepest root' },
  {
    id: 'irrigation_percolation',
    unit: 'mm',
    scale: 100,
    term: 'Irrigation water lost below the roots: leaching, seepage of ponded fields, over-irrigation',
  },
  { id: 'capillary_rise', unit: 'mm', scale: 100, term: 'Capillary rise' },
  { id: 'snow_water', unit: 'mm', scale: 100, term: 'Snow on the ground, as water' },
  { id: 'ponded_water', unit: 'mm', scale: 100, term: 'Water above field capacity in ponded fields' },
] as const;

export type DailyVariable = (typeof DAILY_VARIABLES)[number]['id'];
/*
 * The stored days close: soil_water_depletion less that of the day before = adjusted_crop_et − effective_precipitation − net_requirement
 * + irrigation_percolation − capillary_rise + ponded_water less that of the day before, where effective_precipitation = precipitation
 * − (snow_water less that of the day before) − surface_runoff − deep_percolation. It is of all strips and of all soil the season's roots reach;
 * root_zone_depletion is of the planted strips and the root zone of the day. Runs of kernel version 2 and before have the first 16 variables.
 */
export const DAILY_VARIABLE_COUNT = DAILY_VARIABLES.length;
export const MISSING_STORED = 65535;

export interface SeasonOutput {
  /** [parcel × variable × day], in the order of DAILY_VARIABLES */
  readonly daily: Uint16Array;
  /** largest absolute water-balance residual over every strip and day [mm], in double precision before storage */
  readonly maxBalanceResidual: number;
  /** OR of FALLBACK bits per parcel and day, [parcel × day] */
  readonly flags: Uint32Array;
  /** `daily` before rounding, where it was asked for (`keep: 'double'`) */
  readonly dailyExact?: Float64Array;
  /** sums of ETc and ETc adj by planting and stage [mm], [planting × 4 stages × 2], plantings in the order of the parcels and of each parcel's list */
  readonly stageEt: Float64Array;
  /** first day of each stage and first day after the last, as offsets from the first day kept, [planting × 5]; as the weather settled them */
  readonly stageDays: Int32Array;
  /** soil water at the end of the run, per parcel, for the season that follows */
  readonly closing: readonly InitialWater[];
}

export type { Trace, WorkingStep } from '../base/working.ts';

export interface Working {
  readonly parcel: string;
  readonly date: IsoDate;
  readonly inputs: readonly {
    readonly site: string;
    readonly siteName: string;
    /** share of the site in every series without weights of its own */
    readonly weight: number;
    /** shares in the series that have weights of their own */
    readonly seriesWeights: Readonly<Record<string, number>>;
    readonly elevation: number;
    readonly values: Readonly<Record<string, number>>;
    readonly flags: readonly string[];
  }[];
  readonly steps: readonly WorkingStep[];
  /** the stored variables of the day, before rounding to storage */
  readonly results: Readonly<Record<DailyVariable, number>>;
}
