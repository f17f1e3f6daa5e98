/**
 * What goes into a season and what comes out of it. The jobs room builds a `SeasonInput` from the database; the kernel packs it into
 * typed arrays and runs it; `explain` walks the same code for one parcel and day.
 */
import type { IsoDate } from '../base/civil-date.ts';
import type { WorkingStep } from '../base/working.ts';
import type { CarriedSeries, CompletedWeather, SeriesWeights, Site, SiteWeight } from '../weather/variable.ts';

/** Which published combination equation gives the reference ET that drives the crops. Both for the short surface here: the crop library is on grass. */
type ReferenceMethod = 'fao56' | 'asce2005';

/** How the reference ET of a site-day was got: given by the source, summed over its hours, or computed from its daily weather. */
export type SiteReferenceEt = 'given' | 'hourly-sum' | 'at-sites';

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
}

export interface SeasonInput {
  readonly startDate: IsoDate;
  readonly dayCount: number;
  readonly settings: SeasonSettings;
  readonly sites: readonly Site[];
  readonly weather: CompletedWeather;
  readonly parcels: readonly ParcelInput[];
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
] as const;

export type DailyVariable = (typeof DAILY_VARIABLES)[number]['id'];
/*
 * The stored days close: soil_water_depletion less that of the day before = adjusted_crop_et − effective_precipitation − net_requirement,
 * where effective_precipitation = precipitation − surface_runoff − deep_percolation. It is of all strips and of all soil the season's roots
 * reach; root_zone_depletion is of the planted strips and the root zone of the day.
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
