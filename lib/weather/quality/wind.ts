/** Anemometers that do not turn. */
import type { SiteObservations } from '../variable.ts';
import { brokenRuns, daysText, type Flag, seriesOf, withUnit } from './flag.ts';

/** Mean of a day below which the cups are taken to stand [m s⁻¹]. Source: FAO-56 Annex 5, below 0.5 m/s all day. */
export const STILL = 0.5;
/** Mean of a day that is worth a look [m s⁻¹]. Source: ASCE-EWRI 2005 Appendix D (recalled), below about 1 m/s. */
export const LOW = 1;
/** Fewest days in a row of low wind that are noted [d]; the product's own. */
const LOW_DAYS = 5;

/** Days whose mean wind is below 0.5 m/s, and stretches below 1 m/s. Source: as rule `wind-still`. */
export function checkStillWind(observations: SiteObservations, site: number): Flag[] {
  const wind = seriesOf(observations, 'wind_speed_m_s', site);
  if (!wind) return [];
  const flag =
    (severity: 'note' | 'suspect', limit: number, says: string) =>
    ({ first, last, worst }: { first: number; last: number; worst: number }): Flag => ({
      ...{ site, variable: 'wind_speed_m_s', rule: 'wind-still', severity, firstDay: first, lastDay: last, value: wind[worst], limit },
      detail: `Mean wind of ${withUnit(wind[worst], 'wind_speed_m_s')} ${daysText(observations, first, last)} is below ${withUnit(limit, 'wind_speed_m_s')}. ${says}`,
    });
  const still = brokenRuns(wind.length, (day) => STILL - wind[day]).map(
    flag(
      'suspect',
      STILL,
      'Hardly any open site is that calm for a whole day: the cups may stand. Clean or change the bearing, and reject the days.',
    ),
  );
  const isStill = new Uint8Array(wind.length);
  for (const run of still) isStill.fill(1, run.firstDay, run.lastDay + 1);
  const low = brokenRuns(wind.length, (day) => (isStill[day] ? Number.NaN : LOW - wind[day]))
    .filter(({ first, last }) => last - first + 1 >= LOW_DAYS)
    .map(flag('note', LOW, 'Calm weather, a sheltered mast or a stiff bearing: compare with neighbours.'));
  return [...still, ...low];
}
