/**
 * What a season refuses in the optional parts of soils, application methods and parcels.
 */
import { RangeViolation } from '../base/errors.ts';
import type { ApplicationMethod, ParcelInput, Soil, SoilLayer } from './types.ts';

/** Two edges this close are one [m]. */
const EDGE = 1e-6;

function within(what: string, value: number, low: number, high: number, where: string): void {
  if (!(value >= low && value <= high)) throw new RangeViolation(`${what} ${value} is not within ${low} … ${high} (${where})`);
}

/**
 * Checks layers, saturation, percolation and capillary properties of a soil, each where it is there.
 *
 * @throws {RangeViolation} naming value, limits and place
 */
export function checkSoilParts(soil: Soil, at: string): void {
  checkLayers(soil.layers ?? [], at);
  if (soil.saturation !== undefined) within('saturated water content', soil.saturation, soil.fieldCapacity, 0.9, at);
  if (soil.percolationRate !== undefined) within('percolation rate [mm/d]', soil.percolationRate, 0, 200, at);
  if (!soil.capillary) return;
  within('saturated conductivity [mm/d]', soil.capillary.conductivity, 0, 1e6, at);
  within('bubbling head [m]', soil.capillary.bubblingHead, 0.001, 20, at);
  within('exponent b of the retention curve', soil.capillary.exponent, 0.1, 50, at);
}

function checkLayers(layers: readonly SoilLayer[], at: string): void {
  let bottom = 0;
  for (const [k, layer] of layers.entries()) {
    const where = `layer ${k + 1} of ${at}`;
    if (!(Math.abs(layer.top - bottom) <= EDGE)) {
      throw new RangeViolation(`top ${layer.top} m must be where the layer above ends, ${bottom} m (${where})`);
    }
    if (!(layer.bottom > layer.top)) throw new RangeViolation(`bottom ${layer.bottom} m must be below the top ${layer.top} m (${where})`);
    within('wilting point', layer.wiltingPoint, 0, 0.6, where);
    within('field capacity', layer.fieldCapacity, 0, 0.8, where);
    if (!(layer.fieldCapacity > layer.wiltingPoint)) {
      throw new RangeViolation(`field capacity ${layer.fieldCapacity} must be above wilting point ${layer.wiltingPoint} (${where})`);
    }
    bottom = layer.bottom;
  }
}

/**
 * Checks least depth, flow and the efficiency curve of a method, each where it is there.
 *
 * @throws {RangeViolation} naming value, limits and place
 */
export function checkMethodParts(method: ApplicationMethod, at: string): void {
  if (method.minimumDepth !== undefined) within('least depth [mm]', method.minimumDepth, 0, method.maximumDailyDepth, at);
  if (method.flow !== undefined) within('flow over the field [L/s/ha]', method.flow, 0.01, 1000, at);
  let before = Number.NEGATIVE_INFINITY;
  for (const { depth, efficiency } of method.efficiencyByDepth ?? []) {
    if (!(depth > before && depth >= 0)) {
      throw new RangeViolation(`depth ${depth} mm of the efficiency curve must be above the one before it and not negative (${at})`);
    }
    within(`efficiency at ${depth} mm`, efficiency, 0.01, 1, at);
    before = depth;
  }
}

/**
 * Checks what a parcel has of its own: efficiency, salinity, water of the first morning, dated values.
 *
 * @throws {RangeViolation} naming value, limits and place
 */
export function checkParcelParts(parcel: ParcelInput, where: string): void {
  const { efficiency, salinity, initialWater } = parcel;
  if (efficiency !== undefined) within('efficiency', efficiency, 0.01, 1, where);
  if (salinity) {
    within('salinity of the soil [dS/m]', salinity.soil, 0, 100, where);
    within('salinity of the water [dS/m]', salinity.water, 0, 100, where);
  }
  for (const [what, dated] of [
    ['water table [m]', parcel.waterTable],
    ['delivery [mm]', parcel.deliveries],
    ['observed Kcb', parcel.observedBasal],
  ] as const) {
    if (dated && dated.days.length !== dated.values.length) {
      throw new RangeViolation(`${what}: ${dated.days.length} days but ${dated.values.length} values (${where})`);
    }
    for (const value of dated?.values ?? []) within(what, value, 0, 1000, where);
  }
  let above = 0;
  for (const { bottom, depletion } of initialWater?.profile ?? []) {
    if (!(bottom > above))
      throw new RangeViolation(`soil water of the first morning: depth ${bottom} m must be below ${above} m (${where})`);
    if (!Number.isFinite(depletion)) {
      throw new RangeViolation(`soil water of the first morning: depletion ${depletion} mm down to ${bottom} m is not a number (${where})`);
    }
    above = bottom;
  }
}
