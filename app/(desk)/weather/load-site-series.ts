import type { Caller } from '../../../lib/access/caller.ts';
import { addDays } from '../../../lib/base/civil-date.ts';
import { answerSiteDays } from '../../../lib/http/answers/weather.ts';
import type { SiteAnswer, SiteDay } from '../../../lib/http/contract/rest.ts';
import type { RunAnswer } from '../../../lib/http/contract/run.ts';

/** Beyond this many sites (a grid) the list shows records without their series. */
export const SITES_WITH_SERIES = 40;
/** Days shown when no season has been run [d]. */
export const RECENT_DAYS = 180;

export interface DayRange {
  readonly from: string;
  readonly to: string;
}

/** The days a site is shown for unless the address says otherwise: the season in view where the site has any of it, else its last days. */
export function usualRange(site: SiteAnswer, run: RunAnswer | null): DayRange | null {
  if (!site.first_day || !site.last_day) return null;
  if (run && run.start_date <= site.last_day && run.end_date >= site.first_day) return { from: run.start_date, to: run.end_date };
  const [, from] = [addDays(site.last_day, 1 - RECENT_DAYS), site.first_day].sort();
  return { from, to: site.last_day };
}

/** Days of each site by its code; empty for a large grid. */
export async function loadSiteSeries(
  caller: Caller,
  sites: readonly SiteAnswer[],
  run: RunAnswer | null,
): Promise<Map<string, readonly SiteDay[]>> {
  const series = new Map<string, readonly SiteDay[]>();
  if (sites.length > SITES_WITH_SERIES) return series;
  const shared = new Map();
  for (const site of sites) {
    const range = usualRange(site, run);
    if (range) series.set(site.code, await answerSiteDays(caller, site.code, { ...range, source: site.source, shared }));
  }
  return series;
}
