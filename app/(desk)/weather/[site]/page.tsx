import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { answerSite, answerSiteDays } from '../../../../lib/http/answers/weather.ts';
import { answerSiteBudget } from '../../../../lib/http/answers/weather-hours.ts';
import { callerInView, runInView } from '../../../_components/in-view.ts';
import { decoded, type PageProps } from '../../../_components/page-props.ts';
import { one } from '../../../_components/query.ts';
import { dayAsked, methodAsked, rangeAsked } from './range-asked.ts';
import { SiteView } from './site-view.tsx';

export async function generateMetadata({ params }: PageProps<'site'>): Promise<Metadata> {
  return { title: `Weather at ${decoded((await params).site)}` };
}

export default async function SitePage({ params, searchParams }: PageProps<'site'>) {
  const [caller, run, { site: code }, query] = await Promise.all([callerInView(), runInView(), params, searchParams]);
  const site = await answerSite(caller, decoded(code), one(query, 'source') || undefined);
  if (!site) notFound();
  const range = rangeAsked(query, site, run);
  const { source } = site;
  const shared = new Map();
  const days = range ? await answerSiteDays(caller, site.code, { ...range, source, shared }) : [];
  const date = dayAsked(query, days);
  const budget = date ? await answerSiteBudget(caller, site.code, { date, source, shared, method: methodAsked(query) }) : null;
  return <SiteView site={site} days={days} range={range} budget={budget} units={caller.units} />;
}
