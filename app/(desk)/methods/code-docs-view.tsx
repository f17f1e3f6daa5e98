import { DataTable } from '../../_components/data-table.tsx';
import { Section } from '../../_components/page-head.tsx';
import type { RoomDocs } from './read-code-docs.ts';

/** Every sourced equation and constant of the code, room by room. */
export function CodeDocs({ rooms }: { rooms: readonly RoomDocs[] }) {
  if (rooms.length === 0) return null;
  return (
    <Section
      id="code"
      title="Constants and equations in the code"
      note="Read from the comments of the running code: what it computes, the value or formula, and the publication."
    >
      {rooms.map((room) => (
        <details key={room.room} className="stack">
          <summary>
            {room.name} ({room.exports.length})
          </summary>
          <DataTable
            caption={room.name}
            rows={room.exports}
            rowKey={(entry) => entry.name}
            columns={[
              { key: 'says', head: 'Quantity', rowHead: true, cell: (entry) => entry.says },
              {
                key: 'formula',
                head: 'Value or formula',
                cell: (entry) => <span className="mono">{entry.value ?? (entry.formula.join('; ') || 'see its source')}</span>,
              },
              { key: 'source', head: 'Source', cell: (entry) => entry.source },
              { key: 'name', head: 'Name in the code', cell: (entry) => <code>{entry.name}</code> },
            ]}
          />
        </details>
      ))}
    </Section>
  );
}
