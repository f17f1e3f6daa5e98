import { answerDistrict, changeDistrict } from '../../../../lib/http/answers/district.ts';
import { changeDistrictOperation, readDistrictOperation } from '../../../../lib/http/operations/district.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(readDistrictOperation, ({ caller }) => answerDistrict(caller));
export const PATCH = route(changeDistrictOperation, ({ caller, body }) => changeDistrict(caller, body));
