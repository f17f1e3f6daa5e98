import type { TokenAnswer } from '../../../lib/http/contract/rest.ts';
import { DataTable } from '../../_components/data-table.tsx';
import { moment } from '../../_components/date-words.ts';
import { Section } from '../../_components/page-head.tsx';
import { NewToken, WithdrawToken } from '../../_components/token-desk.tsx';

/** Tokens of the district's scripts. */
export function TokenSection({ tokens, timeZone }: { tokens: readonly TokenAnswer[]; timeZone: string }) {
  return (
    <Section
      id="tokens"
      title="API tokens"
      note="A script sends one as “Authorization: Bearer …”. A token is stored as a hash: it is shown once, when it is made."
    >
      {tokens.length === 0 ? <p>No token yet.</p> : <TokenTable tokens={tokens} timeZone={timeZone} />}
      <NewToken />
      <p className="small">
        <a href="/api/docs">What the API offers</a>
      </p>
    </Section>
  );
}

function TokenTable({ tokens, timeZone }: { tokens: readonly TokenAnswer[]; timeZone: string }) {
  return (
    <DataTable
      caption="API tokens"
      rows={tokens}
      rowKey={(token) => token.id}
      columns={[
        { key: 'name', head: 'Name', rowHead: true, cell: (token) => token.name },
        { key: 'prefix', head: 'Begins with', cell: (token) => <code>{token.prefix}…</code> },
        { key: 'scope', head: 'May', cell: (token) => token.scope },
        { key: 'made', oneLine: true, head: 'Made', cell: (token) => moment(token.created_at, timeZone) },
        {
          key: 'used',
          oneLine: true,
          head: 'Last used',
          cell: (token) => (token.last_used_at ? moment(token.last_used_at, timeZone) : 'never'),
        },
        {
          key: 'expires',
          oneLine: true,
          head: 'Expires',
          cell: (token) => (token.expires_at ? moment(token.expires_at, timeZone) : 'never'),
        },
        { key: 'withdraw', head: 'Withdraw', cell: (token) => <WithdrawToken id={token.id} name={token.name} /> },
      ]}
    />
  );
}
