import { DataTable } from '../../_components/data-table.tsx';
import { ROLES } from '../../_components/district-words.ts';
import { AddMember, ChangeMember, type Member, RemoveMember } from '../../_components/member-form.tsx';
import { Section } from '../../_components/page-head.tsx';

interface MemberTableProps {
  readonly members: readonly Member[];
  readonly district: string;
  /** the reader, who is warned before removing himself */
  readonly self: string | null;
}

/** Who belongs to the district, what each may do, and the ways to change it. */
export function MemberTable({ members, district, self }: MemberTableProps) {
  const roleOf = (member: Member) => ROLES.find((one) => one.role === member.role);
  return (
    <Section id="members" title="Members" actions={<AddMember />}>
      <DataTable
        caption="Members of the district"
        rows={members}
        rowKey={(member) => member.user_id}
        columns={[
          { key: 'name', head: 'Name', rowHead: true, oneLine: true, cell: (member) => member.name },
          { key: 'email', head: 'Address', cell: (member) => member.email },
          { key: 'role', head: 'Role', cell: (member) => roleOf(member)?.name },
          { key: 'may', head: 'May do', cell: (member) => roleOf(member)?.may },
          {
            key: 'parcels',
            head: 'Parcels',
            wide: true,
            cell: (member) => (member.role === 'grower' ? member.parcels.join(', ') || 'none yet' : 'all'),
          },
          {
            key: 'change',
            head: 'Change',
            oneLine: true,
            cell: (member) => (
              <>
                <ChangeMember member={member} /> <RemoveMember member={member} district={district} self={member.user_id === self} />
              </>
            ),
          },
        ]}
      />
    </Section>
  );
}
