/**
 * The errors behind a band, as factors on what a season is computed from.
 *
 * Every factor is lognormal with mean 1: factor = exp(σ z − σ² / 2), σ² = ln(1 + cv²), z standard normal, drawn by strata over the members. Where a deviation
 * is 0 the factor is exactly 1. What shares an error shares its z:
 *
 * weather: one z per day for all parcels, on reference ET; from day to day z(d) = ρ z(d − 1) + √(1 − ρ²) ε(d)
 * crop coefficient: one z per crop, and an own one per parcel
 * application efficiency: one z per application method, and an own one per parcel
 * available water of the soil: one z per soil class, and an own one per parcel
 *
 * Rain is taken as known.
 */
import { seededStream, stratifiedNormal } from '../base/stratified.ts';

/** Coefficients of variation of one source of error: the part shared within a class, and the part of each parcel alone. */
export interface ErrorParts {
  readonly shared: number;
  readonly own: number;
}

/** Relative error of reference ET day by day. */
export interface WeatherError {
  /** coefficient of variation [day] */
  readonly deviation: Float64Array;
  /** correlation with the day before, 0–1 [day] */
  readonly persistence: Float64Array;
}

/** The errors of an ensemble beside the weather's. */
export interface FieldErrors {
  readonly coefficient: ErrorParts;
  readonly efficiency: ErrorParts;
  readonly available: ErrorParts;
}

/**
 * The errors a run takes unless it is told others. Common practice, no source: basal coefficients of a table are seldom trusted to better than about a
 * tenth of their value, likewise the efficiency of a method kept as usual; soils of a class differ by more.
 */
export const DEFAULT_FIELD_ERRORS: FieldErrors = {
  coefficient: { shared: 0.08, own: 0.06 },
  efficiency: { shared: 0.08, own: 0.06 },
  available: { shared: 0.1, own: 0.1 },
};

export const NO_FIELD_ERRORS: FieldErrors = {
  coefficient: { shared: 0, own: 0 },
  efficiency: { shared: 0, own: 0 },
  available: { shared: 0, own: 0 },
};

/**
 * σ of the lognormal distribution with this coefficient of variation.
 *
 * @example logDeviation(0) // 0
 * Source: σ² = ln(1 + cv²), a property of the distribution.
 */
export function logDeviation(variation: number): number {
  return Math.sqrt(Math.log1p(variation * variation));
}

/**
 * Factors on reference ET, [member × day].
 *
 * @param seed of the run
 * @param members of the ensemble
 */
export function weatherFactors(seed: number, members: number, { deviation, persistence }: WeatherError): Float64Array {
  const days = deviation.length;
  const factors = new Float64Array(members * days);
  const z = new Float64Array(members);
  const fresh = new Float64Array(members);
  for (let day = 0; day < days; day++) {
    stratifiedNormal(seededStream(seed, `weather ${day}`), fresh);
    const kept = day === 0 ? 0 : persistence[day];
    const news = Math.sqrt(1 - kept * kept);
    const sigma = logDeviation(deviation[day]);
    for (let m = 0; m < members; m++) {
      z[m] = kept * z[m] + news * fresh[m];
      factors[m * days + day] = Math.exp(sigma * z[m] - 0.5 * sigma * sigma);
    }
  }
  return factors;
}

/** Factors of one parcel, each [member]; overwritten by the next parcel. */
export interface ParcelFactors {
  /** on the application efficiency */
  readonly efficiency: Float64Array;
  /** on the available water of the soil */
  readonly available: Float64Array;
  /** on the coefficients of a crop, by its code */
  basal(crop: string): Float64Array;
}

/** Draws the factors of parcels; what is shared is drawn once. */
export interface FactorSource {
  /** @param parcel names what the parcel shares with others; `code` names its own part */
  of(parcel: { readonly code: string; readonly method: string; readonly soil: string }): ParcelFactors;
}

/** Makes the source of the factors of an ensemble. The same seed gives the same factors for a parcel, whichever others are asked for. */
export function factorSource(seed: number, members: number, errors: FieldErrors): FactorSource {
  const shared = new Map<string, Float64Array>();
  const own = new Float64Array(members);
  const [efficiency, available] = [new Float64Array(members), new Float64Array(members)];
  const deviates = (name: string): Float64Array => {
    const known = shared.get(name);
    if (known) return known;
    const made = new Float64Array(members);
    stratifiedNormal(seededStream(seed, name), made);
    shared.set(name, made);
    return made;
  };
  /** @param mean 1: the factor has mean 1; −1: what is divided by it has */
  const fill = (into: Float64Array, parts: ErrorParts, mean: 1 | -1, sharedName: string, ownName: string): Float64Array => {
    const [sharedSigma, ownSigma] = [logDeviation(parts.shared), logDeviation(parts.own)];
    const common = deviates(sharedName);
    if (ownSigma > 0) stratifiedNormal(seededStream(seed, ownName), own);
    const shift = 0.5 * mean * (sharedSigma * sharedSigma + ownSigma * ownSigma);
    for (let m = 0; m < members; m++) into[m] = Math.exp(sharedSigma * common[m] + (ownSigma > 0 ? ownSigma * own[m] : 0) - shift);
    return into;
  };
  return {
    of({ code, method, soil }) {
      fill(efficiency, errors.efficiency, -1, `efficiency ${method}`, `efficiency of ${code}`);
      fill(available, errors.available, 1, `available ${soil}`, `available of ${code}`);
      const basal = (crop: string) =>
        fill(new Float64Array(members), errors.coefficient, 1, `coefficient ${crop}`, `coefficient of ${code}`);
      return { efficiency, available, basal };
    },
  };
}
