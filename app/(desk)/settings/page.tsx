import type { Metadata } from 'next';
import { answerMembers, answerTokens } from '../../../lib/http/answers/members.ts';
import { callerInView, districtInView } from '../../_components/in-view.ts';
import { PageHead } from '../../_components/page-head.tsx';
import { DistrictFacts } from './district-facts.tsx';
import { MemberTable } from './member-table.tsx';
import { TokenSection } from './token-section.tsx';

export const metadata: Metadata = { title: 'Settings' };

export default async function SettingsPage() {
  const [caller, district] = await Promise.all([callerInView(), districtInView()]);
  const manages = caller.scope === 'administer';
  const [members, tokens] = manages ? await Promise.all([answerMembers(caller), answerTokens(caller)]) : [null, null];
  return (
    <div className="page">
      <PageHead
        title="Settings"
        lead={
          manages
            ? 'The district, its people, and the tokens its scripts use.'
            : 'What the district is set to. Managers change it, add people and make tokens.'
        }
      />
      <DistrictFacts district={district} units={caller.units} manages={manages} />
      {members ? <MemberTable members={members} /> : null}
      {tokens ? <TokenSection tokens={tokens} timeZone={caller.district.timeZone} /> : null}
    </div>
  );
}
