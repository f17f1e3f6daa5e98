import { reportOperation } from '../../../../../../../lib/http/operations/runs.ts';
import { writeReport } from '../../../../../../../lib/http/report-file.ts';
import { route } from '../../../../../../../lib/http/route.ts';

export const GET = route(reportOperation, ({ caller, params, query, units }) =>
  writeReport(caller, params.id, { file: params.file, period: query.period ?? 'season', units }),
);
