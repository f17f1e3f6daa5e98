import { answerImport } from '../../../../../../lib/http/answers/import.ts';
import { undoImportOperation } from '../../../../../../lib/http/operations/imports.ts';
import { route } from '../../../../../../lib/http/route.ts';
import { undoImport } from '../../../../../../lib/jobs/imports.ts';

export const POST = route(undoImportOperation, async ({ caller, params }) => {
  const started = await undoImport(caller, params.id);
  const answer = await answerImport(caller, params.id, { preview: false });
  return started ? answer : Response.json(answer);
});
