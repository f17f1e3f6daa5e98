/** The days stepped before a season, so that the soil has settled, or to carry it over from the season before. */
import type { Tx } from '../../db/connect.ts';
import { listSeasonDates } from '../../db/queries/run-inputs.ts';
import { listPlantingsOf } from '../../db/queries/run-land.ts';
import { listBlocks } from '../../db/queries/weather-observations.ts';
import { addDays, dayNumber, isoDate } from '../base/civil-date.ts';
import { findRunSource } from './run-observations.ts';
import type { RunSettings } from './run-settings.ts';

/** Days in front of a season. */
export interface Lead {
  /** days stepped and not kept */
  readonly days: number;
  /** first day stepped */
  readonly startDate: string;
  /** days that were asked for */
  readonly asked: number;
}

/** What tells that a day has weather at a site: without one of them nothing can be computed. */
const DRIVERS = ['air_temperature_max_c', 'air_temperature_mean_c', 'reference_et_given_mm'];

/**
 * The longest stretch of days just before a season on each of which some site of the run's source has weather, at most `asked`.
 *
 * @throws Refused when the source has no weather
 */
export async function leadWithWeather(
  tx: Tx,
  districtId: string,
  wanted: { startDate: string; asked: number; settings: Pick<RunSettings, 'source'> },
): Promise<Lead> {
  const { startDate, asked } = wanted;
  const { sources } = await findRunSource(tx, districtId, wanted.settings.source);
  const sourceIds = sources.map(({ sourceId }) => sourceId);
  const end = dayNumber(startDate);
  let month = '';
  let reported: (day: number) => boolean = () => false;
  let days = 0;
  while (days < asked) {
    const date = isoDate(end - days - 1);
    if (date.slice(0, 7) !== month) {
      month = date.slice(0, 7);
      const blocks = await listBlocks(tx, districtId, { from: date, to: `${month}-28`, sourceIds, variables: DRIVERS });
      reported = (day) => blocks.some((block) => hasValue(block, day));
    }
    if (!reported(Number(date.slice(8)) - 1)) break;
    days++;
  }
  return { days, startDate: addDays(startDate, -days), asked };
}

/** Whether any site of a block has a value on a day of its month, counted from 0. */
function hasValue({ values, siteCount, dayCount }: { values: Uint8Array; siteCount: number; dayCount: number }, day: number): boolean {
  if (day >= dayCount) return false;
  const view = new DataView(values.buffer, values.byteOffset, values.byteLength);
  for (let site = 0; site < siteCount; site++) if (!Number.isNaN(view.getFloat32((site * dayCount + day) * 4, true))) return true;
  return false;
}

/** A planting of an earlier season as it stands in the days before a season. */
export type EarlierPlanting = Awaited<ReturnType<typeof listPlantingsOf>>[number];

/**
 * Plantings of earlier seasons that stand in the days before a season, by parcel.
 *
 * Seasons follow one another: after this one the latest that ends before it begins, and so on to the first that ended before these days, whose crops may
 * still stand; seasons that overlap those are passed over. A planting ends at the latest where the season after its own begins, or with the first planting of
 * that season on its parcel: that season has its own word on what stands there.
 *
 * @param own plantings of the season itself
 */
export async function earlierPlantings(
  tx: Tx,
  districtId: string,
  wanted: {
    season: string;
    lead: Lead;
    startDate: string;
    codes: readonly string[];
    own: readonly { parcelCode: string; plantingDate: string }[];
  },
): Promise<Map<string, EarlierPlanting[]>> {
  const found = new Map<string, EarlierPlanting[]>();
  if (wanted.lead.days === 0) return found;
  const ends = new Map<string, string>();
  const close = (rows: readonly { parcelCode: string; plantingDate: string }[], start: string) => {
    for (const { parcelCode, plantingDate } of rows) {
      const first = plantingDate < start ? plantingDate : start;
      const end = ends.get(parcelCode);
      if (end === undefined || first < end) ends.set(parcelCode, first);
    }
  };
  const seasons = (await listSeasonDates(tx, districtId)).sort((a, b) => (a.endDate < b.endDate ? 1 : -1));
  close(wanted.own, wanted.startDate);
  let start = wanted.startDate;
  for (const season of seasons) {
    if (season.endDate >= start) continue;
    const rows = await listPlantingsOf(tx, districtId, season.code, wanted.codes);
    for (const row of rows) {
      const ended = ends.get(row.parcelCode);
      const limit = ended !== undefined && ended < start ? ended : start;
      const harvestDate = row.harvestDate !== null && row.harvestDate < limit ? row.harvestDate : limit;
      if (harvestDate <= row.plantingDate || harvestDate <= wanted.lead.startDate) continue;
      found.set(row.parcelCode, [...(found.get(row.parcelCode) ?? []), { ...row, harvestDate }]);
    }
    if (season.endDate < wanted.lead.startDate) break;
    close(rows, season.startDate);
    start = season.startDate;
  }
  return found;
}
