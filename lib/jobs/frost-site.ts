/** The night at every station: evening, minimum, its error and where each comes from. */
import { dayNumber } from '../base/civil-date.ts';
import type { Trace } from '../base/working.ts';
import type { NightTimes } from '../energy/frost-evening.ts';
import { type Evening, type NightEstimate, type NightOptions, nightEstimate } from '../energy/frost-night.ts';
import { FALLBACK, FALLBACK_TEXT, type Fallback } from '../weather/variable.ts';
import {
  type EveningSource,
  eveningOf,
  morningMinimum,
  type PastNights,
  pastNights,
  type StationDay,
  timesOf,
  traceEvening,
} from './frost-evening.ts';
import type { FrostRecord } from './frost-weather.ts';

/** A night at one station. */
export interface StationNight {
  readonly at: StationDay;
  readonly code: string;
  readonly name: string;
  readonly longitude: number;
  readonly latitude: number;
  readonly elevation: number;
  readonly times: NightTimes;
  readonly from: EveningSource;
  readonly evening: Evening;
  readonly past: PastNights;
  readonly estimate: NightEstimate;
  /** minimum of the morning after, where it is on record [°C]; else NaN */
  readonly observed: number;
  /** what of the day was filled or estimated, in words */
  readonly estimated: readonly string[];
}

interface NightsWanted {
  readonly record: FrostRecord;
  readonly date: string;
  /** the evening as the reader gives it, the same at every station; null: from the record */
  readonly given: Evening | null;
  readonly options: NightOptions;
}

/** Every station of the record; one whose evening is not known has NaN. */
export function stationNights({ record, date, given, options }: NightsWanted): StationNight[] {
  const day = dayNumber(date) - dayNumber(record.observed.startDate);
  return record.stations.map(({ site, elevation }, station) => {
    const at = { record, station, day };
    const times = timesOf(at);
    const found = given ? { evening: given, from: 'given' as const } : eveningOf(at);
    const past = pastNights(at, found, options);
    return {
      at,
      ...{ code: site.code, name: site.name, longitude: site.longitude, latitude: site.latitude, elevation, times },
      ...{ ...found, past },
      estimate: nightEstimate(found.evening, { elevation, nightLength: times.nightLength }, past, options),
      observed: morningMinimum(at),
      estimated: found.from === 'given' ? [] : estimatedOf(record, station * record.completed.dayCount + day, found.from),
    };
  });
}

/** The steps of a station's night, by the same code. */
export function traceStationNight(night: StationNight, options: NightOptions, trace: Trace): void {
  const place = { elevation: night.elevation, nightLength: night.times.nightLength };
  const strip = night.name === night.code ? night.code : `${night.code} ${night.name}`;
  traceEvening(night.at, night, trace, strip);
  nightEstimate(night.evening, place, night.past, options, trace, strip);
}

/** Precipitation and reference ET are no part of a frost night. */
const NO_MATTER = FALLBACK.precipitationAssumedZero | FALLBACK.precipitationFromNeighbour | FALLBACK.humidityFromDewPoint;

function estimatedOf({ completed }: FrostRecord, at: number, from: EveningSource): string[] {
  const flags = (completed.flags[at] ?? 0) & ~NO_MATTER;
  const words = (Object.keys(FALLBACK) as Fallback[]).filter((name) => flags & FALLBACK[name]).map((name) => FALLBACK_TEXT[name]);
  if (from === 'hours') return words;
  return [
    'sunset temperature from the extremes of the day (Parton & Logan 1981)',
    'wind of the night from the mean of the day (FAO-24)',
    ...words,
  ];
}
