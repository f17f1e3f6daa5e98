import type { Metadata } from 'next';
import { addDays, dayNumber } from '../../../../../../lib/base/civil-date.ts';
import { answerCorrections, answerFlag } from '../../../../../../lib/http/answers/quality.ts';
import { answerQualitySeries } from '../../../../../../lib/http/answers/quality-series.ts';
import type { FlagAnswer } from '../../../../../../lib/http/contract/quality.ts';
import type { WeatherVariable } from '../../../../../../lib/weather/variable.ts';
import { callerInView } from '../../../../../_components/in-view.ts';
import { orNotFound } from '../../../../../_components/or-not-found.ts';
import type { PageProps } from '../../../../../_components/page-props.ts';
import { one } from '../../../../../_components/query.ts';
import { FlagView } from './flag-view.tsx';

export const metadata: Metadata = { title: 'Weather flag' };

/** Days shown on either side of those in question, and most days of a chart. */
const AROUND = 30;
const MOST_DAYS = 730;

export default async function FlagPage({ searchParams }: PageProps) {
  const [caller, query] = await Promise.all([callerInView(), searchParams]);
  const asked = (key: string) => one(query, key) ?? '';
  const flag = await orNotFound(
    answerFlag(caller, {
      ...{ source: asked('source'), site: asked('site'), variable: asked('variable') },
      ...{ rule: asked('rule'), first_day: asked('first_day') },
    }),
  );
  const { source, site } = flag;
  const series = await orNotFound(
    answerQualitySeries(caller, { source, site, variable: flag.variable as WeatherVariable, ...stretchOf(flag) }),
  );
  const decisions = flag.correction_id ? (await answerCorrections(caller, { source, site }, true)).items : [];
  const decision = decisions.find(({ id }) => id === flag.correction_id) ?? null;
  return <FlagView flag={flag} series={series} decision={decision} mayAct={caller.scope !== 'read'} timeZone={caller.district.timeZone} />;
}

/** The days in question with thirty on either side; of a long stretch its first two years. */
function stretchOf(flag: FlagAnswer): { from: string; to: string } {
  const from = addDays(flag.first_day, -AROUND);
  const end = dayNumber(flag.last_day) + AROUND;
  const days = Math.min(MOST_DAYS, end - dayNumber(from) + 1);
  return { from, to: addDays(from, days - 1) };
}
