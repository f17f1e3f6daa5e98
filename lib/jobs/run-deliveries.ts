/** Recorded deliveries as a run takes them: depths by day over each parcel, and the day on which the record ends. */
import type { Tx } from '../../db/connect.ts';
import { type DeliveryRow, sumDeliveries } from '../../db/queries/deliveries.ts';
import { addDays, dayNumber } from '../base/civil-date.ts';
import { Refused } from '../base/errors.ts';
import { volumeToDepth } from '../base/units.ts';
import type { DatedValues, SeasonSettings } from '../season/types.ts';
import type { RunSettings } from './run-settings.ts';
import type { Lead } from './run-spin-up.ts';

/** How the days of a run are watered, counted from the first day stepped. */
export interface WaterSpan {
  readonly leadDays: number;
  readonly water: NonNullable<SeasonSettings['water']>;
  /** first day that is not recorded */
  readonly recordedUntil?: number;
}

/** What a run's manifest tells of deliveries. */
export interface DeliveriesTold {
  readonly days: number;
  readonly parcels: number;
  readonly volume_m3: number;
  readonly first_day: string | null;
  readonly last_day: string | null;
  /** parcel-days of deliveries in the days stepped before the season */
  readonly days_before: number;
  /** first day of the season that goes by the rule of its plantings; null when every day is recorded */
  readonly rule_from: string | null;
  /** the last days of the record, where few parcels have any water in them; null where the record goes on for many */
  readonly thin: { readonly days: number; readonly parcels: number } | null;
}

/**
 * Which days are recorded. The record ends with the last day of the season on which any parcel of the district has a delivery, be it of 0 m³: a district
 * that keeps its record with a day of 0 says that nothing was delivered. From the next day on the rules of the plantings hold.
 *
 * Days before the season are watered as recorded when the season is; by the rules when the soil is spun up; and not at all when it is carried over.
 *
 * @returns what is told is null where the run does not take deliveries
 * @throws Refused for a season to be run as recorded, of which nothing is
 */
export async function waterSpan(
  tx: Tx,
  districtId: string,
  wanted: { run: { startDate: string; endDate: string }; lead: Lead; settings: RunSettings },
): Promise<{ span: WaterSpan; told: DeliveriesTold | null }> {
  const { run, lead, settings } = wanted;
  const { water } = settings;
  if (water === 'rule') {
    const dry = settings.initial_state === 'carry-over' && lead.days > 0;
    const span: WaterSpan = dry
      ? { leadDays: lead.days, water: 'recorded-then-rule', recordedUntil: lead.days }
      : { leadDays: lead.days, water: 'rule' };
    return { span, told: null };
  }
  const sum = await sumDeliveries(tx, { districtId, from: run.startDate, to: run.endDate });
  if (water === 'recorded' && sum.last === null) {
    throw new Refused(
      `The season from ${run.startDate} to ${run.endDate} is to be run with the water recorded, and no delivery of it is. Import deliveries, or let the rules of the plantings ask for water.`,
    );
  }
  const span = { districtId, from: lead.startDate, to: addDays(run.startDate, -1) };
  const before = lead.days > 0 ? (await sumDeliveries(tx, span)).rows : 0;
  const ruleFrom = sum.last === null ? run.startDate : addDays(sum.last, 1);
  const told: DeliveriesTold = {
    ...{ days: sum.rows, parcels: sum.parcels, volume_m3: sum.volume, first_day: sum.first, last_day: sum.last, days_before: before },
    rule_from: water === 'recorded' || ruleFrom > run.endDate ? null : ruleFrom,
    thin: water === 'recorded' || sum.last === null ? null : await thinEnd(tx, districtId, run, sum.last, sum.parcels),
  };
  if (water === 'recorded') return { span: { leadDays: lead.days, water }, told };
  return { span: { leadDays: lead.days, water, recordedUntil: dayNumber(ruleFrom) - dayNumber(lead.startDate) }, told };
}

/** Days at the end of the record that are looked at, and the share of its parcels that should have a delivery in them. Common practice, no source. */
const END_DAYS = 30;
const END_SHARE = 0.1;

async function thinEnd(tx: Tx, districtId: string, run: { startDate: string }, last: string, parcels: number) {
  const earliest = addDays(last, 1 - END_DAYS);
  const [, from] = [earliest, run.startDate].sort();
  const end = await sumDeliveries(tx, { districtId, from, to: last });
  return end.parcels < END_SHARE * parcels ? { days: dayNumber(last) - dayNumber(from) + 1, parcels: end.parcels } : null;
}

/**
 * Deliveries of one parcel as gross depths.
 *
 * @param rows of the parcel, by day
 * @param area [m²]
 * @param startDate first day stepped
 */
export function deliveredDepths(rows: readonly DeliveryRow[], area: number, startDate: string): DatedValues {
  const first = dayNumber(startDate);
  return { days: rows.map(({ date }) => dayNumber(date) - first), values: rows.map(({ volume }) => volumeToDepth(volume, area)) };
}
