import type { Metadata } from 'next';
import { addDays, isIsoDate } from '../../../../../../lib/base/civil-date.ts';
import { answerChecks } from '../../../../../../lib/http/answers/quality.ts';
import { answerQualitySeries, answerStations } from '../../../../../../lib/http/answers/quality-series.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../../../../../lib/weather/variable.ts';
import { callerInView } from '../../../../../_components/in-view.ts';
import type { PageProps } from '../../../../../_components/page-props.ts';
import { one, oneOf } from '../../../../../_components/query.ts';
import { ACT_WORDS } from '../quality-words.ts';
import { CorrectView } from './correct-view.tsx';

export const metadata: Metadata = { title: 'Correct weather' };

/** Days of the record that are shown when the address names none, and most of a chart. */
const USUAL_DAYS = 60;
const MOST_DAYS = 730;
const ACTS = Object.keys(ACT_WORDS) as (keyof typeof ACT_WORDS)[];
const VARIABLES = Object.keys(WEATHER_VARIABLES) as WeatherVariable[];

export default async function CorrectPage({ searchParams }: PageProps) {
  const [caller, query] = await Promise.all([callerInView(), searchParams]);
  const [stations, checks] = await Promise.all([answerStations(caller), answerChecks(caller)]);
  const station =
    stations.find(({ source, code }) => code === one(query, 'site') && source === (one(query, 'source') ?? source)) ?? stations[0];
  const act = oneOf(query, 'act', ACTS, 'reject');
  const asked = oneOf(query, 'variable', VARIABLES, 'air_temperature_max_c');
  const variable = act === 'aridity' ? 'air_temperature_min_c' : asked;
  const last = checks.find(({ source }) => source === station?.source)?.last_day ?? null;
  const date = (key: string) => {
    const text = one(query, key);
    return text && isIsoDate(text) ? text : null;
  };
  const to = date('to') ?? last;
  const from = date('from') ?? (to ? addDays(to, 1 - USUAL_DAYS) : null);
  const span = from && to && from <= to ? { from, to } : null;
  const shown = span ? { from: span.from, to: [span.to, addDays(span.from, MOST_DAYS - 1)].sort()[0] } : null;
  const series =
    station && shown ? await answerQualitySeries(caller, { source: station.source, site: station.code, variable, ...shown }) : null;
  const amount = Number(one(query, 'amount') ?? Number.NaN);
  return (
    <CorrectView
      stations={stations}
      station={station ?? null}
      series={series}
      variable={variable}
      span={span}
      act={act}
      amount={Number.isFinite(amount) ? amount : undefined}
      mayAct={caller.scope !== 'read'}
    />
  );
}
