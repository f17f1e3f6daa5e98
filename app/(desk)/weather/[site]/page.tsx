import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { answerSiteDays, answerSites } from '../../../../lib/http/answers/weather.ts';
import { callerInView, runInView } from '../../../_components/in-view.ts';
import { decoded, type PageProps } from '../../../_components/page-props.ts';
import { rangeAsked } from './range-asked.ts';
import { SiteView } from './site-view.tsx';

export async function generateMetadata({ params }: PageProps<'site'>): Promise<Metadata> {
  return { title: `Weather at ${decoded((await params).site)}` };
}

export default async function SitePage({ params, searchParams }: PageProps<'site'>) {
  const [caller, run, { site: code }, query] = await Promise.all([callerInView(), runInView(), params, searchParams]);
  const site = (await answerSites(caller)).find((each) => each.code === decoded(code));
  if (!site) notFound();
  const range = rangeAsked(query, site, run);
  const days = range ? await answerSiteDays(caller, site.code, range) : [];
  return <SiteView site={site} days={days} range={range} query={query} units={caller.units} />;
}
