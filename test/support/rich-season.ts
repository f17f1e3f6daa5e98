/**
 * Seasons drawn from a seed with everything a parcel can have: irrigation rules, ponded rice, snow, frozen ground, layers, salt, water tables, mulch, orchard
 * canopies, efficiency by depth, lead days. Invented; no real place, station or crop record.
 */
import { mulberry32, type Random } from '../../lib/base/random.ts';
import type {
  ApplicationMethod,
  Crop,
  IrrigationRule,
  ParcelInput,
  Planting,
  SeasonInput,
  SeasonSettings,
  Soil,
} from '../../lib/season/types.ts';
import { randomSeason } from './random-season.ts';

function between(random: Random, low: number, high: number): number {
  return low + (high - low) * random();
}

function pick<T>(random: Random, of: readonly T[]): T {
  return of[Math.floor(random() * of.length)];
}

export const RULE_KINDS = ['depletion', 'interval', 'fixed-depth', 'daily', 'deficit', 'none'] as const;

function ruleOf(random: Random, kind: IrrigationRule['kind']): IrrigationRule {
  const stage = () => ({ trigger: between(random, 0.4, 1.8), refill: between(random, 0.3, 1) });
  if (kind === 'depletion') return { kind, trigger: between(random, 0.3, 1), refill: pick(random, [1, 1, between(random, 0.5, 1)]) };
  if (kind === 'interval') return { kind, days: 1 + Math.floor(random() * 15) };
  if (kind === 'fixed-depth') return { kind, depth: between(random, 5, 70) };
  if (kind === 'deficit') return { kind, stages: { initial: stage(), development: stage(), mid: stage(), late: stage() } };
  return { kind };
}

function layered(random: Random, soil: Soil): Soil {
  const edges = [0, between(random, 0.1, 0.3), between(random, 0.35, 0.8), between(random, 0.9, 1.5)];
  const layers = edges.slice(1).map((bottom, k) => {
    const wiltingPoint = between(random, 0.03, 0.2);
    return { top: edges[k], bottom, wiltingPoint, fieldCapacity: wiltingPoint + between(random, 0.05, 0.2) };
  });
  return { ...soil, layers };
}

function soilOf(random: Random, soil: Soil): Soil {
  const rich: Soil = {
    ...soil,
    saturation: Math.min(0.6, soil.fieldCapacity + between(random, 0.02, 0.2)),
    percolationRate: between(random, 0, 12),
    texture: pick(random, ['coarse', 'medium', 'fine'] as const),
    capillary: { conductivity: between(random, 5, 600), bubblingHead: between(random, 0.1, 0.8), exponent: between(random, 4, 11) },
  };
  return random() < 0.5 ? layered(random, rich) : rich;
}

function methodOf(random: Random, method: ApplicationMethod): ApplicationMethod {
  const curve = [
    { depth: 10, efficiency: between(random, 0.3, 0.6) },
    { depth: 40, efficiency: between(random, 0.5, 0.9) },
    { depth: 90, efficiency: between(random, 0.4, 0.8) },
  ];
  return {
    ...method,
    minimumDepth: random() < 0.3 ? between(random, 0, Math.min(20, method.maximumDailyDepth)) : undefined,
    flow: random() < 0.3 ? between(random, 0.5, 10) : undefined,
    efficiencyByDepth: random() < 0.4 ? curve : undefined,
  };
}

function cropOf(random: Random, crop: Crop): Crop {
  const paddy = {
    floodFrom: -Math.floor(between(random, 0, 12)),
    drainBefore: Math.floor(between(random, 0, 15)),
    pondTarget: between(random, 30, 80),
    pondMinimum: between(random, 0, 30),
    bund: between(random, 80, 150),
    puddledDepth: between(random, 0.1, 0.3),
  };
  return {
    ...crop,
    salinity: random() < 0.6 ? { threshold: between(random, 1, 5), slope: between(random, 3, 20) } : undefined,
    paddy: crop.type === 'annual' && random() < 0.5 ? paddy : undefined,
    canopy: crop.type === 'orchard' && random() < 0.5 ? { cover: between(random, 0.1, 0.8), height: between(random, 1, 5) } : undefined,
    dormantBasal: random() < 0.3 ? 0.1 : undefined,
  };
}

function plantingOf(random: Random, planting: Planting, kind: IrrigationRule['kind']): Planting {
  const pre = random();
  return {
    ...planting,
    crop: cropOf(random, planting.crop),
    irrigation: ruleOf(random, kind),
    mulch: random() < 0.3 ? { kind: pick(random, ['plastic', 'organic'] as const), cover: between(random, 0.1, 0.9) } : undefined,
    preIrrigation: pre < 0.3 ? { daysBefore: 5, depth: pre < 0.15 ? 60 : undefined } : undefined,
    germination:
      random() < 0.3
        ? [
            { daysAfter: 0, depth: 15 },
            { daysAfter: 4, depth: 10 },
          ]
        : undefined,
  };
}

function parcelOf(random: Random, parcel: ParcelInput, kind: IrrigationRule['kind'] | null, days: number): ParcelInput {
  const dated = (count: number, value: () => number) => {
    const at = Array.from({ length: count }, () => Math.floor(random() * days)).sort((a, b) => a - b);
    return { days: at, values: at.map(value) };
  };
  return {
    ...parcel,
    soil: soilOf(random, parcel.soil),
    method: methodOf(random, parcel.method),
    plantings: parcel.plantings.map((planting) => plantingOf(random, planting, kind ?? pick(random, RULE_KINDS))),
    efficiency: random() < 0.3 ? between(random, 0.4, 0.95) : undefined,
    salinity: random() < 0.7 ? { soil: between(random, 0.5, 8), water: between(random, 0.2, 4) } : undefined,
    waterTable: random() < 0.5 ? dated(4, () => between(random, 0.4, 3)) : undefined,
    deliveries: random() < 0.7 ? dated(8, () => between(random, 5, 120)) : undefined,
  };
}

export interface RichOptions {
  readonly seed: number;
  readonly parcels: number;
  readonly days: number;
  /** one rule for every planting; left out: any */
  readonly rule?: IrrigationRule['kind'];
  readonly settings?: Partial<SeasonSettings>;
  readonly leadDays?: number;
  /** °C added to every temperature; a cold year keeps snow */
  readonly warmer?: number;
}

/** A season of random parcels with random extras; settings are drawn too, unless given. */
export function richSeason({ seed, parcels, days, rule, settings, leadDays, warmer = 0 }: RichOptions): SeasonInput {
  const random = mulberry32(seed * 7919 + 1);
  const base = randomSeason({ seed, parcels, days });
  for (let i = 0; i < base.weather.airTemperatureMax.length; i++) {
    base.weather.airTemperatureMax[i] += warmer;
    base.weather.airTemperatureMin[i] += warmer;
  }
  return {
    ...base,
    parcels: base.parcels.map((parcel) => parcelOf(random, parcel, rule ?? null, days)),
    leadDays,
    settings: {
      ...base.settings,
      irrigate: true,
      coefficient: pick(random, ['dual', 'dual', 'single'] as const),
      antecedentMoisture: pick(random, ['average', 'five-day-rain', 'surface-layer'] as const),
      snow: random() < 0.6,
      frozenGround: random() < 0.5,
      capillaryRise: random() < 0.6,
      salinity: pick(random, ['off', 'stress', 'stress-and-leaching'] as const),
      water: pick(random, ['rule', 'rule', 'recorded-then-rule', 'recorded'] as const),
      recordedUntil: Math.floor(days / 3),
      fallow: pick(random, ['bare', 'weeds'] as const),
      ...settings,
    },
  };
}
