/** What is told of the records a run rested on: in its manifest, and to whoever relies on it. */
import type { DeliveriesTold } from './run-deliveries.ts';
import type { RunSettings } from './run-settings.ts';

/** What a run's manifest tells of its records. */
export interface RecordsTold {
  readonly initial_state: {
    readonly rule: RunSettings['initial_state'];
    /** parcels that begin with soil water of their own: measured, or carried over */
    readonly parcels_with_own: number;
    readonly parcels_by_fraction: number;
    readonly carried_from: { readonly run: string; readonly season: string; readonly end_date: string; readonly stale: boolean } | null;
    /** days stepped before the season, and those asked for: fewer are stepped where weather is missing */
    readonly lead_days: number;
    readonly lead_days_asked: number;
    readonly earlier_plantings: number;
  };
  readonly deliveries: DeliveriesTold | null;
  readonly measured: { readonly efficiency: number; readonly water_table: number; readonly soil_salinity: number; readonly images: number };
}

/** What a reader of a run should know of its records before relying on it. */
export function recordWarnings({ initial_state: start, deliveries }: RecordsTold): string[] {
  const warnings: string[] = [];
  if (start.lead_days < start.lead_days_asked) {
    warnings.push(
      start.rule === 'spin-up'
        ? `The soil was spun up over ${start.lead_days} instead of ${start.lead_days_asked} days: there is no weather before them.`
        : `Of the ${start.lead_days_asked} days between the season before and this one only the last ${start.lead_days} have weather; the soil is as it was left until then.`,
    );
  }
  if (start.carried_from?.stale) {
    warnings.push(
      `Soil water was carried over from a run of season ${start.carried_from.season} that is out of date: run that season again first.`,
    );
  }
  if (start.rule === 'measured' && start.parcels_with_own === 0) {
    warnings.push('Soil water was to begin as measured, and no parcel was measured within 14 days before the season.');
  }
  if (deliveries && start.rule === 'spin-up' && start.lead_days > 0 && deliveries.days_before === 0) {
    warnings.push(`No delivery is recorded in the ${start.lead_days} days before the season: the soil was spun up without irrigation.`);
  }
  if (deliveries?.thin) {
    const { parcels, days } = deliveries.thin;
    warnings.push(
      `The last ${days} days of the record of deliveries rest on ${parcels} of ${deliveries.parcels} parcels with water recorded: every other parcel goes without water on them. Check the last deliveries, or record a 0 where nothing was given.`,
    );
  }
  if (deliveries && deliveries.days === 0) warnings.push('No delivery is recorded yet: every day goes by the rules of the plantings.');
  return warnings;
}
