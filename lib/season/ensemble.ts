/**
 * Many seasons of the same parcels, each with errors of its own: what the members come to by period, by parcel, reach and district.
 *
 * Parcel outer, member inner: weather and curves are placed once per parcel. Members are rounded to storage day by day as a run is, so that members
 * without error are the run itself. Of reaches and district only the difference from the plain run is kept: added to what the run has stored, members
 * without error give its own numbers to the last bit.
 */
import type { Period } from '../base/civil-date.ts';
import { depthToVolume } from '../base/units.ts';
import { type FactorSource, type FieldErrors, factorSource, type WeatherError, weatherFactors } from './band-factors.ts';
import { BAND_QUANTILES, eachQuantile } from './band-quantiles.ts';
import { storedValue } from './daily-store.ts';
import { type MemberFactors, type MemberRows, placeMembers, walkWithFactors } from './ensemble-entry.ts';
import { type PackedSeason, packSeason } from './pack.ts';
import { type DailyVariable, MISSING_STORED, type ParcelInput, type SeasonInput } from './types.ts';

/** What a band is kept of at the parcels [mm], in the order of the arrays. */
export const BAND_VARIABLES = ['gross_requirement', 'net_requirement', 'adjusted_crop_et'] as const satisfies readonly DailyVariable[];

/** Hundredths of a millimetre, as a run stores depths. */
const SCALE = 100;

export interface EnsembleWanted {
  readonly members: number;
  readonly seed: number;
  /** by day of the season input, lead days and all */
  readonly weather: WeatherError;
  readonly errors: FieldErrors;
  /** offsets from the first day kept; periods of several kinds may follow one another */
  readonly periods: readonly Period[];
  /** reach of each parcel, an index below `reachCount`; −1 for none */
  readonly reachOf: ArrayLike<number>;
  readonly reachCount: number;
}

export interface EnsembleOutput {
  /** P10, P50, P90 of the sum of a period [mm], [variable × quantile × period × parcel] */
  readonly parcels: Float32Array;
  /** gross volume drawn from a reach, less that of the plain run [m³ d⁻¹], [member × reach × day] */
  readonly demand: Float32Array;
  /** volume over all parcels, less that of the plain run [m³], [variable × member × period] */
  readonly volumes: Float32Array;
}

/** Places a parcel and answers what walks it and fills the rows: the kernel's own entry, unless a test brings another. */
export type MemberWalker = (season: PackedSeason, parcel: ParcelInput) => (factors: MemberFactors, rows: MemberRows) => unknown;

function kernel(season: PackedSeason, parcel: ParcelInput) {
  const placed = placeMembers(season, parcel);
  return (factors: MemberFactors, rows: MemberRows) => walkWithFactors(season, placed, factors, rows);
}

/**
 * Walks every member of every parcel.
 *
 * The output depends on the input and the seed alone. A parcel's numbers do not depend on the other parcels of the call.
 *
 * Missing: no NaN leaves.
 *
 * @throws as `runSeason`
 * Source: Monte Carlo with Latin hypercube sampling (McKay, Beckman & Conover 1979); errors as in `band-factors.ts`.
 */
export function runEnsemble(input: SeasonInput, wanted: EnsembleWanted, walker: MemberWalker = kernel): EnsembleOutput {
  const season = packSeason(input);
  const sums = new Sums(input, wanted);
  const factors = factorSource(wanted.seed, wanted.members, wanted.errors);
  const et = weatherFactors(wanted.seed, wanted.members, wanted.weather);
  input.parcels.forEach((parcel, index) => {
    const walk = walker(season, parcel);
    walk(plainFactors(input.dayCount, parcel), sums.rows);
    sums.addPlain();
    const members = memberFactors(factors, parcel, et, input.dayCount);
    for (let m = 0; m < wanted.members; m++) {
      walk(members(m), sums.rows);
      sums.addMember(m, parcel.area, wanted.reachOf[index]);
    }
    sums.close(index);
  });
  return sums.output;
}

function plainFactors(days: number, parcel: ParcelInput): MemberFactors {
  const ones = new Float64Array(days).fill(1);
  return { referenceEt: ones, referenceEtFrom: 0, basal: new Float64Array(parcel.plantings.length).fill(1), available: 1, efficiency: 1 };
}

/** Factors of one member after another; the record is the same each time. */
function memberFactors(source: FactorSource, parcel: ParcelInput, et: Float64Array, days: number): (member: number) => MemberFactors {
  const { efficiency, available, basal } = source.of({ code: parcel.code, method: parcel.method.code, soil: parcel.soil.code });
  const byPlanting = parcel.plantings.map(({ crop }) => basal(crop.code));
  const own = new Float64Array(parcel.plantings.length);
  return (member) => {
    for (let k = 0; k < own.length; k++) own[k] = byPlanting[k][member];
    return {
      referenceEt: et,
      referenceEtFrom: member * days,
      basal: own,
      available: available[member],
      efficiency: efficiency[member],
    };
  };
}

/** Takes in the rows of one walk after another. */
class Sums {
  readonly rows: { readonly netRequirement: Float64Array; readonly grossRequirement: Float64Array; readonly adjustedCropEt: Float64Array };
  readonly output: EnsembleOutput;
  private readonly days: number;
  private readonly parcelCount: number;
  /** hundredths of the plain walk [day] */
  private readonly plainGross: Int32Array;
  private readonly gross: Int32Array;
  /** sums of the days before [day + 1] */
  private readonly before: Int32Array;
  /** [variable × period] of the plain walk */
  private readonly plain: Int32Array;
  /** [variable × period × member] */
  private readonly sums: Int32Array;
  private readonly volumes: Float64Array;

  constructor(
    input: SeasonInput,
    private readonly wanted: EnsembleWanted,
  ) {
    const { members, periods, reachCount } = wanted;
    this.days = input.dayCount - (input.leadDays ?? 0);
    this.parcelCount = input.parcels.length;
    const row = () => new Float64Array(this.days);
    this.rows = { netRequirement: row(), grossRequirement: row(), adjustedCropEt: row() };
    this.plainGross = new Int32Array(this.days);
    this.gross = new Int32Array(this.days);
    this.before = new Int32Array(this.days + 1);
    const kinds = BAND_VARIABLES.length * periods.length;
    this.plain = new Int32Array(kinds);
    this.sums = new Int32Array(kinds * members);
    this.volumes = new Float64Array(kinds * members);
    this.output = {
      parcels: new Float32Array(kinds * BAND_QUANTILES.length * this.parcelCount),
      demand: new Float32Array(members * reachCount * this.days),
      volumes: new Float32Array(kinds * members),
    };
  }

  addPlain(): void {
    for (let v = 0; v < BAND_VARIABLES.length; v++) this.sumPeriods(v, this.plain, v * this.wanted.periods.length, 1);
    this.plainGross.set(this.gross);
  }

  addMember(member: number, area: number, reach: number): void {
    const { members, periods } = this.wanted;
    for (let v = 0; v < BAND_VARIABLES.length; v++) {
      const first = v * periods.length;
      this.sumPeriods(v, this.sums, first * members + member, members);
      for (let p = 0; p < periods.length; p++) {
        const difference = this.sums[(first + p) * members + member] - this.plain[first + p];
        this.volumes[(v * members + member) * periods.length + p] += depthToVolume(difference / SCALE, area);
      }
    }
    if (reach >= 0) this.addDemand(member, area, reach);
  }

  /** Rounds a row to storage and sums it by period, to every `step`th place from `at`. */
  private sumPeriods(variable: number, into: Int32Array, at: number, step: number): void {
    const { before, days, gross } = this;
    const row = this.rowOf(variable);
    let sum = 0;
    for (let d = 0; d < days; d++) {
      const scaled = row[d] * SCALE + 0.5;
      const stored = scaled >= 0 && scaled < MISSING_STORED ? Math.floor(scaled) : storedValue(row[d], SCALE);
      if (variable === 0) gross[d] = stored;
      sum += stored;
      before[d + 1] = sum;
    }
    const { periods } = this.wanted;
    for (let p = 0; p < periods.length; p++) into[at + p * step] = before[periods[p].to + 1] - before[periods[p].from];
  }

  private rowOf(variable: number): Float64Array {
    if (variable === 0) return this.rows.grossRequirement;
    return variable === 1 ? this.rows.netRequirement : this.rows.adjustedCropEt;
  }

  private addDemand(member: number, area: number, reach: number): void {
    const { demand } = this.output;
    const from = (member * this.wanted.reachCount + reach) * this.days;
    for (let d = 0; d < this.days; d++) {
      const difference = this.gross[d] - this.plainGross[d];
      if (difference !== 0) demand[from + d] += depthToVolume(difference / SCALE, area);
    }
  }

  /** Quantiles of the parcel, once all its members are in. */
  close(parcel: number): void {
    const { members, periods } = this.wanted;
    const { parcels } = this.output;
    eachQuantile(this.sums, members, (quantile, row, value) => {
      const variable = Math.floor(row / periods.length);
      const period = row - variable * periods.length;
      parcels[((variable * BAND_QUANTILES.length + quantile) * periods.length + period) * this.parcelCount + parcel] = value / SCALE;
    });
    if (parcel === this.parcelCount - 1) this.output.volumes.set(this.volumes);
  }
}
