import { answerFrost } from '../../../../lib/http/answers/frost.ts';
import { frostOperation } from '../../../../lib/http/operations/frost.ts';
import { pageLimit } from '../../../../lib/http/paging.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(frostOperation, ({ caller, query, csv }) => answerFrost(caller, { ...query, limit: pageLimit(query, csv, 1000) }));
