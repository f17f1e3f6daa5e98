import type { FeedAnswer, FetchAnswer } from '../../../../../lib/http/contract/feeds.ts';
import { DataTable } from '../../../../_components/data-table.tsx';
import { moment } from '../../../../_components/date-words.ts';
import { importWords, outcomeWords } from '../../../../_components/feed-words.ts';
import { Go } from '../../../../_components/go.tsx';
import { sizeWords } from '../../../../_components/import-words.ts';
import { Section } from '../../../../_components/page-head.tsx';

interface FetchTableProps {
  readonly feed: FeedAnswer;
  readonly fetches: readonly FetchAnswer[];
  readonly timeZone: string;
}

/** What a feed asked for and what came of it, newest first. */
export function FetchTable({ feed, fetches, timeZone }: FetchTableProps) {
  return (
    <Section
      id="fetches"
      title={`What “${feed.name}” asked for`}
      note="A file whose content came before is left; a changed one is imported again, and its values replace those of the same site and day."
      actions={
        <a className="button" href={`/api/v1/weather/feeds/${feed.id}/fetches.csv`} download>
          CSV
        </a>
      }
    >
      {fetches.length === 0 ? (
        <p>Nothing yet. Its first turn comes when it is due, or with “Fetch now”.</p>
      ) : (
        <DataTable
          caption={`Fetches of ${feed.name}`}
          rows={fetches}
          rowKey={(fetch) => fetch.id}
          columns={[
            { key: 'at', head: 'When', rowHead: true, oneLine: true, cell: (fetch) => moment(fetch.at, timeZone) },
            { key: 'address', head: 'Address or file', wide: true, cell: (fetch) => <code className="address">{fetch.address}</code> },
            { key: 'outcome', head: 'Outcome', cell: (fetch) => outcomeWords(fetch.outcome) },
            { key: 'size', head: 'Size', numeric: true, cell: (fetch) => (fetch.size_bytes === null ? '–' : sizeWords(fetch.size_bytes)) },
            {
              key: 'import',
              head: 'Import',
              cell: (fetch) => (fetch.import_id ? <Go href={`/imports/${fetch.import_id}`}>{importWords(fetch.import_state)}</Go> : '–'),
            },
            {
              key: 'error',
              head: 'Fault',
              wide: true,
              cell: (fetch) => fetch.error ?? (fetch.status && fetch.status >= 400 ? `answered ${fetch.status}` : '–'),
            },
          ]}
        />
      )}
    </Section>
  );
}
