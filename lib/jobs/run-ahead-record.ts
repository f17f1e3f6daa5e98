/** What is asked and told of the days of a run past the last observation. */
import type { SiteReferenceEt } from '../season/types.ts';
import type { DaySpan } from '../weather/normal-of-day.ts';
import type { CompletedWeather, Site } from '../weather/variable.ts';
import type { RunRecord } from './run-record.ts';
import type { RunSettings } from './run-settings.ts';

/** What a run's manifest tells of its days to come. */
export interface AheadRecord {
  /** last day with an observation at any site of the run */
  readonly last_observed: string | null;
  /** first day to come; null where every day has been observed */
  readonly first_ahead: string | null;
  readonly observed_days: number;
  readonly forecast_days: number;
  readonly analogue_days: number;
  readonly normal_days: number;
  readonly forecast: {
    readonly source: string;
    /** day on which it was brought in */
    readonly issued: string | null;
    readonly first_day: string;
    readonly last_day: string;
  } | null;
  /** first day that rests on normals or the analogue year; null where none does */
  readonly first_beyond_forecast: string | null;
  readonly normals: { readonly years: number; readonly of: string; readonly window_days: number; readonly rain_year: number | null } | null;
  readonly analogue_year: number | null;
}

export interface AheadWanted {
  readonly settings: RunSettings;
  /** the days of the run with those stepped before it */
  readonly run: { readonly startDate: string; readonly dayCount: number };
  /** first day of the season itself */
  readonly seasonStart: string;
  readonly lastObserved: string;
  readonly sites: readonly Site[];
  readonly record: RunRecord;
  /** of the run, completed as far as the record goes */
  readonly weather: CompletedWeather;
  /** where reference ET is carried from the sites: of what kind; null where it is computed at the parcels */
  readonly referenceEt: SiteReferenceEt | null;
  readonly defaultElevation: number;
  readonly radiationCoefficient: number;
  /** weather of the run's sites in another span, gaps filled and completed as that of the run */
  readonly weatherIn: (days: DaySpan) => Promise<CompletedWeather>;
}

/** While the days to come are being told. */
export interface Telling extends AheadWanted {
  readonly days: DaySpan;
  /** offset of the first day to come in the run's weather */
  readonly offset: number;
  /** 1 on the days without a forecast [day to come] */
  readonly open: Uint8Array;
  readonly openCount: number;
}
