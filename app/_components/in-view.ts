/**
 * What a page shows when its address does not say: who is reading, and the run of the season in view. Asked once per request.
 */
import { cookies } from 'next/headers';
import { cache } from 'react';
import { callerOfPage } from '../../lib/access/caller.ts';
import { answerDistrict } from '../../lib/http/answers/district.ts';
import { standingRun } from '../../lib/http/answers/run.ts';

/** The signed-in reader; sends anybody else to the sign-in page. */
export const callerInView = cache(callerOfPage);

/** The district of the reader, with its seasons and counts. */
export const districtInView = cache(async () => answerDistrict(await callerInView()));

/** Code of the season chosen in the header, or undefined for the newest season that has a standing run. */
export async function seasonInView(): Promise<string | undefined> {
  return (await cookies()).get('tillwater_season')?.value || undefined;
}

/** The standing run of the season in view, or null when there is none yet. A season of another district is passed over. */
export const runInView = cache(async () => {
  const [caller, season, district] = await Promise.all([callerInView(), seasonInView(), districtInView()]);
  const known = district.seasons.some((one) => one.code === season);
  return standingRun(caller, known ? season : undefined);
});
