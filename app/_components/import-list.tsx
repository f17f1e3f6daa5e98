import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import { type Column, DataTable } from './data-table.tsx';
import { moment } from './date-words.ts';
import { Go } from './go.tsx';
import { kindName } from './import-kinds.ts';
import { countWords, IMPORT_STATES } from './import-words.ts';

/** A state as a word in its tone. */
export function StateTag({ state }: { state: ImportAnswer['state'] }) {
  const { name, tone } = IMPORT_STATES[state];
  return <span className={`tag ${tone}`}>{name}</span>;
}

/** Newest first: what, from which files, how far, by whom. */
export function ImportList({ imports, timeZone }: { imports: readonly ImportAnswer[]; timeZone: string }) {
  const columns: readonly Column<ImportAnswer>[] = [
    { key: 'files', head: 'Files', rowHead: true, cell: (one) => <Go href={`/imports/${one.id}`}>{filesText(one)}</Go> },
    { key: 'kind', head: 'Kind', cell: (one) => kindName(one.kind) },
    { key: 'state', head: 'State', cell: (one) => <StateTag state={one.state} /> },
    { key: 'findings', head: 'Findings', cell: (one) => (one.state === 'reading' ? '–' : countWords(one.finding_counts)) },
    { key: 'made', head: 'Uploaded', cell: (one) => moment(one.created_at, timeZone) },
    { key: 'applied', head: 'Applied', cell: (one) => moment(one.applied_at, timeZone) },
    { key: 'by', head: 'By', cell: (one) => one.created_by ?? '–' },
  ];
  return <DataTable caption="Imports, newest first" columns={columns} rows={imports} rowKey={(one) => one.id} />;
}

function filesText(one: ImportAnswer): string {
  const [first, ...rest] = one.files;
  return first ? `${first.name}${rest.length > 0 ? ` and ${rest.length} more` : ''}` : 'no file';
}
