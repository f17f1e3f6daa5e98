/** The ways a series can be carried from sites to a place: method and elevation trend, named once for runs, checks and screens. */
import { FEWEST_TREND_SITES, LEAST_ELEVATION_SPREAD } from './elevation-trend.ts';

export type CarryMethod = 'nearest' | 'inverse-distance' | 'kriging';
export type CarryTrend = 'none' | 'lapse-rate' | 'fitted';

export interface Carry {
  readonly method: CarryMethod;
  /** exponent of inverse distance; NaN for the others */
  readonly power: number;
  readonly trend: CarryTrend;
}

/** Powers of inverse distance that are held against each other; 2 first, as the usual one. */
export const CHECKED_POWERS = [2, 1, 3] as const;
/** Fewest sites with a known place for a semivariogram: 15 pairs (common practice asks for more; below this there is nothing to fit). */
export const FEWEST_KRIGING_SITES = 6;

/** Why there is no kriging, or no fitted trend, for a set of sites. */
export const TOO_FEW_TO_KRIGE = `kriging needs at least ${FEWEST_KRIGING_SITES} sites at different places`;
export const NO_TREND = `a fitted elevation trend needs ${FEWEST_TREND_SITES} sites of known elevation that span ${LEAST_ELEVATION_SPREAD} m`;

/** Every way to check, simplest first. Lapse rate is for temperatures alone, a fitted trend for everything but rain. */
export function carriesToCheck(options: { temperature: boolean; fitted: boolean; kriging: boolean }): Carry[] {
  const methods: Omit<Carry, 'trend'>[] = [
    { method: 'nearest', power: Number.NaN },
    ...CHECKED_POWERS.map((power) => ({ method: 'inverse-distance', power }) as const),
    ...(options.kriging ? [{ method: 'kriging', power: Number.NaN } as const] : []),
  ];
  const trends: CarryTrend[] = [
    'none',
    ...(options.temperature ? (['lapse-rate'] as const) : []),
    ...(options.fitted ? (['fitted'] as const) : []),
  ];
  return methods.flatMap((method) => trends.map((trend) => ({ ...method, trend })));
}

/** @example carryId({ method: 'inverse-distance', power: 2, trend: 'fitted' }) // 'inverse-distance-2-fitted' */
export function carryId({ method, power, trend }: Carry): string {
  const named = method === 'inverse-distance' ? `${method}-${power}` : method;
  return trend === 'none' ? named : `${named}-${trend}`;
}

/** In words, for tables. @example carryText({ method: 'kriging', power: NaN, trend: 'none' }) // 'ordinary kriging' */
export function carryText({ method, power, trend }: Carry): string {
  const named = { nearest: 'nearest site', 'inverse-distance': `inverse distance, power ${power}`, kriging: 'ordinary kriging' }[method];
  return { none: named, 'lapse-rate': `${named}, lapse rate`, fitted: `${named}, fitted elevation trend` }[trend];
}
