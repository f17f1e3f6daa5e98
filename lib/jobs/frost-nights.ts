/** Nights on record that froze, newest first: what a reader chooses from. */
import type { Tx } from '../../db/connect.ts';
import { BUD_BASE, CRITICAL_TABLES } from '../../db/library/frost.ts';
import { findWholeDistrict } from '../../db/queries/district-read.ts';
import { findMonths } from '../../db/queries/weather-observations.ts';
import { addDays } from '../base/civil-date.ts';
import { NotFound } from '../base/errors.ts';
import { budThermalTime, isLeafless, morningMinimum } from './frost-evening.ts';
import { loadFrostRecord } from './frost-weather.ts';

/** A night that froze somewhere. */
export interface FrozenNight {
  /** evening */
  readonly date: string;
  /** of the coldest station, next morning [°C] */
  readonly minimum: number;
  readonly station: string;
  /** at that station [°C d]; NaN where it is not known */
  readonly thermalTime: number;
  /** some fruit is past its first stage by thermal time and before leaf fall */
  readonly inBud: boolean;
}

export interface RecordedNights {
  /** first and last evening on record; null without weather */
  readonly first: string | null;
  readonly last: string | null;
  readonly nights: readonly FrozenNight[];
}

const EARLIEST_STAGE = Math.min(...CRITICAL_TABLES.flatMap(({ stages }) => stages.map(({ begins }) => begins)));

/**
 * Nights of the last `years` years of the record with a minimum at or below freezing.
 *
 * @throws {NotFound} for an unknown source; {Refused} without weather stations
 */
export async function listFrozenNights(
  tx: Tx,
  districtId: string,
  wanted: { readonly source: string | null; readonly years: number },
): Promise<RecordedNights> {
  const district = await findWholeDistrict(tx, districtId);
  if (!district) throw new NotFound('there is no such district');
  const months = await findMonths(tx, districtId);
  if (!months) return { first: null, last: null, nights: [] };
  const end = addDays(months.last, 31);
  const record = await loadFrostRecord(tx, districtId, { district, source: wanted.source, date: end, places: [] });
  const { startDate, dayCount } = record.observed;
  const nights: FrozenNight[] = [];
  let last: string | null = null;
  for (let day = dayCount - 2; day >= Math.max(0, dayCount - 2 - 366 * wanted.years); day--) {
    const minima = record.stations.map((_, station) => morningMinimum({ record, station, day }));
    const known = minima.filter((value) => !Number.isNaN(value));
    if (known.length === 0) continue;
    const date = addDays(startDate, day);
    last ??= date;
    const minimum = Math.min(...known);
    if (minimum > 0) continue;
    const station = minima.indexOf(minimum);
    const thermalTime = budThermalTime({ record, station, day }, BUD_BASE);
    const { code, latitude } = record.stations[station].site;
    const inBud = thermalTime >= EARLIEST_STAGE && !isLeafless(date, latitude);
    nights.push({ date, minimum, station: code, thermalTime, inBud });
  }
  return { first: last === null ? null : startDate, last, nights };
}
