import type { Caller } from '../../../../lib/access/caller.ts';
import { environment } from '../../../../lib/access/environment.ts';
import { Malformed } from '../../../../lib/base/errors.ts';
import { answerImport, answerImports } from '../../../../lib/http/answers/import.ts';
import { importKind } from '../../../../lib/http/contract/rest.ts';
import { createImportOperation, importOptions, listImportsOperation } from '../../../../lib/http/operations/imports.ts';
import { malformedFrom } from '../../../../lib/http/problem.ts';
import { withUpload } from '../../../../lib/http/read-upload.ts';
import { route } from '../../../../lib/http/route.ts';
import { requireStorable } from '../../../../lib/http/storable-text.ts';
import { createImport, type PipelineOptions, type UploadedFile } from '../../../../lib/jobs/imports.ts';

export const GET = route(listImportsOperation, async ({ caller }) => ({ items: await answerImports(caller) }));

export const POST = route(createImportOperation, async ({ request, caller }) => {
  const id = await withUpload(request, environment().TILLWATER_UPLOAD_LIMIT_MB, ({ files, fields }) => takeImport(caller, files, fields));
  return answerImport(caller, id);
});

async function takeImport(caller: Caller, files: readonly UploadedFile[], fields: ReadonlyMap<string, string>): Promise<string> {
  const kind = importKind.safeParse(fields.get('kind'));
  if (!kind.success) {
    throw new Malformed(
      `the part "kind" is ${fields.has('kind') ? `"${fields.get('kind')}"` : 'missing'}; it must be one of ${importKind.options.join(', ')}`,
    );
  }
  const wanted = optionsOf(fields.get('options'));
  requireStorable(wanted, 'part "options"');
  const options = importOptions.safeParse(wanted);
  if (!options.success) throw malformedFrom(options.error, 'part "options"');
  return createImport(caller, { kind: kind.data, files, options: options.data as PipelineOptions });
}

function optionsOf(text: string | undefined): unknown {
  if (!text?.trim()) return {};
  try {
    return JSON.parse(text);
  } catch (cause) {
    throw new Malformed(`the part "options" is not JSON: ${(cause as Error).message}`, [], { cause });
  }
}
