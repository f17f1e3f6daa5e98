import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { answerPyranometer, answerQualitySeries } from '../../../../../../lib/http/answers/quality-series.ts';
import { callerInView } from '../../../../../_components/in-view.ts';
import { orNotFound } from '../../../../../_components/or-not-found.ts';
import type { PageProps } from '../../../../../_components/page-props.ts';
import { one } from '../../../../../_components/query.ts';
import { PyranometerView } from './pyranometer-view.tsx';

export const metadata: Metadata = { title: 'Pyranometer' };

export default async function PyranometerPage({ searchParams }: PageProps) {
  const [caller, query] = await Promise.all([callerInView(), searchParams]);
  const [source, site] = [one(query, 'source') ?? '', one(query, 'site') ?? ''];
  const found = await answerPyranometer(caller, source, site);
  if (!found) notFound();
  const years = [...new Set(found.windows.flatMap(({ from, to }) => [from.slice(0, 4), to.slice(0, 4)]))];
  const year = years.find((each) => each === one(query, 'year')) ?? found.years.at(-1)?.year.toString() ?? years.at(-1);
  const wanted = { source, site, variable: 'solar_radiation_mj_m2_d' } as const;
  const series = year ? await orNotFound(answerQualitySeries(caller, { ...wanted, from: `${year}-01-01`, to: `${year}-12-31` })) : null;
  return (
    <PyranometerView
      source={source}
      pyranometer={found}
      series={series}
      year={year ?? null}
      years={years}
      mayAct={caller.scope !== 'read'}
    />
  );
}
