/**
 * Corrections as layers over the raw record. Each decision covers one variable of one site over a period; where two overlap the later one
 * wins and works on the raw value, never on what an earlier one made of it. The raw values are never changed.
 */
import { QUALITY, type SiteObservations, type WeatherVariable } from '../variable.ts';

export type CorrectionAct = 'accept' | 'factor' | 'offset' | 'replace' | 'reject' | 'aridity';

/** One decision, in the order in which it was made. */
export interface Correction {
  /** index into the sites of the observations */
  readonly site: number;
  readonly variable: WeatherVariable;
  /** offsets from the first day of the observations, both included; days outside the observations are passed over */
  readonly firstDay: number;
  readonly lastDay: number;
  readonly act: CorrectionAct;
  /** factor [1]; offset or replacement in the unit of the variable; Ko [°C] of an aridity adjustment */
  readonly amount: number;
  /** replacement by day offset; where it has no value the amount stands */
  readonly values?: ReadonlyMap<number, number>;
}

/** What one decision makes of one raw value; NaN for a rejected one. A missing value stays missing unless it is replaced. */
export function correctedValue(correction: Correction, raw: number, day: number): number {
  switch (correction.act) {
    case 'factor':
      return raw * correction.amount;
    case 'offset':
      return raw + correction.amount;
    case 'replace':
      return correction.values?.get(day) ?? correction.amount;
    case 'reject':
      return Number.NaN;
    default:
      return raw;
  }
}

/** Quality of a value under a decision. */
function qualityUnder(act: CorrectionAct, raw: number, value: number): number {
  if (act === 'reject') return Number.isNaN(raw) ? QUALITY.missing : QUALITY.rejected;
  if (Number.isNaN(value)) return QUALITY.missing;
  return act === 'accept' ? QUALITY.measured : QUALITY.corrected;
}

/** Observations whose arrays are their own, so that layers can be laid into them. */
export interface Layered extends SiteObservations {
  readonly values: Partial<Record<WeatherVariable, Float64Array>>;
  readonly quality: Partial<Record<WeatherVariable, Uint8Array>>;
}

/** Observations that share nothing which a layer may change; variables that no layer names are shared, named ones the source lacks are NaN. */
export function layeredOver(observations: SiteObservations, variables: Iterable<WeatherVariable>): Layered {
  const values = { ...observations.values };
  const quality = { ...observations.quality };
  for (const variable of new Set(variables)) {
    const raw = observations.values[variable] ?? new Float64Array(observations.sites.length * observations.dayCount).fill(Number.NaN);
    values[variable] = raw.slice();
    quality[variable] = observations.quality?.[variable]?.slice() ?? qualityOf(raw);
  }
  return { ...observations, values, quality };
}

/** Quality bytes of a series as it was stored: measured where there is a value. */
export function qualityOf(values: Float64Array): Uint8Array {
  return Uint8Array.from(values, (value) => (Number.isNaN(value) ? QUALITY.missing : QUALITY.measured));
}

/**
 * Lays the decisions on single variables over the record; `aridity` is laid after them, by the room that knows humidity.
 *
 * @param corrections in the order in which they were made
 * @returns new observations; the ones given are not changed, and share the arrays of variables that no decision names
 */
export function layCorrections(observations: SiteObservations, corrections: readonly Correction[]): Layered {
  const single = corrections.filter(({ act }) => act !== 'aridity');
  const layered = layeredOver(
    observations,
    single.map(({ variable }) => variable),
  );
  const { dayCount } = observations;
  for (const correction of single) {
    const { site, variable, act } = correction;
    const raw = observations.values[variable];
    const [into, quality] = [layered.values[variable] as Float64Array, layered.quality[variable] as Uint8Array];
    for (let day = Math.max(0, correction.firstDay); day <= Math.min(dayCount - 1, correction.lastDay); day++) {
      const at = site * dayCount + day;
      const before = raw?.[at] ?? Number.NaN;
      into[at] = correctedValue(correction, before, day);
      quality[at] = qualityUnder(act, before, into[at]);
    }
  }
  return layered;
}

/** Marks values in doubt: an open flag does not change a value, it only says so. Corrected, rejected and missing values keep their mark. */
export function markSuspect(
  observations: SiteObservations,
  doubts: readonly { readonly site: number; readonly variable: WeatherVariable; readonly firstDay: number; readonly lastDay: number }[],
): SiteObservations {
  if (doubts.length === 0) return observations;
  const quality = { ...observations.quality };
  const { dayCount } = observations;
  for (const variable of new Set(doubts.map((doubt) => doubt.variable))) {
    const raw = observations.values[variable];
    if (raw) quality[variable] = observations.quality?.[variable]?.slice() ?? qualityOf(raw);
  }
  for (const { site, variable, firstDay, lastDay } of doubts) {
    const own = quality[variable];
    for (let day = Math.max(0, firstDay); own && day <= Math.min(dayCount - 1, lastDay); day++) {
      const at = site * dayCount + day;
      if (own[at] === QUALITY.measured) own[at] = QUALITY.suspect;
    }
  }
  return { ...observations, quality };
}
