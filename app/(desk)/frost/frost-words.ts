/** How a frost night is put in words and figures. */
import { BORDER_UNITS, type UnitSystem } from '../../../lib/base/units.ts';
import type { FrostRow } from '../../../lib/http/contract/frost.ts';
import { figure, type Maybe, MISSING_MARK, plain, unitOf } from '../../_components/figures.ts';

export type Risk = NonNullable<FrostRow['risk']>;

/** From the worst to the least, with what each says and the tone of its tag. */
export const RISKS: readonly {
  readonly risk: Risk;
  readonly name: string;
  readonly says: string;
  readonly tone: '' | 'good' | 'caution' | 'bad';
}[] = [
  { risk: 'severe', name: 'Severe', says: 'at or below the temperature that kills nine buds in ten', tone: 'bad' },
  { risk: 'damaging', name: 'Damaging', says: 'at or below the temperature that kills one bud in ten', tone: 'caution' },
  { risk: 'possible', name: 'Possible', says: 'damaging only if the night turns out colder than expected', tone: '' },
  { risk: 'none', name: 'None', says: 'above the critical temperature even at the cold end of the band', tone: 'good' },
];

export function riskOf(risk: Risk) {
  return RISKS.find((each) => each.risk === risk) ?? RISKS[RISKS.length - 1];
}

export const STAGE_FROM: Readonly<Record<FrostRow['stage_from'], string>> = {
  chosen: 'chosen',
  'thermal-time': 'by thermal time',
  dormant: 'dormant',
  unknown: 'not known',
};

export const EVENING_FROM = {
  hours: 'hour of sunset',
  daily: 'estimated from the day',
  given: 'as given',
} as const;

export const METHODS = { brunt: 'square-root law', regression: 'own line' } as const;

/** A temperature as a figure. @example temperature(-2.22, 'metric') // '−2.2' */
export function temperature(value: Maybe, units: UnitSystem): string {
  return figure(value, 'temperature', units);
}

export function degree(units: UnitSystem): string {
  return unitOf('temperature', units);
}

/** A difference of temperature, whose zero does not move. @example difference(1, 'us') // '1.8' */
export function difference(kelvin: Maybe, units: UnitSystem): string {
  return plain(kelvin === null || kelvin === undefined ? kelvin : kelvin * (units === 'us' ? 1.8 : 1), 1);
}

/** A quantity of sprinkling, by the key of its border unit. @example sprinkling(1, 'l_s', 'us') // '15.9' */
export function sprinkling(value: Maybe, key: 'mm_h' | 'l_s' | 'm3_h', units: UnitSystem): string {
  if (value === null || value === undefined) return MISSING_MARK;
  const decimals = { mm_h: { metric: 1, us: 2 }, l_s: { metric: 1, us: 0 }, m3_h: { metric: 0, us: 2 } }[key][units];
  return plain(value * BORDER_UNITS[key][units].fromMetric, decimals);
}

export function sprinklingUnit(key: 'mm_h' | 'l_s' | 'm3_h', units: UnitSystem): string {
  return BORDER_UNITS[key][units].label;
}
