import type { Metadata } from 'next';
import { answerMembers, answerTokens } from '../../../lib/http/answers/members.ts';
import { answerMethods } from '../../../lib/http/answers/methods.ts';
import { callerInView, districtInView } from '../../_components/in-view.ts';
import { PageHead } from '../../_components/page-head.tsx';
import { DistrictFacts } from './district-facts.tsx';
import { MemberTable } from './member-table.tsx';
import { MethodTable } from './method-table.tsx';
import { TokenSection } from './token-section.tsx';

export const metadata: Metadata = { title: 'Settings' };

export default async function SettingsPage() {
  const [caller, district] = await Promise.all([callerInView(), districtInView()]);
  const manages = caller.scope === 'administer';
  return (
    <div className="page">
      <PageHead
        title="Settings"
        lead="How the district is set. Managers change it, look after its people and make tokens for its scripts."
      />
      <DistrictFacts district={district} units={caller.units} scope={caller.scope} />
      <MethodTable methods={await answerMethods(caller)} units={caller.units} manages={manages} />
      {manages ? <MemberTable members={await answerMembers(caller)} district={district.name} self={caller.userId} /> : null}
      {manages ? <TokenSection tokens={await answerTokens(caller)} timeZone={caller.district.timeZone} /> : null}
    </div>
  );
}
