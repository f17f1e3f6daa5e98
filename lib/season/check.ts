/**
 * What a season refuses to run on. Every message says which parcel, which value and what the limit is.
 */
import { type IsoDate, isIsoDate } from '../base/civil-date.ts';
import { RangeViolation, Refused, ShapeError } from '../base/errors.ts';
import { COMPLETED_SERIES, type SeriesWeights } from '../weather/variable.ts';
import { checkMethodParts, checkParcelParts, checkSoilParts } from './check-ground.ts';
import { checkCalendarParts, checkCropParts, checkPractice } from './check-planting.ts';
import type { ApplicationMethod, Crop, CropCalendar, ParcelInput, SeasonInput, Soil } from './types.ts';

/** The surface of the reference ET that drives a run. Crops with coefficients for the tall one are brought to it day by day (FAO-56 Eq. 68). */
export const RUN_SURFACE = 'short';

/**
 * Checks what all parcels of a run share: dates, settings and the shape of the weather.
 *
 * @throws {ShapeError} when a weather array does not hold sites × days values
 * @throws {RangeViolation} for a setting outside its limits
 */
export function checkSeason(input: SeasonInput): void {
  const { weather, settings, dayCount } = input;
  if (!isIsoDate(input.startDate)) throw new RangeViolation(`start date "${input.startDate}" is not a date: give YYYY-MM-DD`);
  if (!(dayCount >= 1)) throw new RangeViolation(`a season has at least 1 day, not ${dayCount}`);
  if (weather.dayCount !== dayCount) throw new ShapeError(`weather has ${weather.dayCount} days, the season ${dayCount}`);
  if (weather.siteCount !== input.sites.length) {
    throw new ShapeError(`weather has ${weather.siteCount} sites, the site table ${input.sites.length}`);
  }
  for (const name of [...COMPLETED_SERIES, 'flags'] as const) {
    const length = weather[name].length;
    if (length !== weather.siteCount * dayCount) {
      throw new ShapeError(`weather.${name} has ${length} values: ${weather.siteCount} sites × ${dayCount} days are needed`);
    }
  }
  const carried = weather.referenceEt?.length ?? weather.siteCount * dayCount;
  if (carried !== weather.siteCount * dayCount) {
    throw new ShapeError(`weather.referenceEt has ${carried} values: ${weather.siteCount} sites × ${dayCount} days are needed`);
  }
  const lead = input.leadDays ?? 0;
  if (!(Number.isInteger(lead) && lead >= 0 && lead < dayCount)) {
    throw new RangeViolation(`lead days ${lead} must be a whole number from 0 to below the ${dayCount} days of the season`);
  }
  within('initial depletion', settings.initialDepletion, 0, 1, 'the settings');
  within('lapse rate', settings.lapseRate, -0.02, 0.02, 'the settings');
}

/** Soils, methods, crops and calendars already found good; a run of many parcels shares a few of them. */
export type Checked = WeakSet<object>;

/**
 * Checks one parcel.
 *
 * @throws {RangeViolation} for a value outside its limits
 * @throws {Refused} for a crop whose coefficients are on another reference surface than the run
 */
export function checkParcel(parcel: ParcelInput, siteCount: number, checked: Checked): void {
  const where = `parcel ${parcel.code}`;
  within('latitude', parcel.latitude, -90, 90, where);
  within('elevation', parcel.elevation, -500, 9000, where);
  once(parcel.soil, checked, (soil) => checkSoil(soil, where));
  once(parcel.method, checked, (method) => checkMethod(method, where));
  checkWeights(parcel, siteCount, where);
  checkParcelParts(parcel, where);
  for (const [name, series] of Object.entries(parcel.series ?? {})) checkSeries(series, siteCount, `${name} of ${where}`);
  for (const planting of parcel.plantings) {
    const at = `${where}, ${planting.crop.name} of ${planting.plantingDate}`;
    once(planting.crop, checked, (crop) => checkCrop(crop, at));
    once(planting.calendar, checked, (calendar) => checkCalendar(calendar, at));
    if (!(planting.areaShare > 0 && planting.areaShare <= 1)) {
      throw new RangeViolation(`area share ${planting.areaShare} is not above 0 and at most 1 (${at})`);
    }
    checkDates(planting.plantingDate, planting.harvestDate, planting.cutDates, at);
    checkPractice(planting, at);
  }
}

function once<T extends object>(thing: T, checked: Checked, check: (thing: T) => void): void {
  if (checked.has(thing)) return;
  check(thing);
  checked.add(thing);
}

function within(what: string, value: number, low: number, high: number, where: string): void {
  if (!(value >= low && value <= high)) throw new RangeViolation(`${what} ${value} is not within ${low} … ${high} (${where})`);
}

function checkSoil(soil: Soil, where: string): void {
  const at = `soil ${soil.code}, ${where}`;
  within('wilting point', soil.wiltingPoint, 0, 0.6, at);
  within('field capacity', soil.fieldCapacity, 0, 0.8, at);
  if (!(soil.fieldCapacity > soil.wiltingPoint)) {
    throw new RangeViolation(`field capacity ${soil.fieldCapacity} must be above wilting point ${soil.wiltingPoint} (${at})`);
  }
  within('readily evaporable water', soil.readilyEvaporableWater, 0, soil.totalEvaporableWater, at);
  if (!(soil.totalEvaporableWater > 0)) {
    throw new RangeViolation(`total evaporable water ${soil.totalEvaporableWater} mm must be above 0 (${at})`);
  }
  if (!(soil.evaporationDepth > 0)) throw new RangeViolation(`evaporation depth ${soil.evaporationDepth} m must be above 0 (${at})`);
  if (!Number.isNaN(soil.curveNumber)) within('curve number', soil.curveNumber, 1, 100, at);
  if (soil.rootLimit <= 0) throw new RangeViolation(`root limit ${soil.rootLimit} m must be above 0 (${at})`);
  checkSoilParts(soil, at);
}

function checkMethod(method: ApplicationMethod, where: string): void {
  const at = `application method ${method.code}, ${where}`;
  within('efficiency', method.efficiency, 0.01, 1, at);
  within('wetted fraction', method.wettedFraction, 0.01, 1, at);
  within('trigger fraction', method.triggerFraction, 0, 2, at);
  if (!(method.maximumDailyDepth > 0))
    throw new RangeViolation(`maximum daily depth ${method.maximumDailyDepth} mm must be above 0 (${at})`);
  checkMethodParts(method, at);
}

function checkWeights(parcel: ParcelInput, siteCount: number, where: string): void {
  let sum = 0;
  for (const { site, weight } of parcel.weights) {
    if (!(site >= 0 && site < siteCount)) throw new RangeViolation(`site index ${site} is not within 0 … ${siteCount - 1} (${where})`);
    if (!(weight >= 0)) throw new RangeViolation(`weight ${weight} of site ${site} must not be negative (${where})`);
    sum += weight;
  }
  if (!(sum > 0)) throw new RangeViolation(`no weather site has a weight above 0 (${where}): give it at least one`);
}

/** Most sites one series of a parcel listens to. */
const MOST_SITES = 8;

/** Weights of one series may be negative (kriging), but they sum to 1. */
function checkSeries({ weights, gradient }: SeriesWeights, siteCount: number, where: string): void {
  if (weights.length < 1 || weights.length > MOST_SITES)
    throw new RangeViolation(`${weights.length} sites, not 1 to ${MOST_SITES} (${where})`);
  let sum = 0;
  for (const { site, weight } of weights) {
    if (!(site >= 0 && site < siteCount)) throw new RangeViolation(`site index ${site} is not within 0 … ${siteCount - 1} (${where})`);
    sum += weight;
  }
  if (!(Math.abs(sum - 1) < 1e-6)) throw new RangeViolation(`weights sum to ${sum}, not to 1 (${where})`);
  if (!Number.isFinite(gradient))
    throw new RangeViolation(`gradient ${gradient} with elevation is not a number (${where}): give 0 for none`);
}

function checkCrop(crop: Crop, where: string): void {
  if (crop.surface !== RUN_SURFACE && crop.surface !== 'tall') {
    throw new Refused(
      `crop ${crop.code} has coefficients for the ${crop.surface} surface (${where}): give them for the short (grass) or the tall (alfalfa) one`,
    );
  }
  for (const [what, value] of [
    ['Kcb ini', crop.basalInitial],
    ['Kcb mid', crop.basalMid],
    ['Kcb end', crop.basalEnd],
  ] as const) {
    within(what, value, 0, 2, where);
  }
  within('height', crop.heightMax, 0.01, 40, where);
  within('greatest root depth', crop.rootDepthMax, 0.05, 20, where);
  within('least root depth', crop.rootDepthMin, 0.05, crop.rootDepthMax, where);
  within('depletion fraction', crop.depletionFraction, 0.05, 0.95, where);
  if (!(crop.lastIrrigation >= 0)) throw new RangeViolation(`last irrigation ${crop.lastIrrigation} must not be negative (${where})`);
  checkCropParts(crop, where);
}

function checkCalendar(calendar: CropCalendar, where: string): void {
  checkCalendarParts(calendar, where);
  for (const lengths of calendar.laterCycle ? [calendar, calendar.laterCycle] : [calendar]) {
    const stages = [lengths.initial, lengths.development, lengths.mid, lengths.late];
    if (stages.some((stage) => !(stage >= 0)) || !(stages.reduce((a, b) => a + b) >= 1)) {
      throw new RangeViolation(
        `stage lengths ${stages.join('/')} d of calendar ${calendar.code} must not be negative, nor all 0 (${where})`,
      );
    }
  }
}

function checkDates(planting: IsoDate, harvest: IsoDate | null, cuts: readonly IsoDate[], where: string): void {
  for (const date of [planting, ...(harvest === null ? [] : [harvest]), ...cuts]) {
    if (!isIsoDate(date)) throw new RangeViolation(`"${date}" is not a date (${where}): give YYYY-MM-DD`);
  }
  if (harvest !== null && harvest <= planting) throw new RangeViolation(`harvest ${harvest} is not after planting ${planting} (${where})`);
  for (const [k, cut] of cuts.entries()) {
    const after = cuts[k - 1] ?? planting;
    if (cut <= after || (harvest !== null && cut >= harvest)) {
      throw new RangeViolation(`cut ${cut} must come after ${after} and before harvest (${where})`);
    }
  }
}
