import { answerImport } from '../../../../../../lib/http/answers/import.ts';
import { cancelImportOperation } from '../../../../../../lib/http/operations/imports.ts';
import { route } from '../../../../../../lib/http/route.ts';
import { cancelImport } from '../../../../../../lib/jobs/imports.ts';

export const POST = route(cancelImportOperation, async ({ caller, params }) => {
  await cancelImport(caller, params.id);
  return answerImport(caller, params.id, { preview: false });
});
