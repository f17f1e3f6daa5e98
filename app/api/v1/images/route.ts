import { answerImages } from '../../../../lib/http/answers/images.ts';
import { imagesOperation } from '../../../../lib/http/operations/images.ts';
import { pageLimit } from '../../../../lib/http/paging.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(imagesOperation, ({ caller, query, csv }) =>
  answerImages(caller, { ...query, limit: pageLimit(query, csv, 1000) }),
);
