import { answerImport } from '../../../../../../lib/http/answers/import.ts';
import { applyImportOperation } from '../../../../../../lib/http/operations/imports.ts';
import { route } from '../../../../../../lib/http/route.ts';
import { applyImport } from '../../../../../../lib/jobs/imports.ts';

export const POST = route(applyImportOperation, async ({ caller, params }) => {
  const started = await applyImport(caller, params.id);
  const answer = await answerImport(caller, params.id, { preview: false });
  return started ? answer : Response.json(answer);
});
