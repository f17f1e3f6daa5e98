import type { Caller } from '../../../lib/access/caller.ts';
import { answerDistrict } from '../../../lib/http/answers/district.ts';
import { answerSoils } from '../../../lib/http/answers/land.ts';
import { answerMethods } from '../../../lib/http/answers/methods.ts';
import { answerSources } from '../../../lib/http/answers/weather.ts';
import type { StartRunProps } from './start-run.tsx';

/** What a new run may be given: seasons, soils, methods, weather sources and forecasts of the district. */
export async function loadRunChoices(caller: Caller): Promise<StartRunProps> {
  const [district, soils, methods, sources] = await Promise.all([
    answerDistrict(caller),
    answerSoils(caller),
    answerMethods(caller),
    answerSources(caller),
  ]);
  const named = (role: 'observed' | 'forecast') => sources.filter((source) => source.role === role).map(({ name }) => name);
  return { district, soils, methods, sources: named('observed'), forecasts: named('forecast'), allowed: caller.scope !== 'read' };
}
