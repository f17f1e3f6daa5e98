/**
 * A season of one site and one parcel on the same spot, with weather made by rule: for tests of what a strip's rows hold.
 */
import { placeParcel } from '../../lib/season/kernel.ts';
import { type PackedSeason, packSeason, type StripCurve } from '../../lib/season/pack.ts';
import { drawCurve, type ParcelPlan } from '../../lib/season/strip-curve.ts';
import type { Crop, CropCalendar, ParcelInput, Planting, SeasonInput, SeasonSettings, Soil } from '../../lib/season/types.ts';

export interface DayWeather {
  readonly max: number;
  readonly min: number;
  readonly rain?: number;
  readonly wind?: number;
  /** kPa */
  readonly vapour?: number;
}

export const LOAM: Soil = {
  code: 'loam',
  name: 'Loam',
  fieldCapacity: 0.25,
  wiltingPoint: 0.12,
  evaporationDepth: 0.1,
  readilyEvaporableWater: 9,
  totalEvaporableWater: 19,
  curveNumber: Number.NaN,
  rootLimit: Number.NaN,
};

export const BEAN: Crop = {
  code: 'bean',
  name: 'Bean',
  group: 'legumes',
  type: 'annual',
  surface: 'short',
  basalInitial: 0.15,
  basalMid: 1.1,
  basalEnd: 0.25,
  heightMax: 0.4,
  rootDepthMin: 0.2,
  rootDepthMax: 0.8,
  depletionFraction: 0.45,
  yieldResponse: 1.15,
  lastIrrigation: 0.5,
};

export const BEAN_DAYS: CropCalendar = { code: 'c', name: 'c', initial: 25, development: 25, mid: 30, late: 20, laterCycle: null };

export function planting(over: Partial<Planting> = {}): Planting {
  return { crop: BEAN, calendar: BEAN_DAYS, plantingDate: '2023-05-22', harvestDate: null, cutDates: [], areaShare: 1, ...over };
}

export interface StripOptions {
  readonly plantings: readonly Planting[];
  readonly startDate?: string;
  readonly days?: number;
  readonly weather?: (day: number) => DayWeather;
  readonly settings?: Partial<SeasonSettings>;
  readonly parcel?: Partial<ParcelInput>;
}

const MILD: DayWeather = { max: 28, min: 14 };

export function oneParcel(options: StripOptions): SeasonInput {
  const days = options.days ?? 365;
  const rows = Array.from({ length: days }, (_, d) => (options.weather ?? (() => MILD))(d));
  const row = (of: (day: DayWeather) => number) => Float64Array.from(rows, of);
  return {
    startDate: options.startDate ?? '2023-01-01',
    dayCount: days,
    settings: { method: 'fao56', initialDepletion: 0.3, lapseRate: 0, irrigate: true, runoff: false, ...options.settings },
    sites: [{ code: 'S', name: 'Made-up station', longitude: -1, latitude: 40, elevation: 100, windHeight: 2 }],
    weather: {
      siteCount: 1,
      dayCount: days,
      airTemperatureMax: row(({ max }) => max),
      airTemperatureMin: row(({ min }) => min),
      actualVapourPressure: row(({ vapour }) => vapour ?? 1.2),
      solarRadiation: row(() => 22),
      windSpeed2m: row(({ wind }) => wind ?? 2),
      precipitation: row(({ rain }) => rain ?? 0),
      flags: new Uint32Array(days),
    },
    parcels: [
      {
        code: 'P',
        area: 10000,
        latitude: 40,
        longitude: -1,
        elevation: 100,
        soil: LOAM,
        method: {
          code: 'm',
          name: 'm',
          efficiency: 0.8,
          wettedFraction: 1,
          underCanopy: false,
          maximumDailyDepth: 50,
          triggerFraction: 1,
        },
        plantings: options.plantings,
        weights: [{ site: 0, weight: 1 }],
        ...options.parcel,
      },
    ],
  };
}

export interface DrawnStrip {
  readonly season: PackedSeason;
  readonly plan: ParcelPlan;
  readonly curve: StripCurve;
  readonly deepestRoot: number;
}

/** Places the parcel and draws its first strip. */
export function drawnStrip(options: StripOptions): DrawnStrip {
  const season = packSeason(oneParcel(options));
  const [parcel] = season.input.parcels;
  const plan = placeParcel(season, parcel);
  const deepestRoot = drawCurve(season, parcel, plan.strips[0], plan.strips);
  return { season, plan, curve: season.curve, deepestRoot };
}
