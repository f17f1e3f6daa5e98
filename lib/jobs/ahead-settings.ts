/** What a run asks of the days to come, held against what the district has before the run is put in the queue. */
import type { Tx } from '../../db/connect.ts';
import { listForecastSources } from '../../db/queries/weather-sources.ts';
import { Refused } from '../base/errors.ts';
import type { RunSettings } from './run-settings.ts';

/** The year of the days that stand for those to come. @throws {Refused} where none is given */
export function analogueYearOf({ analogue_year }: Pick<RunSettings, 'analogue_year'>): number {
  if (analogue_year !== null) return analogue_year;
  throw new Refused(
    'ahead "analogue" needs an analogue_year: of the season whose days are to stand for those to come, the year in which it ended.',
  );
}

/**
 * @throws {Refused} when the analogue year is left out, a forecast is named that is not there, or a forecast is named as the source of observations
 */
export async function requireAheadSettings(
  tx: Tx,
  districtId: string,
  settings: Pick<RunSettings, 'ahead' | 'analogue_year' | 'forecast_source' | 'source'>,
): Promise<void> {
  if (settings.ahead === 'analogue') analogueYearOf(settings);
  const names = (await listForecastSources(tx, districtId)).map(({ name }) => name);
  if (settings.source !== null && names.includes(settings.source)) throw forecastIsNoSource(settings.source);
  if (settings.ahead === 'refuse' || settings.forecast_source === null || names.includes(settings.forecast_source)) return;
  throw noSuchForecast(settings.forecast_source, names);
}

export function forecastIsNoSource(name: string): Refused {
  return new Refused(
    `The weather source "${name}" is a forecast: name it as forecast_source, and take a source of observations as source.`,
  );
}

export function noSuchForecast(name: string, known: readonly string[]): Refused {
  return new Refused(
    `forecast_source "${name}" is not a forecast of this district; known: ${known.join(', ') || 'none yet'}. Import weather with the role "forecast" under this name, or take another.`,
  );
}
