import { answerMembers, saveMember } from '../../../../lib/http/answers/members.ts';
import { listMembersOperation, saveMemberOperation } from '../../../../lib/http/operations/district.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listMembersOperation, async ({ caller }) => ({ items: await answerMembers(caller) }));
export const POST = route(saveMemberOperation, ({ caller, body }) => saveMember(caller, body));
