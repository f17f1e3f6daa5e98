import { changeMethod } from '../../../../../lib/http/answers/methods.ts';
import { changeMethodOperation } from '../../../../../lib/http/operations/records.ts';
import { route } from '../../../../../lib/http/route.ts';

export const PATCH = route(changeMethodOperation, ({ caller, params, body }) => changeMethod(caller, params.code, body));
