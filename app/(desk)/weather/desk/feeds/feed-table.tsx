import type { Scope } from '../../../../../lib/access/tokens.ts';
import type { FeedAnswer } from '../../../../../lib/http/contract/feeds.ts';
import { DataTable } from '../../../../_components/data-table.tsx';
import { moment } from '../../../../_components/date-words.ts';
import { FeedActs } from '../../../../_components/feed-form.tsx';
import { outcomeWords, scheduleWords } from '../../../../_components/feed-words.ts';
import { Go } from '../../../../_components/go.tsx';
import { Section } from '../../../../_components/page-head.tsx';

interface FeedTableProps {
  readonly feeds: readonly FeedAnswer[];
  readonly chosen: FeedAnswer;
  readonly scope: Scope;
  readonly timeZone: string;
}

/** Every feed with when it is due and what came last. */
export function FeedTable({ feeds, chosen, scope, timeZone }: FeedTableProps) {
  return (
    <Section
      id="feeds"
      title={`${feeds.length} ${feeds.length === 1 ? 'feed' : 'feeds'}`}
      note={`Times are those of the district, ${timeZone}.`}
    >
      <DataTable
        caption="Weather feeds"
        rows={feeds}
        rowKey={(feed) => feed.id}
        rowClass={(feed) => (feed.id === chosen.id ? 'chosen' : undefined)}
        columns={[
          {
            key: 'name',
            head: 'Feed',
            rowHead: true,
            cell: (feed) => <Go href={`/weather/desk/feeds?feed=${feed.id}#fetches`}>{feed.name}</Go>,
          },
          { key: 'template', head: 'Asks for', wide: true, cell: (feed) => <code className="address">{feed.template}</code> },
          { key: 'schedule', head: 'When', cell: (feed) => scheduleWords(feed.schedule) },
          { key: 'next', head: 'Next', oneLine: true, cell: (feed) => (feed.enabled ? moment(feed.next_at, timeZone) : 'resting') },
          {
            key: 'last',
            head: 'Last',
            cell: (feed) => (feed.last_at ? `${moment(feed.last_at, timeZone)}: ${outcomeWords(feed.last_outcome)}` : 'not yet'),
          },
          {
            key: 'failures',
            head: 'Faults in a row',
            numeric: true,
            cell: (feed) => (feed.failures > 0 ? <span className="fault">{feed.failures}</span> : '0'),
          },
          { key: 'acts', head: 'Acts', cell: (feed) => <FeedActs feed={feed} scope={scope} /> },
        ]}
      />
    </Section>
  );
}
