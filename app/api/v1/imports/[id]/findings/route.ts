import { answerFindings } from '../../../../../../lib/http/answers/import.ts';
import { importFindingsOperation } from '../../../../../../lib/http/operations/imports.ts';
import { route } from '../../../../../../lib/http/route.ts';

export const GET = route(importFindingsOperation, async ({ caller, params }) => ({ items: await answerFindings(caller, params.id) }));
