import { DataTable } from '../../_components/data-table.tsx';
import { Section } from '../../_components/page-head.tsx';

interface Member {
  readonly user_id: string;
  readonly name: string;
  readonly email: string;
  readonly role: string;
  readonly parcels: readonly string[];
}

const MAY: Readonly<Record<string, string>> = {
  manager: 'everything',
  operator: 'reads all, imports and runs',
  regulator: 'reads all',
  grower: 'reads the own parcels',
};

/** Who belongs to the district, and what each may do. */
export function MemberTable({ members }: { members: readonly Member[] }) {
  return (
    <Section id="members" title="Members" note="People are added, changed and removed through the API: POST and DELETE /api/v1/members.">
      <DataTable
        caption="Members of the district"
        rows={members}
        rowKey={(member) => member.user_id}
        columns={[
          { key: 'name', head: 'Name', rowHead: true, cell: (member) => member.name },
          { key: 'email', head: 'Address', cell: (member) => member.email },
          { key: 'role', head: 'Role', cell: (member) => member.role },
          { key: 'may', head: 'May do', cell: (member) => MAY[member.role] },
          {
            key: 'parcels',
            head: 'Parcels',
            cell: (member) => (member.role === 'grower' ? member.parcels.join(', ') || 'none yet' : 'all'),
          },
        ]}
      />
    </Section>
  );
}
