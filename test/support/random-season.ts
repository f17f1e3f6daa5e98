/**
 * Seasons drawn from a seed: synthetic weather, soils, crops and plantings. Invented; no real place, station or crop record.
 */
import { addDays } from '../../lib/base/civil-date.ts';
import { mulberry32, normalDeviate, type Random } from '../../lib/base/random.ts';
import type { ApplicationMethod, Crop, CropCalendar, ParcelInput, Planting, SeasonInput, Soil } from '../../lib/season/types.ts';
import type { CompletedWeather, Site } from '../../lib/weather/variable.ts';

function between(random: Random, low: number, high: number): number {
  return low + (high - low) * random();
}

function pick<T>(random: Random, of: readonly T[]): T {
  return of[Math.floor(random() * of.length)];
}

export function makeSites(random: Random, count: number): Site[] {
  return Array.from({ length: count }, (_, k) => ({
    code: `S${k + 1}`,
    name: `Made-up station ${k + 1}`,
    longitude: between(random, -2, -1),
    latitude: between(random, 38, 42),
    elevation: between(random, 50, 900),
    windHeight: 2,
  }));
}

/** A temperate year with storms; vapour pressure sometimes above saturation, wind sometimes above 6 m s⁻¹. */
export function makeWeather(random: Random, siteCount: number, dayCount: number): CompletedWeather {
  const size = siteCount * dayCount;
  const row = () => new Float64Array(size);
  const weather = {
    siteCount,
    dayCount,
    airTemperatureMax: row(),
    airTemperatureMin: row(),
    actualVapourPressure: row(),
    solarRadiation: row(),
    windSpeed2m: row(),
    precipitation: row(),
    flags: new Uint32Array(size),
  };
  for (let i = 0; i < size; i++) {
    const season = Math.sin((2 * Math.PI * ((i % dayCount) - 100)) / 366);
    weather.airTemperatureMax[i] = 20 + 12 * season + 3 * normalDeviate(random);
    weather.airTemperatureMin[i] = weather.airTemperatureMax[i] - between(random, 4, 18);
    weather.actualVapourPressure[i] = Math.max(0.2, 1.2 + 0.5 * season + 0.3 * normalDeviate(random));
    weather.solarRadiation[i] = Math.max(1, 17 + 9 * season + 4 * normalDeviate(random));
    weather.windSpeed2m[i] = between(random, 0.2, 7);
    weather.precipitation[i] = random() < 0.15 ? between(random, 0, 1) ** 3 * 90 : 0;
    weather.flags[i] = random() < 0.1 ? 1 << Math.floor(random() * 24) : 0;
  }
  return weather;
}

export function makeSoil(random: Random): Soil {
  const wiltingPoint = between(random, 0.03, 0.2);
  const fieldCapacity = wiltingPoint + between(random, 0.07, 0.2);
  const evaporationDepth = between(random, 0.1, 0.15);
  const totalEvaporableWater = 1000 * (fieldCapacity - 0.5 * wiltingPoint) * evaporationDepth;
  return {
    code: 'soil',
    name: 'Made-up soil',
    fieldCapacity,
    wiltingPoint,
    evaporationDepth,
    readilyEvaporableWater: totalEvaporableWater * between(random, 0.2, 0.6),
    totalEvaporableWater,
    curveNumber: random() < 0.7 ? between(random, 55, 95) : Number.NaN,
    rootLimit: random() < 0.2 ? between(random, 0.15, 1) : Number.NaN,
  };
}

export function makeMethod(random: Random): ApplicationMethod {
  return {
    code: 'method',
    name: 'Made-up method',
    efficiency: between(random, 0.5, 0.95),
    wettedFraction: between(random, 0.2, 1),
    underCanopy: random() < 0.3,
    maximumDailyDepth: between(random, 3, 60),
    triggerFraction: between(random, 0.2, 1.2),
  };
}

export function makeCrop(random: Random): Crop {
  const basalInitial = between(random, 0.15, 0.5);
  return {
    code: 'crop',
    name: 'Made-up crop',
    group: 'made-up',
    type: pick(random, ['annual', 'annual', 'annual', 'perennial', 'forage', 'forage-cut', 'orchard'] as const),
    surface: 'short',
    basalInitial,
    basalMid: between(random, 0.4, 1.2),
    basalEnd: between(random, 0.15, 1.1),
    heightMax: between(random, 0.05, 5),
    rootDepthMin: between(random, 0.1, 0.4),
    rootDepthMax: between(random, 0.4, 2),
    depletionFraction: between(random, 0.2, 0.7),
    yieldResponse: 1,
    lastIrrigation: pick(random, [0, 0.5, 1]),
  };
}

function lengths(random: Random, scale: number) {
  const stage = () => Math.floor(between(random, 0, scale));
  return { initial: stage() + 1, development: stage(), mid: stage(), late: stage() };
}

export function makeCalendar(random: Random): CropCalendar {
  return { code: 'calendar', name: 'Made-up calendar', ...lengths(random, 50), laterCycle: random() < 0.7 ? lengths(random, 20) : null };
}

/** Plantings that never cover more than the parcel: none, one, two in turn, or two side by side; some begin before the run or are open-ended. */
function makePlantings(random: Random, startDate: string, dayCount: number): Planting[] {
  const at = (share: number, from: number, to: number | null): Planting => {
    const crop = makeCrop(random);
    const calendar = makeCalendar(random);
    const length = calendar.initial + calendar.development + calendar.mid + calendar.late;
    const harvest = to ?? (random() < 0.3 && crop.type !== 'forage-cut' ? null : from + Math.floor(between(random, 2, length + 40)));
    const cuts = random() < 0.5 && crop.type === 'forage-cut' && harvest !== null ? [from + 1 + Math.floor((harvest - from - 1) / 2)] : [];
    return {
      crop,
      calendar,
      plantingDate: addDays(startDate, from),
      harvestDate: harvest === null ? null : addDays(startDate, harvest),
      cutDates: cuts.filter((cut) => cut > from && cut < (harvest ?? 0)).map((cut) => addDays(startDate, cut)),
      areaShare: share,
    };
  };
  const start = Math.floor(between(random, -40, dayCount / 2));
  const middle = start + 2 + Math.floor(between(random, 0, dayCount / 3));
  const later = middle + Math.floor(between(random, 0, 20));
  const kind = random();
  if (kind < 0.1) return [];
  if (kind < 0.4) return [at(1, start, null)];
  if (kind < 0.6) return [at(1, start, middle), at(1, later, null)];
  if (kind < 0.8) return [at(0.4, start, null), at(0.35, Math.floor(between(random, -40, dayCount / 2)), null)];
  return [at(0.6, start, middle), at(0.8, later, null)];
}

export interface RandomSeasonOptions {
  readonly seed: number;
  readonly parcels: number;
  readonly days: number;
  readonly sites?: number;
}

/** A season of random parcels, all different. */
export function randomSeason(options: RandomSeasonOptions): SeasonInput {
  const random = mulberry32(options.seed);
  const siteCount = options.sites ?? 4;
  const startDate = pick(random, ['2023-01-01', '2023-10-01', '2024-03-15']);
  const sites = makeSites(random, siteCount);
  const parcels: ParcelInput[] = Array.from({ length: options.parcels }, (_, k) => ({
    code: `P${k + 1}`,
    area: between(random, 1e3, 1e6),
    latitude: between(random, -50, 60),
    longitude: between(random, -2, -1),
    elevation: between(random, 0, 1500),
    soil: makeSoil(random),
    method: makeMethod(random),
    plantings: makePlantings(random, startDate, options.days),
    weights: makeWeights(random, siteCount),
  }));
  return {
    startDate,
    dayCount: options.days,
    settings: {
      method: pick(random, ['fao56', 'asce2005'] as const),
      initialDepletion: random(),
      lapseRate: 0.0065,
      irrigate: random() < 0.8,
      runoff: random() < 0.7,
    },
    sites,
    weather: makeWeather(random, siteCount, options.days),
    parcels,
  };
}

export function makeWeights(random: Random, siteCount: number): { site: number; weight: number }[] {
  const raw = Array.from({ length: siteCount }, () => (random() < 0.2 ? 0 : random()));
  const sum = raw.reduce((a, b) => a + b, 0);
  return raw.map((weight, site) => ({ site, weight: sum > 0 ? weight / sum : 1 / siteCount }));
}
