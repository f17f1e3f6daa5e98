/** Last step of a band: quantiles of the parcels put together, the canals rolled up for every member, the district's totals. One transaction. */
import type { Tx } from '../../db/connect.ts';
import { deleteBandParts, findBandPart, listBandAreas, saveBandRow } from '../../db/queries/run-band.ts';
import { findRunValues, listRunReaches } from '../../db/queries/run-read.ts';
import { saveRunValue } from '../../db/queries/run-results.ts';
import type { RunRow } from '../../db/queries/run-state.ts';
import type { Period } from '../base/civil-date.ts';
import { ShapeError } from '../base/errors.ts';
import { depthToVolume } from '../base/units.ts';
import type { LossRule } from '../canal/loss-rule.ts';
import { memberInflows } from '../canal/member-inflow.ts';
import { buildTree } from '../canal/tree.ts';
import { BAND_QUANTILES, eachQuantile } from '../season/band-quantiles.ts';
import { BAND_VARIABLES } from '../season/ensemble.ts';
import { type BandPart, unpackBandPart } from './band-part.ts';
import { floatsOf } from './observations.ts';
import type { RunJob } from './run-failure.ts';

type PeriodKind = 'week' | 'month' | 'season';
type BandLevel = 'parcel' | 'reach' | 'district';

interface BandToFinish {
  readonly run: Omit<RunRow, 'frozen'>;
  readonly members: number;
  readonly parts: number;
  /** whether parcels keep a band of every week */
  readonly weeks: boolean;
  readonly periods: readonly { readonly kind: PeriodKind; readonly periods: readonly Period[] }[];
}

/** Most values [member × reach × day] taken up the canals at once. */
const MEMBER_VALUES = 24_000_000;

const QUANTILES = BAND_QUANTILES.length;

/** Keeps the band and takes its parts away. */
export async function finishBand(tx: Tx, key: RunJob, band: BandToFinish): Promise<void> {
  const { districtId, runId } = key;
  for (let variable = 0; variable < BAND_VARIABLES.length; variable++) await finishParcels(tx, { districtId, runId }, band, variable);
  await finishDistrict(tx, { districtId, runId }, band);
  await finishReaches(tx, { districtId, runId }, band);
  await deleteBandParts(tx, { districtId, runId });
}

/** The parts one after another, in their order: sums over them always come to the same bytes. */
async function eachPart(tx: Tx, key: RunJob, count: number, visit: (part: BandPart) => void): Promise<void> {
  for (let part = 0; part < count; part++) {
    const bytes = await findBandPart(tx, key, part);
    if (!bytes) throw new ShapeError(`part ${part} of ${count} of the band of run ${key.runId} is not there although all are counted`);
    visit(unpackBandPart(bytes));
  }
}

/** First place of each kind's periods among all of them. */
function offsetsOf({ periods }: BandToFinish): number[] {
  let at = 0;
  return periods.map((set) => {
    const offset = at;
    at += set.periods.length;
    return offset;
  });
}

function periodCountOf({ periods }: BandToFinish): number {
  return periods.reduce((sum, set) => sum + set.periods.length, 0);
}

/** [quantile × period × place] of every kind of period. */
function emptyBands(band: BandToFinish, places: number): Float32Array[] {
  return band.periods.map((set) => new Float32Array(QUANTILES * set.periods.length * places).fill(Number.NaN));
}

/** Which kind a period is of, with its place within the kind. */
function kindOfPeriod(offsets: readonly number[], period: number): { kind: number; index: number } {
  const kind = offsets.findLastIndex((offset) => offset <= period);
  return { kind, index: period - offsets[kind] };
}

async function finishParcels(tx: Tx, key: RunJob, band: BandToFinish, variable: number): Promise<void> {
  const { parcelCount } = band.run;
  const [total, offsets] = [periodCountOf(band), offsetsOf(band)];
  const bands = emptyBands(band, parcelCount);
  await eachPart(tx, key, band.parts, ({ positions, parcels }) => {
    band.periods.forEach((set, kind) => {
      for (let q = 0; q < QUANTILES; q++) {
        for (let period = 0; period < set.periods.length; period++) {
          const from = ((variable * QUANTILES + q) * total + offsets[kind] + period) * positions.length;
          const to = (q * set.periods.length + period) * parcelCount;
          for (let i = 0; i < positions.length; i++) bands[kind][to + positions[i]] = parcels[from + i];
        }
      }
    });
  });
  for (const [kind, values] of bands.entries()) {
    if (band.periods[kind].kind === 'week' && !band.weeks) continue;
    await keep(tx, key, band, { level: 'parcel', variable: BAND_VARIABLES[variable], kind, places: parcelCount, values });
    if (BAND_VARIABLES[variable] === 'gross_requirement') await saveSpread(tx, key, band, kind, values);
  }
}

interface Kept {
  readonly level: BandLevel;
  readonly variable: string;
  readonly kind: number;
  readonly places: number;
  readonly values: Float32Array;
}

async function keep(tx: Tx, key: RunJob, band: BandToFinish, { level, variable, kind, places, values }: Kept): Promise<void> {
  const { kind: period, periods } = band.periods[kind];
  const bytes = new Uint8Array(values.buffer);
  await saveBandRow(tx, { ...key, level, variable, period, periodCount: periods.length, placeCount: places, values: bytes });
}

/** Map numbers of how sure a parcel's gross requirement is: (P90 − P10) ÷ P50; missing where P50 is 0. */
async function saveSpread(tx: Tx, key: RunJob, band: BandToFinish, kind: number, values: Float32Array): Promise<void> {
  const { kind: period, periods } = band.periods[kind];
  const { parcelCount } = band.run;
  const count = periods.length * parcelCount;
  const spread = new Float32Array(count);
  for (let i = 0; i < count; i++) spread[i] = values[count + i] > 0 ? (values[2 * count + i] - values[i]) / values[count + i] : Number.NaN;
  const row = { ...key, variable: 'gross_requirement_spread', period, periodCount: periods.length, parcelCount };
  await saveRunValue(tx, { ...row, values: new Uint8Array(spread.buffer) });
}

/** Volumes over all parcels: what the run's own map numbers come to, and each member's difference. */
async function finishDistrict(tx: Tx, key: RunJob, band: BandToFinish): Promise<void> {
  const { members } = band;
  const total = periodCountOf(band);
  const differences = new Float64Array(BAND_VARIABLES.length * members * total);
  await eachPart(tx, key, band.parts, ({ volumes }) => {
    for (let i = 0; i < differences.length; i++) differences[i] += volumes[i];
  });
  const areas = await listBandAreas(tx, key);
  for (const [v, variable] of BAND_VARIABLES.entries()) {
    const plain = await plainVolumes(tx, key, band, variable, areas);
    const rows = new Float64Array(total * members);
    for (let period = 0; period < total; period++) {
      for (let m = 0; m < members; m++)
        rows[period * members + m] = Math.max(0, plain[period] + differences[(v * members + m) * total + period]);
    }
    await keepQuantiles(tx, key, band, { level: 'district', variable: VOLUME_OF[variable], places: 1, rows });
  }
}

const VOLUME_OF = {
  gross_requirement: 'gross_volume',
  net_requirement: 'net_volume',
  adjusted_crop_et: 'adjusted_crop_et_volume',
} as const;

/** Volume of the run itself in every period [m³]: weeks, months, season. */
async function plainVolumes(tx: Tx, key: RunJob, band: BandToFinish, variable: string, areas: readonly number[]): Promise<number[]> {
  const volumes: number[] = [];
  for (const { kind, periods } of band.periods) {
    const found = await findRunValues(tx, key, { variable, period: kind, index: null });
    const depths = found ? floatsOf(found.values) : new Float32Array(periods.length * areas.length).fill(Number.NaN);
    periods.forEach((_, period) => {
      let volume = 0;
      for (let i = 0; i < areas.length; i++) volume += depthToVolume(depths[period * areas.length + i], areas[i]);
      volumes.push(volume);
    });
  }
  return volumes;
}

interface MemberRows {
  readonly level: BandLevel;
  readonly variable: string;
  readonly places: number;
  /** [place × period × member] */
  readonly rows: Float64Array;
}

/** Quantiles of every place and period, kept by kind of period. */
async function keepQuantiles(tx: Tx, key: RunJob, band: BandToFinish, { level, variable, places, rows }: MemberRows): Promise<void> {
  const [total, offsets] = [periodCountOf(band), offsetsOf(band)];
  const bands = emptyBands(band, places);
  eachQuantile(rows, band.members, (quantile, row, value) => {
    const place = Math.floor(row / total);
    const { kind, index } = kindOfPeriod(offsets, row - place * total);
    bands[kind][(quantile * band.periods[kind].periods.length + index) * places + place] = value;
  });
  for (const [kind, values] of bands.entries()) await keep(tx, key, band, { level, variable, kind, places, values });
}

async function finishReaches(tx: Tx, key: RunJob, band: BandToFinish): Promise<void> {
  const stored = await listRunReaches(tx, key);
  if (stored.length === 0) return;
  const { dayCount } = band.run;
  const tree = buildTree(stored.map(({ reachCode: code, parentCode }) => ({ code, parentCode })));
  const reaches = stored.map(({ length, lossRule }) => ({ length, lossRule: lossRule as LossRule }));
  const periods = band.periods.flatMap((set) => set.periods);
  const plain = plainDemand(stored, dayCount);
  const rows = new Float64Array(stored.length * periods.length * band.members);
  const step = Math.max(1, Math.floor(MEMBER_VALUES / plain.length));
  for (let from = 0; from < band.members; from += step) {
    const count = Math.min(step, band.members - from);
    const difference = await demandDifference(tx, key, band, { from, count, reachCount: stored.length });
    const inflows = memberInflows({ tree, reaches, plain, difference, periods });
    for (let row = 0; row < stored.length * periods.length; row++)
      rows.set(inflows.subarray(row * count, (row + 1) * count), row * band.members + from);
  }
  const head = rows.slice(tree.head * periods.length * band.members, (tree.head + 1) * periods.length * band.members);
  await keepQuantiles(tx, key, band, { level: 'district', variable: 'head_inflow', places: 1, rows: head });
  await keepQuantiles(tx, key, band, { level: 'reach', variable: 'head_inflow', places: stored.length, rows });
}

/** Turnout demand of the run itself, [reach × day]. */
function plainDemand(stored: readonly { readonly daily: Uint8Array }[], dayCount: number): Float64Array {
  const demand = new Float64Array(stored.length * dayCount);
  stored.forEach(({ daily }, reach) => {
    demand.set(new Float64Array(Uint8Array.from(daily).buffer, 0, dayCount), reach * dayCount);
  });
  return demand;
}

/** What the demand of some members differs by, over all parts, [member × reach × day]. */
async function demandDifference(
  tx: Tx,
  key: RunJob,
  band: BandToFinish,
  { from, count, reachCount }: { readonly from: number; readonly count: number; readonly reachCount: number },
): Promise<Float64Array> {
  const { dayCount } = band.run;
  const difference = new Float64Array(count * reachCount * dayCount);
  await eachPart(tx, key, band.parts, ({ reaches, demand }) => {
    for (let m = 0; m < count; m++) {
      reaches.forEach((ordinal, own) => {
        const at = ((from + m) * reaches.length + own) * dayCount;
        const into = (m * reachCount + ordinal) * dayCount;
        for (let day = 0; day < dayCount; day++) difference[into + day] += demand[at + day];
      });
    }
  });
  return difference;
}
