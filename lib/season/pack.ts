/**
 * A season made ready for the loop over parcels: checked input, calendar, and scratch arrays that every parcel uses again.
 */
import { type DayNumber, dayNumber, dayOfYear } from '../base/civil-date.ts';
import { type DailyConstants, dailyConstants, emptyReferenceDay, type ReferenceDay } from '../energy/combination.ts';
import { type SolarGeometry, solarGeometry } from '../energy/sun.ts';
import { type Checked, checkSeason, RUN_SURFACE } from './check.ts';
import type { StripClosing } from './initial-water.ts';
import { emptyWalk, type StripWalk } from './strip-walk.ts';
import { DAILY_VARIABLE_COUNT, type ParcelInput, type SeasonInput } from './types.ts';

/** Weather and what follows from it at one parcel, each [day]; overwritten by the next parcel. */
export interface ParcelWeather {
  /** sum of the weights of the sites present */
  readonly weightSum: Float64Array;
  /** °C */
  readonly airTemperatureMax: Float64Array;
  /** °C */
  readonly airTemperatureMin: Float64Array;
  /** (Tmax + Tmin) / 2 [°C]; NaN on a day without temperature */
  readonly airTemperatureMean: Float64Array;
  /** kPa */
  readonly actualVapourPressure: Float64Array;
  /** MJ m⁻² d⁻¹ */
  readonly solarRadiation: Float64Array;
  /** m s⁻¹ */
  readonly windSpeed2m: Float64Array;
  /** mm d⁻¹ */
  readonly precipitation: Float64Array;
  /** rain and melt that reach the ground [mm d⁻¹]; precipitation where no snow is kept */
  readonly liquid: Float64Array;
  /** snow on the ground at the end of the day, as water [mm]; where it is above 0 neither crop nor soil take water that day */
  readonly snowWater: Float64Array;
  /** 1 where the ground is frozen: nothing infiltrates, and it does not evaporate */
  readonly frozen: Uint8Array;
  /** of `liquid` [mm d⁻¹]; with antecedent moisture by the surface layer only that of frozen days, the loop reckons the rest */
  readonly surfaceRunoff: Float64Array;
  /** % */
  readonly humidityMinimum: Float64Array;
  /** climate part of Kc max */
  readonly climate: Float64Array;
  /** mm d⁻¹ */
  readonly referenceEt: Float64Array;
  /** sums of u2 and RHmin over the days before, [day + 1] */
  readonly windSum: Float64Array;
  readonly humiditySum: Float64Array;
}

/** The sites a parcel's weather is mixed from; overwritten by the next parcel. */
export interface Mix {
  readonly days: number;
  /** 1 where the site has weather that day, [site × day] */
  readonly present: Uint8Array;
  /** sites in use */
  count: number;
  /** none of them has a gap */
  complete: boolean;
  /** place of a site's first day in the weather arrays, per site in use */
  readonly start: Int32Array;
  readonly weight: Float64Array;
  /** temperature correction [°C] */
  readonly lapse: Float64Array;
  /** zeros: the correction of every other variable */
  readonly none: Float64Array;
}

/** Bits of `StripCurve.mark`. */
export const MARK = {
  planted: 1,
  firstDay: 2,
  /** the rule of the planting may call for water on its own account: depletion, or deficit */
  mayIrrigate: 4,
  /** water is put on today if there is any depletion: interval, daily replacement */
  due: 8,
  /** water is what `prescribed` says and nothing else */
  recorded: 16,
  /** bunds are up: water above field capacity is held */
  ponded: 32,
  /** `prescribed` is a refill down to the scheduling depth instead of a depth */
  refill: 64,
  /** first day of a drained field after ponding */
  drained: 128,
} as const;

/** A strip's crops over the run, each [day]; overwritten by the next strip. */
export interface StripCurve {
  readonly basal: Float64Array;
  readonly height: Float64Array;
  readonly heightFactor: Float64Array;
  readonly rootDepth: Float64Array;
  /** depth irrigation is scheduled over, see `scheduleDepth`; 0 where nothing is planted */
  readonly scheduleDepth: Float64Array;
  readonly tableFraction: Float64Array;
  /** TAW of the root zone [mm], through the layers of the soil */
  readonly available: Float64Array;
  /** water the soil holds between wilting point and field capacity down to the scheduling depth [mm] */
  readonly scheduleAvailable: Float64Array;
  /** given fraction of ground covered fc (orchards, images); NaN: from Kcb (FAO-56 Eq. 76) */
  readonly covered: Float64Array;
  /** factor on Ke for mulch, 1 without */
  readonly evaporationShare: Float64Array;
  /** share of the surface that dries and is wetted by it: what plastic leaves open, 1 without */
  readonly openShare: Float64Array;
  /** Ks of salinity, 1 without */
  readonly saltStress: Float64Array;
  /** most that rises from the water table [mm d⁻¹], 0 without */
  readonly capillaryMost: Float64Array;
  /** share of RAW at which the rule starts an irrigation; above 1 the crop runs short on purpose */
  readonly triggerShare: Float64Array;
  /** share of the depletion that an irrigation takes away, 1 = to field capacity */
  readonly refillShare: Float64Array;
  /** depth of an application of fixed depth [mm net]; 0: refill */
  readonly fixedDepth: Float64Array;
  /** water given whatever the soil says [mm]: net for pre-irrigation and germination; gross where `MARK.recorded` */
  readonly prescribed: Float64Array;
  /** 0 initial … 3 late; 0 where nothing is planted */
  readonly stage: Uint8Array;
  /** index of the planting in its parcel's list; −1 where nothing is planted */
  readonly planting: Int16Array;
  readonly mark: Uint8Array;
  /** water the soil holds down to the deepest root of the run [mm] */
  deepestAvailable: number;
}

export interface PackedSeason {
  readonly input: SeasonInput;
  readonly firstDay: DayNumber;
  readonly dayOfYear: Uint16Array;
  /** 1 where the site has weather that day, [site × day] */
  readonly present: Uint8Array;
  /** true for a site with weather on every day, [site] */
  readonly complete: readonly boolean[];
  readonly checked: Checked;
  readonly sun: SolarGeometry;
  readonly constants: DailyConstants;
  readonly reference: ReferenceDay;
  readonly mix: Mix;
  readonly weather: ParcelWeather;
  readonly flags: Uint32Array;
  readonly curve: StripCurve;
  /** the parcel's daily variables in double precision, [variable × day kept] */
  readonly daily: Float64Array;
  /** ETc and ETc adj of the parcel's plantings by stage [mm], [planting × 4 × 2] */
  readonly stageEt: Float64Array;
  /** the parcel's strips on the last evening */
  readonly closing: StripClosing[];
  /** what the walk over a strip reads and writes; set anew for each strip */
  readonly walk: StripWalk;
  /** the parcel whose sky is in `weather`; null for none */
  sky: ParcelInput | null;
}

/** Days of a season that are kept: all but the lead days. */
export function keptDays({ dayCount, leadDays }: Pick<SeasonInput, 'dayCount' | 'leadDays'>): number {
  return dayCount - (leadDays ?? 0);
}

/**
 * Checks what the parcels share and sets up the arrays of the loop.
 *
 * @throws {ShapeError} when arrays do not agree
 * @throws {RangeViolation} for a setting outside its limits
 */
export function packSeason(input: SeasonInput): PackedSeason {
  checkSeason(input);
  const days = input.dayCount;
  const firstDay = dayNumber(input.startDate);
  const { present, complete } = presence(input);
  const weather = emptyParcelWeather(days);
  const curve = emptyCurve(days);
  const plantings = input.parcels.reduce((most, parcel) => Math.max(most, parcel.plantings.length), 1);
  const stageEt = new Float64Array(8 * plantings);
  return {
    input,
    firstDay,
    dayOfYear: Uint16Array.from({ length: days }, (_, d) => dayOfYear(firstDay + d)),
    present,
    complete,
    checked: new WeakSet(),
    sun: solarGeometry(0),
    constants: dailyConstants(input.settings.method, RUN_SURFACE),
    reference: emptyReferenceDay(),
    mix: emptyMix(input, present),
    weather,
    flags: new Uint32Array(days),
    curve,
    daily: new Float64Array(DAILY_VARIABLE_COUNT * keptDays(input)),
    stageEt,
    closing: [],
    walk: emptyWalk({ input, weather, curve, stageEt, plantingShare: new Float64Array(plantings) }),
    sky: null,
  };
}

/** A site-day counts as present when every variable the season needs is there: one missing number must not leak into a parcel. */
function presence(input: SeasonInput): { present: Uint8Array; complete: boolean[] } {
  const { weather, dayCount } = input;
  const present = new Uint8Array(weather.siteCount * dayCount);
  const complete: boolean[] = [];
  for (let site = 0; site < weather.siteCount; site++) {
    let count = 0;
    for (let i = site * dayCount; i < (site + 1) * dayCount; i++) {
      const sum = weather.airTemperatureMax[i] + weather.airTemperatureMin[i] + weather.actualVapourPressure[i];
      const rest = weather.solarRadiation[i] + weather.windSpeed2m[i] + weather.precipitation[i];
      present[i] = Number.isFinite(sum + rest) ? 1 : 0;
      count += present[i];
    }
    complete.push(count === dayCount);
  }
  return { present, complete };
}

function emptyMix(input: SeasonInput, present: Uint8Array): Mix {
  const most = input.parcels.reduce((count, parcel) => Math.max(count, parcel.weights.length), 0);
  const perSite = () => new Float64Array(most);
  const start = new Int32Array(most);
  return { days: input.dayCount, present, count: 0, complete: true, start, weight: perSite(), lapse: perSite(), none: perSite() };
}

/** Weather rows of a parcel with nothing in them yet. */
export function emptyParcelWeather(days: number): ParcelWeather {
  const row = () => new Float64Array(days);
  return {
    weightSum: row(),
    airTemperatureMax: row(),
    airTemperatureMin: row(),
    airTemperatureMean: row(),
    actualVapourPressure: row(),
    solarRadiation: row(),
    windSpeed2m: row(),
    precipitation: row(),
    liquid: row(),
    snowWater: row(),
    frozen: new Uint8Array(days),
    surfaceRunoff: row(),
    humidityMinimum: row(),
    climate: row(),
    referenceEt: row(),
    windSum: new Float64Array(days + 1),
    humiditySum: new Float64Array(days + 1),
  };
}

/** Curves of a strip with nothing on them yet. */
export function emptyCurve(days: number): StripCurve {
  const row = () => new Float64Array(days);
  return {
    basal: row(),
    height: row(),
    heightFactor: row(),
    rootDepth: row(),
    scheduleDepth: row(),
    tableFraction: row(),
    available: row(),
    scheduleAvailable: row(),
    covered: row(),
    evaporationShare: row(),
    openShare: row(),
    saltStress: row(),
    capillaryMost: row(),
    triggerShare: row(),
    refillShare: row(),
    fixedDepth: row(),
    prescribed: row(),
    stage: new Uint8Array(days),
    planting: new Int16Array(days),
    mark: new Uint8Array(days),
    deepestAvailable: Number.NaN,
  };
}
