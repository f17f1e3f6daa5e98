import { answerImport } from '../../../../../lib/http/answers/import.ts';
import { patchImportOperation, readImportOperation } from '../../../../../lib/http/operations/imports.ts';
import { route } from '../../../../../lib/http/route.ts';
import { patchImport } from '../../../../../lib/jobs/imports.ts';

export const GET = route(readImportOperation, ({ caller, params, query }) =>
  answerImport(caller, params.id, { preview: query.preview === '1' }),
);

export const PATCH = route(patchImportOperation, async ({ caller, params, body }) => {
  await patchImport(caller, params.id, body);
  return answerImport(caller, params.id, { preview: false });
});
