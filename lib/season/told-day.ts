/** What the steps of a strip's day are told from. */
import { quantity } from '../base/working.ts';
import type { DayRecord } from './day-record.ts';
import type { StripCurve } from './pack.ts';
import type { StripGround } from './strip-ground.ts';
import type { Soil } from './types.ts';

/** A strip's day as the loop went through it, with what it read. */
export interface ToldDay {
  readonly record: DayRecord;
  readonly ground: StripGround;
  readonly curve: StripCurve;
  readonly soil: Soil;
  /** climate part of Kc max, see `climateTerm` */
  readonly climate: number;
  /** symbol of the water that reaches the ground: rain, or rain and melt where snow is kept */
  readonly rain: 'P' | 'Pl';
  /** Kc in place of Kcb + Ke */
  readonly single: boolean;
}

export const mm = (symbol: string, value: number) => quantity(symbol, value, 'mm');
export const one = (symbol: string, value: number) => quantity(symbol, value, '1');
export const metre = (symbol: string, value: number) => quantity(symbol, value, 'm');
