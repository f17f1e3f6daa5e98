import type { Metadata } from 'next';
import { answerFeeds, answerFetches } from '../../../../../lib/http/answers/feeds.ts';
import type { FeedAnswer } from '../../../../../lib/http/contract/feeds.ts';
import { EmptyState } from '../../../../_components/empty-state.tsx';
import { NewFeed } from '../../../../_components/feed-form.tsx';
import { callerInView } from '../../../../_components/in-view.ts';
import { PageHead } from '../../../../_components/page-head.tsx';
import { one, type Query } from '../../../../_components/query.ts';
import { WeatherNav } from '../../../../_components/weather-nav.tsx';
import { FeedTable } from './feed-table.tsx';
import { FetchTable } from './fetch-table.tsx';

export const metadata: Metadata = { title: 'Weather feeds' };

export default async function FeedsPage({ searchParams }: { searchParams: Promise<Query> }) {
  const [caller, query] = await Promise.all([callerInView(), searchParams]);
  if (caller.parcels !== null) {
    return (
      <div className="page narrow">
        <PageHead title="Weather feeds" crumbs={[['/weather', 'Weather']]} />
        <p className="notice">Feeds belong to the whole district. Growers may not see them.</p>
      </div>
    );
  }
  const feeds = await answerFeeds(caller);
  const chosen = feeds.find((feed) => feed.id === one(query, 'feed')) ?? feeds[0];
  const fetches = chosen ? await answerFetches(caller, chosen.id) : [];
  const { timeZone } = caller.district;
  return (
    <div className="page">
      <PageHead
        title="Weather feeds"
        lead="Where weather is pulled from on a schedule: what is new or changed is imported, and the seasons it bears on are computed anew."
        crumbs={[['/weather', 'Weather']]}
      >
        {caller.scope === 'administer' ? <NewFeed /> : null}
      </PageHead>
      <WeatherNav here="/weather/desk/feeds" />
      {feeds.length === 0 ? (
        <EmptyState title="No feed yet">{emptyWords(caller.scope === 'administer')}</EmptyState>
      ) : (
        <>
          <FeedTable feeds={feeds} chosen={chosen as FeedAnswer} scope={caller.scope} timeZone={timeZone} />
          <FetchTable feed={chosen as FeedAnswer} fetches={fetches} timeZone={timeZone} />
        </>
      )}
    </div>
  );
}

function emptyWords(mayMake: boolean): string {
  const what = 'A feed asks a web address, or looks into the district’s watched folder, every day or hour.';
  return mayMake ? `${what} Make the first one with “New feed”.` : `${what} A manager of the district can make one.`;
}
