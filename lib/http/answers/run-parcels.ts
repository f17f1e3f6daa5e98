/** Water requirement by parcel and period, from the stored days of each parcel. */
import { z } from 'zod';
import { cropNames } from '../../../db/queries/land-read.ts';
import {
  countRunParcels,
  listRunParcelDays,
  type RunHead,
  type RunParcelDays,
  type RunParcelFilter,
} from '../../../db/queries/run-read.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import type { Period } from '../../base/civil-date.ts';
import { nullFromNaN, roundOrNull } from '../../base/missing.ts';
import { depthToVolume } from '../../base/units.ts';
import { storedArray, storedFlags, variableIndex } from '../../season/daily-store.ts';
import { DAILY_VARIABLES, type DailyVariable, MISSING_STORED } from '../../season/types.ts';
import { countDayKinds, type DayKind, dayKind } from '../../weather/day-kind.ts';
import { estimatedShare } from '../../weather/estimated-share.ts';
import { FALLBACK, fallbackNames } from '../../weather/variable.ts';
import type { ParcelPeriod } from '../contract/run.ts';
import { readCursor, writeCursor } from '../paging.ts';
import type { Page, PageWanted } from './land.ts';
import { periodsWanted, readFinishedRun, type SpanWanted } from './run.ts';

interface RunParcelsWanted extends SpanWanted {
  readonly parcel?: string;
  readonly reach?: string;
  readonly crop?: string;
}

/** A page of rows: by parcel in map order, then by period. */
export async function answerRunParcels(caller: Caller, runId: string, wanted: RunParcelsWanted & PageWanted): Promise<Page<ParcelPeriod>> {
  const place = readCursor(wanted.cursor, z.tuple([z.number().int(), z.number().int()])) ?? [0, 0];
  return database().inDistrict(caller.districtId, async (tx) => {
    const run = await readFinishedRun(tx, caller.districtId, runId);
    const periods = periodsWanted(run, caller, wanted);
    const filter = filterOf(caller, runId, wanted);
    const names = await cropNames(tx, caller.districtId);
    const parcels = await listRunParcelDays(tx, filter, place[0], Math.ceil(wanted.limit / Math.max(1, periods.length)) + 2);
    const rows: { row: ParcelPeriod; at: [number, number] }[] = [];
    for (const parcel of parcels) {
      const begin = parcel.position === place[0] ? place[1] : 0;
      const need = wanted.limit + 1 - rows.length;
      const some = periods.slice(begin, begin + need);
      parcelPeriods(parcel, run, some, names).forEach((row, index) => {
        rows.push({ row, at: [parcel.position, begin + index] });
      });
    }
    return {
      items: rows.slice(0, wanted.limit).map(({ row }) => row),
      next_cursor: rows.length > wanted.limit ? writeCursor(...rows[wanted.limit].at) : null,
      total: (await countRunParcels(tx, filter)) * periods.length,
    };
  });
}

function filterOf(caller: Caller, runId: string, wanted: RunParcelsWanted): RunParcelFilter {
  const { parcel, reach, crop } = wanted;
  return { districtId: caller.districtId, runId, codes: caller.parcels, parcel, reach, crop };
}

/** Every row, some parcels at a time: each piece is read in a transaction of its own, since a finished run does not change. */
export async function* eachRunParcels(
  caller: Caller,
  runId: string,
  wanted: RunParcelsWanted,
  parcelsAtOnce = 200,
): AsyncGenerator<ParcelPeriod[]> {
  const { run, names } = await database().inDistrict(caller.districtId, async (tx) => ({
    run: await readFinishedRun(tx, caller.districtId, runId),
    names: await cropNames(tx, caller.districtId),
  }));
  const periods = periodsWanted(run, caller, wanted);
  const filter = filterOf(caller, runId, wanted);
  let position = 0;
  for (;;) {
    const from = position;
    const parcels = await database().inDistrict(caller.districtId, (tx) => listRunParcelDays(tx, filter, from, parcelsAtOnce));
    if (parcels.length > 0) yield parcels.flatMap((parcel) => parcelPeriods(parcel, run, periods, names));
    if (parcels.length < parcelsAtOnce) return;
    position = parcels[parcels.length - 1].position + 1;
  }
}

/** Rows of one parcel. A day of missing makes the sum of its period missing. */
function parcelPeriods(
  parcel: RunParcelDays,
  run: Pick<RunHead, 'dayCount'>,
  periods: readonly Period[],
  names: ReadonlyMap<string, string>,
): ParcelPeriod[] {
  const reader = new DayReader(parcel, run.dayCount);
  const crops = parcel.cropCodes.map((code) => names.get(code) ?? code).join(' + ');
  return periods.map((period) => {
    const net = reader.sum('net_requirement', period);
    const gross = reader.sum('gross_requirement', period);
    const sum = (variable: DailyVariable) => nullFromNaN(reader.sum(variable, period));
    const end = (variable: DailyVariable) => nullFromNaN(reader.at(variable, period.to));
    return {
      parcel: parcel.parcelCode,
      start: period.start,
      end: period.end,
      crops,
      turnout: parcel.turnoutCode,
      reach: parcel.reachCode,
      area_ha: roundOrNull(parcel.area / 1e4, 6) ?? 0,
      reference_et_mm: sum('reference_et'),
      crop_et_mm: sum('crop_et'),
      adjusted_crop_et_mm: sum('adjusted_crop_et'),
      precipitation_mm: sum('precipitation'),
      effective_precipitation_mm: sum('effective_precipitation'),
      net_requirement_mm: nullFromNaN(net),
      gross_requirement_mm: nullFromNaN(gross),
      deep_percolation_mm: sum('deep_percolation'),
      irrigation_percolation_mm: sum('irrigation_percolation'),
      capillary_rise_mm: sum('capillary_rise'),
      surface_runoff_mm: sum('surface_runoff'),
      root_zone_depletion_mm: end('root_zone_depletion'),
      total_available_water_mm: end('total_available_water'),
      readily_available_water_mm: end('readily_available_water'),
      stress_coefficient: roundOrNull(reader.mean('stress_coefficient', period), 4),
      net_volume_m3: roundOrNull(depthToVolume(net, parcel.area), 3),
      gross_volume_m3: roundOrNull(depthToVolume(gross, parcel.area), 3),
      ...reader.dayCounts(period),
      estimated_share: roundOrNull(reader.estimatedShare(period), 4),
      fallbacks: reader.fallbacks(period),
    };
  });
}

/** Sums, means and single days out of a parcel's stored season. Sums are of whole numbers and so exact. */
export class DayReader {
  private readonly stored: Uint16Array;
  private readonly flags: Uint32Array;

  constructor(
    parcel: { daily: Uint8Array | null; flags: Uint8Array | null },
    private readonly dayCount: number,
  ) {
    this.stored = parcel.daily ? storedArray(parcel.daily) : new Uint16Array(DAILY_VARIABLES.length * dayCount).fill(MISSING_STORED);
    this.flags = parcel.flags ? storedFlags(parcel.flags, dayCount) : new Uint32Array(dayCount);
  }

  at(variable: DailyVariable, day: number): number {
    const index = variableIndex(variable);
    const raw = this.stored[index * this.dayCount + day];
    return raw === MISSING_STORED ? Number.NaN : raw / DAILY_VARIABLES[index].scale;
  }

  sum(variable: DailyVariable, { from, to }: Period): number {
    const index = variableIndex(variable);
    const base = index * this.dayCount;
    let total = 0;
    for (let day = from; day <= to; day++) {
      const raw = this.stored[base + day];
      if (raw === MISSING_STORED) return Number.NaN;
      total += raw;
    }
    return total / DAILY_VARIABLES[index].scale;
  }

  /** Mean over the days that have a value; NaN when none has. */
  mean(variable: DailyVariable, { from, to }: Period): number {
    let [total, count] = [0, 0];
    for (let day = from; day <= to; day++) {
      const value = this.at(variable, day);
      if (Number.isNaN(value)) continue;
      total += value;
      count++;
    }
    return count === 0 ? Number.NaN : total / count;
  }

  /** What was estimated on any of the days; the dew point counts as a measurement (FAO-56 Eq. 14). */
  fallbacks({ from, to }: Pick<Period, 'from' | 'to'>): string[] {
    let bits = 0;
    for (let day = from; day <= to; day++) bits |= this.flags[day];
    return fallbackNames(bits & ~FALLBACK.humidityFromDewPoint);
  }

  /** What one day rests on. */
  dayKind(day: number): DayKind {
    return dayKind(this.flags[day]);
  }

  /** Days of each kind. */
  dayCounts(period: Pick<Period, 'from' | 'to'>) {
    const { observed, filled, forecast, analogue, normal } = countDayKinds(this.flags, period);
    return { observed_days: observed, filled_days: filled, forecast_days: forecast, analogue_days: analogue, normal_days: normal };
  }

  /** Share of the days on which a value of the weather was filled or estimated. */
  estimatedShare(period: Pick<Period, 'from' | 'to'>): number {
    return estimatedShare(this.flags, period);
  }
}
