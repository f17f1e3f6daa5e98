import type { Caller } from '../../../lib/access/caller.ts';
import { answerDistrict } from '../../../lib/http/answers/district.ts';
import { answerMethods, answerSoils } from '../../../lib/http/answers/land.ts';
import { answerSites } from '../../../lib/http/answers/weather.ts';
import type { StartRunProps } from './start-run.tsx';

/** What a new run may be given: seasons, soils, methods and weather sources of the district. */
export async function loadRunChoices(caller: Caller): Promise<StartRunProps> {
  const [district, soils, methods, sites] = await Promise.all([
    answerDistrict(caller),
    answerSoils(caller),
    answerMethods(caller),
    answerSites(caller),
  ]);
  return { district, soils, methods, sources: [...new Set(sites.map((site) => site.source))], allowed: caller.scope !== 'read' };
}
