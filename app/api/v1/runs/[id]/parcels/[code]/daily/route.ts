import { answerParcelSeason } from '../../../../../../../../lib/http/answers/parcel-season.ts';
import { parcelSeasonOperation } from '../../../../../../../../lib/http/operations/runs.ts';
import { route } from '../../../../../../../../lib/http/route.ts';

export const GET = route(parcelSeasonOperation, ({ caller, params }) => answerParcelSeason(caller, params.id, params.code));
