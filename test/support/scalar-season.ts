/**
 * A plain scalar season, written from the published equations for comparison and as a yardstick of speed.
 *
 * It shares no code with lib/season, lib/crop or lib/energy: objects and arrays of objects, one day after another, every equation in its place.
 * Sources: FAO-56 (equation numbers beside the lines), NEH 630 chapter 10 for runoff, ASCE-EWRI 2005 (recalled) for the second reference method.
 */
import type { Crop, ParcelInput, Planting, SeasonInput } from '../../lib/season/types.ts';

export interface ScalarDay {
  reference_et: number;
  crop_et: number;
  adjusted_crop_et: number;
  evaporation: number;
  precipitation: number;
  surface_runoff: number;
  effective_precipitation: number;
  net_requirement: number;
  gross_requirement: number;
  deep_percolation: number;
  root_zone_depletion: number;
  total_available_water: number;
  readily_available_water: number;
  basal_crop_coefficient: number;
  stress_coefficient: number;
  soil_water_depletion: number;
  irrigation_percolation: number;
  capillary_rise: number;
  snow_water: number;
  ponded_water: number;
}

interface Weather {
  tmax: number;
  tmin: number;
  ea: number;
  rs: number;
  u2: number;
  rain: number;
  rhMin: number;
  eto: number;
  runoff: number;
}

interface CropDay {
  crop: Crop;
  kcb: number;
  height: number;
  root: number;
  mayIrrigate: boolean;
  first: boolean;
}

interface Land {
  share: number;
  days: (CropDay | null)[];
  history: { planting: Planting; start: number; end: number }[];
}

const dayOf = (iso: string) => Math.round(Date.parse(`${iso}T00:00:00Z`) / 86400000);
const clamp = (x: number, low: number, high: number) => Math.min(high, Math.max(low, x));
const e0 = (t: number) => 0.6108 * Math.exp((17.27 * t) / (t + 237.3)); // Eq. 11

/** The season of one parcel, day by day. */
export function scalarSeason(input: SeasonInput, parcel: ParcelInput): ScalarDay[] {
  const first = dayOf(input.startDate);
  const weather: Weather[] = [];
  for (let d = 0; d < input.dayCount; d++) weather.push(weatherAt(input, parcel, d, first + d));
  const lands = landsOf(input, parcel, first, weather);
  const cropped = lands.filter((land) => land.history.length > 0);
  const runs = lands.map((land) => runLand(input, parcel, land, weather));
  return weather.map((w, d) => {
    const mean = (pick: (x: LandDay) => number) => lands.reduce((sum, land, k) => sum + land.share * pick(runs[k][d]), 0);
    const soil = (pick: (x: LandDay) => number) => {
      const over = cropped.length > 0 ? cropped : lands;
      const total = over.reduce((sum, land) => sum + land.share, 0);
      return over.reduce((sum, land) => sum + (land.share / total) * pick(runs[lands.indexOf(land)][d]), 0);
    };
    return {
      reference_et: w.eto,
      crop_et: mean((x) => x.etc),
      adjusted_crop_et: mean((x) => x.transpiration + x.evaporation),
      evaporation: mean((x) => x.evaporation),
      precipitation: w.rain,
      surface_runoff: w.runoff,
      effective_precipitation: mean((x) => x.effective),
      net_requirement: mean((x) => x.irrigation),
      gross_requirement: mean((x) => x.irrigation / parcel.method.efficiency),
      deep_percolation: mean((x) => x.percolation),
      root_zone_depletion: soil((x) => x.depletion),
      total_available_water: soil((x) => x.taw),
      readily_available_water: soil((x) => x.raw),
      basal_crop_coefficient: mean((x) => x.kcb),
      stress_coefficient: soil((x) => x.ks),
      soil_water_depletion: mean((x) => x.whole),
      irrigation_percolation: 0,
      capillary_rise: 0,
      snow_water: 0,
      ponded_water: 0,
    };
  });
}

function weatherAt(input: SeasonInput, parcel: ParcelInput, d: number, day: number): Weather {
  const w = input.weather;
  let sum = 0;
  const total = { tmax: 0, tmin: 0, ea: 0, rs: 0, u2: 0, rain: 0 };
  for (const { site, weight } of parcel.weights) {
    const i = site * input.dayCount + d;
    if (Number.isNaN(w.airTemperatureMax[i]) || Number.isNaN(w.airTemperatureMin[i])) continue;
    const warmer = input.settings.lapseRate * (input.sites[site].elevation - parcel.elevation);
    sum += weight;
    total.tmax += weight * (w.airTemperatureMax[i] + warmer);
    total.tmin += weight * (w.airTemperatureMin[i] + warmer);
    total.ea += weight * w.actualVapourPressure[i];
    total.rs += weight * w.solarRadiation[i];
    total.u2 += weight * w.windSpeed2m[i];
    total.rain += weight * w.precipitation[i];
  }
  const tmax = total.tmax / sum;
  const tmin = total.tmin / sum;
  const ea = Math.min(total.ea / sum, (e0(tmax) + e0(tmin)) / 2);
  const here = { tmax, tmin, ea, rs: total.rs / sum, u2: total.u2 / sum, rain: total.rain / sum };
  const eto = referenceEt(input.settings.method, parcel, day, here);
  return { ...here, rhMin: (100 * ea) / e0(tmax), eto, runoff: runoffOf(input, parcel, here.rain) };
}

function referenceEt(
  method: 'fao56' | 'asce2005',
  parcel: ParcelInput,
  day: number,
  w: { tmax: number; tmin: number; ea: number; rs: number; u2: number },
): number {
  const fao = method === 'fao56';
  const date = new Date(day * 86400000);
  const j =
    Math.round(
      (Date.UTC(date.getUTCFullYear(), date.getUTCMonth(), date.getUTCDate()) - Date.UTC(date.getUTCFullYear(), 0, 1)) / 86400000,
    ) + 1;
  const lat = (parcel.latitude * Math.PI) / 180;
  const dr = 1 + 0.033 * Math.cos((2 * Math.PI * j) / 365); // Eq. 23
  const dec = 0.409 * Math.sin((2 * Math.PI * j) / 365 - 1.39); // Eq. 24
  const ws = Math.acos(clamp(-Math.tan(lat) * Math.tan(dec), -1, 1)); // Eq. 25
  const ra = ((24 * 60) / Math.PI) * 0.082 * dr * (ws * Math.sin(lat) * Math.sin(dec) + Math.cos(lat) * Math.cos(dec) * Math.sin(ws)); // Eq. 21
  const rso = (0.75 + 2e-5 * parcel.elevation) * Math.max(0, ra); // Eq. 37
  const relative = rso <= 0 ? 0.75 : clamp(w.rs / rso, fao ? 0 : 0.3, 1);
  const sigma = fao ? 4.903e-9 : 4.901e-9;
  const black = (sigma * ((w.tmax + 273.16) ** 4 + (w.tmin + 273.16) ** 4)) / 2;
  const rn = 0.77 * w.rs - black * (0.34 - 0.14 * Math.sqrt(w.ea)) * (1.35 * relative - 0.35); // Eq. 38–40
  const t = (w.tmax + w.tmin) / 2;
  const slope = ((fao ? 4098 * 0.6108 : 2503) * Math.exp((17.27 * t) / (t + 237.3))) / (t + 237.3) ** 2; // Eq. 13
  const gamma = 0.665e-3 * 101.3 * ((293 - 0.0065 * parcel.elevation) / 293) ** 5.26; // Eq. 7, 8
  const u2 = fao ? Math.max(0.5, w.u2) : w.u2;
  const deficit = (e0(w.tmax) + e0(w.tmin)) / 2 - w.ea;
  return Math.max(0, (0.408 * slope * rn + (gamma * 900 * u2 * deficit) / (t + 273)) / (slope + gamma * (1 + 0.34 * u2))); // Eq. 6
}

function runoffOf(input: SeasonInput, parcel: ParcelInput, rain: number): number {
  if (!input.settings.runoff || Number.isNaN(parcel.soil.curveNumber)) return 0;
  const s = 25400 / parcel.soil.curveNumber - 254;
  return rain > 0.2 * s ? (rain - 0.2 * s) ** 2 / (rain + 0.8 * s) : 0;
}

/** The parcel cut into lands of one history each: same share used again when free, else new land, else free lands, split as needed. */
function landsOf(input: SeasonInput, parcel: ParcelInput, first: number, weather: Weather[]): Land[] {
  const n = input.dayCount;
  const lands: Land[] = [];
  let unused = 1;
  const live = parcel.plantings
    .map((planting) => ({ planting, cycles: cyclesOf(planting, first, n) }))
    .filter(({ cycles }) => cycles.length > 0 && cycles[0].start < n && cycles[cycles.length - 1].end > 0)
    .sort((a, b) => a.cycles[0].start - b.cycles[0].start);
  const freeAt = (land: Land, day: number) => land.history.every((past) => past.end <= day);
  const put = (land: Land, planting: Planting, start: number, end: number) => land.history.push({ planting, start, end });
  for (const { planting, cycles } of live) {
    const start = cycles[0].start;
    const end = cycles[cycles.length - 1].end;
    const same = lands.find((land) => freeAt(land, start) && Math.abs(land.share - planting.areaShare) < 1e-9);
    if (same) {
      put(same, planting, start, end);
      continue;
    }
    let left = planting.areaShare;
    const fresh = Math.min(unused, left);
    const free = lands.filter((land) => freeAt(land, start));
    if (fresh > 1e-9) {
      lands.push({ share: fresh, days: [], history: [{ planting, start, end }] });
      unused -= fresh;
      left -= fresh;
    }
    for (const land of free) {
      if (left <= 1e-9) break;
      if (land.share > left + 1e-9) {
        lands.push({ share: land.share - left, days: [], history: [...land.history] });
        land.share = left;
      }
      left -= land.share;
      put(land, planting, start, end);
    }
  }
  if (unused > 1e-9) lands.push({ share: unused, days: [], history: [] });
  for (const land of lands) {
    land.days = Array.from({ length: n }, () => null);
    for (const { planting } of land.history) growCrop(planting, first, weather, parcel, land.days);
  }
  return lands;
}

interface Round {
  start: number;
  end: number;
  ini: number;
  dev: number;
  mid: number;
  late: number;
}

function cyclesOf(planting: Planting, first: number, n: number): Round[] {
  const c = planting.calendar;
  const start = dayOf(planting.plantingDate) - first;
  const harvest = planting.harvestDate === null ? null : dayOf(planting.harvestDate) - first;
  const one = { ini: c.initial, dev: c.development, mid: c.mid, late: c.late };
  const l = c.laterCycle;
  const next = l ? { ini: l.initial, dev: l.development, mid: l.mid, late: l.late } : one;
  const total = (x: typeof one) => x.ini + x.dev + x.mid + x.late;
  const rounds: Round[] = [];
  if (planting.cutDates.length > 0) {
    const last = harvest ?? n;
    const starts = [start, ...planting.cutDates.map((cut) => dayOf(cut) - first).filter((cut) => cut < last)];
    for (const [k, s] of starts.entries()) rounds.push({ start: s, end: starts[k + 1] ?? last, ...(k === 0 ? one : next) });
  } else if (planting.crop.type === 'forage-cut') {
    const last = harvest ?? n;
    let s = start;
    while (s < last) {
      const stages = rounds.length === 0 ? one : next;
      rounds.push({ start: s, end: Math.min(last, s + total(stages)), ...stages });
      s += total(stages);
    }
  } else rounds.push({ start, end: harvest ?? start + total(one), ...one });
  return rounds;
}

function growCrop(planting: Planting, first: number, weather: Weather[], parcel: ParcelInput, days: (CropDay | null)[]): void {
  const { crop, calendar } = planting;
  const rounds = cyclesOf(planting, first, weather.length);
  const limitless = crop.type === 'forage-cut' || planting.cutDates.length > 0 || crop.lastIrrigation >= 1;
  const stop = rounds[0].start + calendar.initial + calendar.development + calendar.mid + crop.lastIrrigation * calendar.late;
  for (const round of rounds) {
    const midStart = round.start + round.ini + round.dev;
    const lateStart = midStart + round.mid;
    const kMid = adjusted(crop.basalMid, crop, weather.slice(Math.max(0, midStart), Math.max(0, Math.min(lateStart, round.end))));
    const late = weather.slice(Math.max(0, lateStart), Math.max(0, Math.min(lateStart + round.late, round.end)));
    const kEnd = crop.basalEnd >= 0.45 ? adjusted(crop.basalEnd, crop, late) : crop.basalEnd;
    let highest = 0;
    let deepest = 0;
    for (let d = round.start; d < Math.min(round.end, weather.length); d++) {
      const i = d - round.start + 1;
      const kcb = basal(crop.basalInitial, kMid, kEnd, round, i);
      highest = i > round.ini && i >= round.ini + round.dev ? crop.heightMax : Math.max(highest, crop.heightMax * Math.min(1, kcb / kMid));
      const grown = i <= round.ini ? 0 : Math.min(1, (i - round.ini) / round.dev);
      deepest = Math.max(
        deepest,
        crop.type === 'annual' ? crop.rootDepthMin + (crop.rootDepthMax - crop.rootDepthMin) * grown : crop.rootDepthMax,
      );
      const root = parcel.soil.rootLimit > 0 ? Math.min(deepest, parcel.soil.rootLimit) : deepest;
      if (d < 0) continue;
      days[d] = { crop, kcb, height: highest, root, mayIrrigate: limitless || d < stop, first: d === rounds[0].start };
    }
  }
}

/** Eq. 66 */
function basal(ini: number, mid: number, end: number, round: Round, i: number): number {
  if (i <= round.ini) return ini;
  if (i <= round.ini + round.dev) return ini + ((i - round.ini) / round.dev) * (mid - ini);
  const past = i - round.ini - round.dev - round.mid;
  if (past <= 0) return mid;
  return past >= round.late ? end : mid + (past / round.late) * (end - mid);
}

/** Eq. 70 with the means of the stage's days */
function adjusted(table: number, crop: Crop, stage: Weather[]): number {
  if (stage.length === 0) return table;
  const u2 = clamp(stage.reduce((sum, w) => sum + w.u2, 0) / stage.length, 1, 6);
  const rh = clamp(stage.reduce((sum, w) => sum + w.rhMin, 0) / stage.length, 20, 80);
  return Math.max(0, table + (0.04 * (u2 - 2) - 0.004 * (rh - 45)) * (clamp(crop.heightMax, 0.1, 10) / 3) ** 0.3);
}

interface LandDay {
  etc: number;
  transpiration: number;
  evaporation: number;
  effective: number;
  irrigation: number;
  percolation: number;
  depletion: number;
  whole: number;
  taw: number;
  raw: number;
  kcb: number;
  ks: number;
}

function rootDepths(parcel: ParcelInput, land: Land): number[] {
  const { soil } = parcel;
  const limit = (z: number) => (soil.rootLimit > 0 ? Math.min(z, soil.rootLimit) : z);
  const firstCrop = land.history[0]?.planting.crop;
  let depth = limit(Math.max(soil.evaporationDepth, soil.totalEvaporableWater / (1000 * (soil.fieldCapacity - soil.wiltingPoint))));
  if (firstCrop) depth = limit(firstCrop.type === 'annual' ? firstCrop.rootDepthMin : firstCrop.rootDepthMax);
  return land.days.map((day) => {
    depth = day?.root ?? depth;
    return depth;
  });
}

function runLand(input: SeasonInput, parcel: ParcelInput, land: Land, weather: Weather[]): LandDay[] {
  const { soil, method } = parcel;
  const { settings } = input;
  const depths = rootDepths(parcel, land);
  const zMax = Math.max(...depths);
  const perMetre = 1000 * (soil.fieldCapacity - soil.wiltingPoint);
  let z = depths[0];
  let dr = settings.initialDepletion * perMetre * z;
  let below = settings.initialDepletion * perMetre * (zMax - z);
  let de = settings.initialDepletion * soil.totalEvaporableWater;
  let fw = 1;
  let p = land.history[0]?.planting.crop.depletionFraction ?? 0.5;
  let underWay = false;
  let exposed = 1;
  return weather.map((w, d) => {
    const crop = land.days[d];
    // roots
    if (depths[d] > z) {
      const moved = (below * (depths[d] - z)) / (zMax - z);
      dr += moved;
      below -= moved;
    } else {
      const moved = (dr * (z - depths[d])) / z;
      dr -= moved;
      below += moved;
    }
    z = depths[d];
    const taw = perMetre * z; // Eq. 82
    // rain and irrigation
    if (crop?.first) p = crop.crop.depletionFraction;
    const pi = w.rain - w.runoff;
    const throughRoots = Math.max(0, pi - dr);
    dr = Math.max(0, dr - pi);
    const percolation = Math.max(0, throughRoots - below);
    below = Math.max(0, below - throughRoots);
    // irrigation, decided over at least half the mature root depth
    const half = crop ? 0.5 * crop.crop.rootDepthMax : 0;
    const zs = Math.max(z, Math.min(soil.rootLimit > 0 ? Math.min(half, soil.rootLimit) : half, zMax));
    const dry = dr + (zs > z ? (below * (zs - z)) / (zMax - z) : 0);
    const callsFor = Math.max(0, dry - exposed * Math.max(0, de - pi)); // the bare surface does not count
    const runsShort = method.triggerFraction <= 1 && dr > p * taw; // above 1 it does on purpose
    const starts = underWay || callsFor >= method.triggerFraction * p * perMetre * zs || runsShort;
    const irrigation = settings.irrigate && crop?.mayIrrigate && dry > 0.5 && starts ? Math.min(dry, method.maximumDailyDepth) : 0;
    underWay = irrigation > 0 && dry - irrigation > 0.5;
    below = Math.max(0, below - Math.max(0, irrigation - dr));
    dr = Math.max(0, dr - irrigation);
    // surface
    de = clamp(de - pi - irrigation / method.wettedFraction, 0, soil.totalEvaporableWater); // Eq. 77
    if (irrigation > 0) fw = method.wettedFraction;
    else if (w.rain > 3) fw = 1;
    const kcb = crop?.kcb ?? 0;
    const h = crop?.height ?? 0.05;
    const climate = 0.04 * (clamp(w.u2, 1, 6) - 2) - 0.004 * (clamp(w.rhMin, 20, 80) - 45);
    const kcMax = Math.max(1.2 + climate * (h / 3) ** 0.3, kcb + 0.05); // Eq. 72
    const fc = kcb > 0.15 ? Math.min(0.99, ((kcb - 0.15) / (kcMax - 0.15)) ** (1 + 0.5 * h)) : 0; // Eq. 76
    const few = Math.max(0.01, Math.min(1 - fc, method.underCanopy ? (1 - (2 / 3) * fc) * fw : fw)); // Eq. 75
    const rew = soil.readilyEvaporableWater;
    const kr = de <= rew ? 1 : (soil.totalEvaporableWater - de) / (soil.totalEvaporableWater - rew); // Eq. 74
    const ke = Math.min(kr * (kcMax - kcb), few * kcMax); // Eq. 71
    // water use
    const etc = (kcb + ke) * w.eto; // Eq. 69
    if (crop) p = clamp(crop.crop.depletionFraction + 0.04 * (5 - etc), 0.1, 0.8);
    const ks = crop && dr > p * taw ? Math.max(0, (taw - dr) / ((1 - p) * taw)) : 1; // Eq. 84
    const transpiration = Math.min(ks * kcb * w.eto, taw - dr);
    const evaporation = Math.min(ke * w.eto, taw - dr - transpiration);
    de = Math.min(soil.totalEvaporableWater, de + evaporation / few);
    exposed = few;
    dr += transpiration + evaporation;
    const effective = pi - percolation;
    const whole = dr + below;
    return { etc, transpiration, evaporation, effective, irrigation, percolation, depletion: dr, whole, taw, raw: p * taw, kcb, ks };
  });
}
