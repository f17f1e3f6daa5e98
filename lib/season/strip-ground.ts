/**
 * What does not change on the strips of a parcel while a season is stepped: the soil's surface, the system that waters it, and what its plantings ask of it.
 */
import { FLOW_TO_DEPTH, netOfGross } from '../crop/application-efficiency.ts';
import { pondPores, USUAL_PERCOLATION, USUAL_SATURATION } from '../crop/paddy.ts';
import { type CurveNumbers, curveNumbers } from '../crop/runoff.ts';
import { leachingRequirement } from '../crop/salinity.ts';
import type { ParcelInput, Planting, SeasonSettings } from './types.ts';

/** What does not change on the strips of a parcel during a run. Water [mm], fractions 0–1. */
export interface StripGround {
  /** REW [mm] */
  readonly readilyEvaporable: number;
  /** TEW [mm] */
  readonly totalEvaporable: number;
  /** fw of the application method */
  readonly methodWetted: number;
  readonly underCanopy: boolean;
  /** least net depth worth an application [mm] */
  readonly minimumDepth: number;
  /** most that the system puts on in a day [mm net]: its limit of depth, or its flow times Ea */
  readonly most: number;
  /** Ea by net depth [mm]; a constant efficiency is one point */
  readonly efficiencyDepths: Float64Array;
  readonly efficiencies: Float64Array;
  /** seepage and percolation under ponded water [mm d⁻¹] */
  readonly percolationRate: number;
  /** where runoff goes by the surface layer; else null */
  readonly curveNumbers: CurveNumbers | null;
  /** LR by planting of the parcel, 0 without */
  readonly leachingRequirement: Float64Array;
  /** ponding by planting of the parcel: depths at which supply starts and ends, height of the bunds, pores above field capacity [mm]; 0 without */
  readonly pondMinimum: Float64Array;
  readonly pondTarget: Float64Array;
  readonly bund: Float64Array;
  readonly pores: Float64Array;
}

const NONE = new Float64Array(0);

/** Stands where no parcel has been placed yet. */
export const NO_GROUND: StripGround = {
  readilyEvaporable: Number.NaN,
  totalEvaporable: Number.NaN,
  methodWetted: Number.NaN,
  underCanopy: false,
  minimumDepth: Number.NaN,
  most: Number.NaN,
  efficiencyDepths: NONE,
  efficiencies: NONE,
  percolationRate: Number.NaN,
  curveNumbers: null,
  leachingRequirement: NONE,
  pondMinimum: NONE,
  pondTarget: NONE,
  bund: NONE,
  pores: NONE,
};

const plain = new WeakMap<ParcelInput['soil'], WeakMap<ParcelInput['method'], StripGround>>();

/** Most plantings that a shared ground has room for. */
const ROOM = 16;

/**
 * The ground of a parcel. Parcels on the same soil and method, with nothing of their own and no ponded crop, get the same object.
 */
export function groundOf(parcel: ParcelInput, settings: SeasonSettings): StripGround {
  const { soil, method, plantings } = parcel;
  const own = parcel.efficiency !== undefined || parcel.salinity !== undefined || plantings.length > ROOM;
  const bySurface = settings.runoff && settings.antecedentMoisture === 'surface-layer';
  if (own || bySurface || plantings.some(({ crop }) => crop.paddy !== undefined)) return drawGround(parcel, settings);
  let bySoil = plain.get(soil);
  if (bySoil === undefined) {
    bySoil = new WeakMap();
    plain.set(soil, bySoil);
  }
  let ground = bySoil.get(method);
  if (ground === undefined) {
    const none = new Float64Array(ROOM);
    const nothing = { leachingRequirement: none, pondMinimum: none, pondTarget: none, bund: none, pores: none };
    ground = { ...drawGround({ ...parcel, plantings: [] }, settings), ...nothing };
    bySoil.set(method, ground);
  }
  return ground;
}

function drawGround(parcel: ParcelInput, settings: SeasonSettings): StripGround {
  const { soil, method, plantings } = parcel;
  const efficiency = efficiencyOf(parcel);
  const each = (value: (planting: Planting) => number) => Float64Array.from(plantings, value);
  const saturation = soil.saturation ?? USUAL_SATURATION;
  const bySurface = settings.runoff && settings.antecedentMoisture === 'surface-layer' && !Number.isNaN(soil.curveNumber);
  return {
    readilyEvaporable: soil.readilyEvaporableWater,
    totalEvaporable: soil.totalEvaporableWater,
    methodWetted: method.wettedFraction,
    underCanopy: method.underCanopy,
    minimumDepth: method.minimumDepth ?? 0,
    most: mostPerDay(parcel, efficiency),
    ...efficiency,
    percolationRate: soil.percolationRate ?? USUAL_PERCOLATION,
    curveNumbers: bySurface ? curveNumbers(soil.curveNumber) : null,
    leachingRequirement: each((planting) => leachingOf(parcel, planting, settings)),
    pondMinimum: each(({ crop }) => crop.paddy?.pondMinimum ?? 0),
    pondTarget: each(({ crop }) => crop.paddy?.pondTarget ?? 0),
    bund: each(({ crop }) => crop.paddy?.bund ?? 0),
    pores: each(({ crop }) => pondPores(saturation, soil.fieldCapacity, crop.paddy?.puddledDepth ?? 0)),
  };
}

/** The ground with every efficiency times a factor, held at 1. */
export function groundWithEfficiency(parcel: ParcelInput, ground: StripGround, factor: number): StripGround {
  const efficiencies = ground.efficiencies.map((efficiency) => Math.min(1, efficiency * factor));
  const efficiency = { efficiencyDepths: ground.efficiencyDepths, efficiencies };
  return { ...ground, efficiencies, most: mostPerDay(parcel, efficiency) };
}

interface Efficiency {
  readonly efficiencyDepths: Float64Array;
  readonly efficiencies: Float64Array;
}

/** Given for the parcel, else the method's by depth, else the method's one. */
function efficiencyOf({ efficiency, method }: ParcelInput): Efficiency {
  const points = efficiency === undefined ? (method.efficiencyByDepth ?? []) : [];
  if (points.length === 0) {
    return { efficiencyDepths: new Float64Array(1), efficiencies: Float64Array.of(efficiency ?? method.efficiency) };
  }
  return {
    efficiencyDepths: Float64Array.from(points, ({ depth }) => depth),
    efficiencies: Float64Array.from(points, (point) => point.efficiency),
  };
}

function mostPerDay({ method }: ParcelInput, { efficiencyDepths, efficiencies }: Efficiency): number {
  const byFlow =
    method.flow === undefined ? method.maximumDailyDepth : netOfGross(efficiencyDepths, efficiencies, FLOW_TO_DEPTH * method.flow);
  return Math.min(method.maximumDailyDepth, byFlow);
}

/** LR with the soil at the crop's threshold: full yield. 0 where the settings, the parcel's water or the crop's tolerance do not ask for it. */
function leachingOf({ salinity }: ParcelInput, { crop }: Planting, settings: SeasonSettings): number {
  if (settings.salinity !== 'stress-and-leaching' || !salinity || !crop.salinity) return 0;
  return leachingRequirement(salinity.water, crop.salinity.threshold);
}
