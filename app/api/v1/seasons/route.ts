import { answerSeasons, createSeason } from '../../../../lib/http/answers/district.ts';
import { createSeasonOperation, listSeasonsOperation } from '../../../../lib/http/operations/district.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listSeasonsOperation, async ({ caller }) => ({ items: await answerSeasons(caller) }));
export const POST = route(createSeasonOperation, ({ caller, body }) => createSeason(caller, body));
