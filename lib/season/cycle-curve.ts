/**
 * The coefficients of one cycle: what the table says, and what the climate of the parcel, a canopy, a mulch or the single coefficient makes of it.
 */

import { canopyBasal, fittedStomatalFactor, MATURE_COVER } from '../crop/canopy.ts';
import { adjustedCoefficient, climateTerm, END_ADJUSTED_FROM } from '../crop/climate-adjustment.ts';
import { BARE_SOIL_COEFFICIENT } from '../crop/cover.ts';
import type { Cycle, StageCoefficients } from '../crop/curve.ts';
import { mulchedSingle } from '../crop/mulch.ts';
import { riceInitialCoefficient } from '../crop/rice.ts';
import { type InitialStage, initialFromWettings, singleFromBasal } from '../crop/single-coefficient.ts';
import { initialStageOf } from './initial-wetting.ts';
import type { PackedSeason, ParcelWeather } from './pack.ts';
import type { PlantedCycles } from './stage-days.ts';
import type { Canopy, Crop, CropCalendar, ParcelInput, Planting } from './types.ts';

/** Stage of which a climate is taken, with what of it lies in the run: days `from … to − 1`. */
export interface StageClimate {
  readonly from: number;
  readonly to: number;
  /** mean u2 [m s⁻¹], NaN when no day of the stage is in the run */
  readonly windSpeed2m: number;
  /** mean RHmin [%], likewise */
  readonly humidityMinimum: number;
}

/** Climates of the stages whose coefficients are adjusted. */
export interface StageClimates {
  readonly mid: StageClimate;
  readonly late: StageClimate;
}

/** Coefficients of a cycle, and how they came about. */
export interface CycleCurve {
  /** Kcb as the tables have it; Kc where the run is on single coefficients */
  readonly table: StageCoefficients;
  /** what the curve is drawn with; on tall reference ET where the crop's table is */
  readonly coefficients: StageCoefficients;
  readonly climates: StageClimates;
  /** m */
  readonly heightMax: number;
  /** canopy that Kcb mid is of; null where the table's stands */
  readonly canopy: (Canopy & { readonly stomatalFactor: number }) | null;
  /** wettings behind Kc ini of a run on single coefficients; null otherwise, and where the table value stands */
  readonly initialStage: InitialStage | null;
}

/**
 * Climate of a stage of a cycle: means over those of its days that lie in the run and in the cycle, whether observed, forecast or the normal of the day.
 *
 * @param from first day of the stage
 * @param length stage length [d]
 */
export function stageClimate(weather: ParcelWeather, cycle: Cycle, from: number, length: number): StageClimate {
  const days = weather.windSpeed2m.length;
  const first = Math.max(0, from);
  const end = Math.min(days, cycle.end, from + length);
  const count = end - first;
  if (count <= 0) return { from: first, to: first, windSpeed2m: Number.NaN, humidityMinimum: Number.NaN };
  return {
    from: first,
    to: end,
    windSpeed2m: (weather.windSum[end] - weather.windSum[first]) / count,
    humidityMinimum: (weather.humiditySum[end] - weather.humiditySum[first]) / count,
  };
}

/** Mid and late stage of a cycle as the climate adjustment sees them. */
export function stageClimates(weather: ParcelWeather, cycle: Cycle): StageClimates {
  const mid = cycle.start + cycle.lengths.initial + cycle.lengths.development;
  return {
    mid: stageClimate(weather, cycle, mid, cycle.lengths.mid),
    late: stageClimate(weather, cycle, mid + cycle.lengths.mid, cycle.lengths.late),
  };
}

/** Kcb of a cycle as the library has it: the calendar's for that cycle, else the crop's. The last cycle listed stands for all after it. */
export function tableCoefficients(crop: Crop, calendar: CropCalendar, cycle: number): StageCoefficients {
  const own = calendar.cycles?.[Math.min(cycle, calendar.cycles.length - 1)];
  const { basalInitial, basalMid, basalEnd } = own ?? crop;
  return { initial: basalInitial, mid: basalMid, end: basalEnd };
}

/**
 * Coefficients in the climate of the parcel.
 *
 * Kcb mid (or Kc mid) is adjusted to the mid stage, the end value to the late stage and only where the table gives at least 0.45. A stage with no day in
 * the run keeps its table value.
 *
 * Source: FAO-56 Eq. 62, 65 and 70.
 */
export function adjustedCoefficients(table: StageCoefficients, climates: StageClimates, height: number): StageCoefficients {
  const { mid, late } = climates;
  return {
    initial: table.initial,
    mid: adjustedCoefficient(table.mid, mid.windSpeed2m, mid.humidityMinimum, height),
    end: table.end < END_ADJUSTED_FROM ? table.end : adjustedCoefficient(table.end, late.windSpeed2m, late.humidityMinimum, height),
  };
}

/**
 * Everything the curve of a cycle is drawn with.
 *
 * A table on tall reference ET is taken as it is: tall reference ET already answers to wind and dryness as a tall crop does, and the ratio
 * of the day brings the curve to short reference ET. A canopy gives Kcb mid; initial and end values keep the table's proportion to it (the initial one never
 * above the table), but are at least what the ground between the plants uses.
 *
 * @param k place of the cycle in the planting
 * Source: FAO-56 Eq. 62–70 and chapter 9; proportions of initial and end under a canopy: choice of ours.
 */
export function cycleCurve(season: PackedSeason, parcel: ParcelInput, planted: PlantedCycles, k: number): CycleCurve {
  const { crop, calendar } = planted.planting;
  const cycle = planted.cycles[k];
  const climates = stageClimates(season.weather, cycle);
  if (season.input.settings.coefficient === 'single') return singleCurve(season, parcel, planted, k, climates);
  const table = tableCoefficients(crop, calendar, k);
  const canopy = crop.surface === 'tall' ? null : canopyOf(planted.planting);
  if (canopy !== null) {
    return {
      table,
      coefficients: canopyCoefficients(table, canopy, climates),
      climates,
      heightMax: canopy.height,
      canopy,
      initialStage: null,
    };
  }
  const coefficients = crop.surface === 'tall' ? table : adjustedCoefficients(table, climates, crop.heightMax);
  return { table, coefficients, climates, heightMax: crop.heightMax, canopy, initialStage: null };
}

/** The canopy of a planting with its stomatal factor settled; null where neither planting nor crop has one. */
export function canopyOf({ crop, canopy }: Planting): CycleCurve['canopy'] {
  const given = canopy ?? crop.canopy;
  if (given === undefined) return null;
  const own = given.stomatalFactor ?? crop.canopy?.stomatalFactor;
  return { ...given, stomatalFactor: own ?? fittedStomatalFactor(crop.basalMid, crop.heightMax, crop.canopy?.cover ?? MATURE_COVER) };
}

function canopyCoefficients(
  table: StageCoefficients,
  canopy: NonNullable<CycleCurve['canopy']>,
  climates: StageClimates,
): StageCoefficients {
  const ground = canopy.groundBasal ?? BARE_SOIL_COEFFICIENT;
  const density = Math.min(1, canopyBasal(canopy, 0) / table.mid);
  return {
    initial: Math.max(ground, density * table.initial),
    mid: canopyBasal(canopy, standardWhereNaN(climates.mid)),
    end: Math.max(ground, canopyBasal(canopy, standardWhereNaN(climates.late)) * (table.end / table.mid)),
  };
}

/** Climate term of a stage; the standard climate where no day of it is in the run. */
function standardWhereNaN({ windSpeed2m, humidityMinimum }: StageClimate): number {
  const term = climateTerm(windSpeed2m, humidityMinimum);
  return Number.isNaN(term) ? 0 : term;
}

function singleCurve(season: PackedSeason, parcel: ParcelInput, planted: PlantedCycles, k: number, climates: StageClimates): CycleCurve {
  const { crop, calendar, mulch } = planted.planting;
  const basal = tableCoefficients(crop, calendar, k);
  const table = crop.single && !calendar.cycles ? crop.single : singleFromBasal(basal);
  const initialStage =
    crop.type === 'annual' && !crop.paddy && crop.surface === 'short' ? initialStageOf(season, parcel, planted, k) : null;
  const adjusted = crop.surface === 'tall' ? table : adjustedCoefficients(table, climates, crop.heightMax);
  const initial = initialStage
    ? initialFromWettings(initialStage)
    : crop.paddy
      ? riceInitial(season.weather, planted.cycles[k])
      : table.initial;
  const open = { ...adjusted, initial };
  const coefficients = mulch
    ? {
        initial: mulchedSingle(open.initial, basal.initial, mulch),
        mid: mulchedSingle(open.mid, basal.mid, mulch),
        end: mulchedSingle(open.end, basal.end, mulch),
      }
    : open;
  return { table, coefficients, climates, heightMax: crop.heightMax, canopy: null, initialStage };
}

function riceInitial(weather: ParcelWeather, cycle: Cycle): number {
  const { windSpeed2m, humidityMinimum } = stageClimate(weather, cycle, cycle.start, cycle.lengths.initial);
  return riceInitialCoefficient(windSpeed2m, humidityMinimum);
}
