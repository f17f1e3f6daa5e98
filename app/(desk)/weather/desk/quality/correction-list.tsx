import type { CorrectionAnswer } from '../../../../../lib/http/contract/quality.ts';
import { type Column, DataTable } from '../../../../_components/data-table.tsx';
import { moment } from '../../../../_components/date-words.ts';
import { significant } from '../../../../_components/figures.ts';
import { ACT_WORDS, ruleName, termOf } from './quality-words.ts';
import { UndoCorrection } from './undo-correction.tsx';

interface CorrectionListProps {
  readonly corrections: readonly CorrectionAnswer[];
  readonly mayAct: boolean;
  readonly timeZone: string;
}

/** Decisions with who made them, when and why; undone ones stay in the list. */
export function CorrectionList({ corrections, mayAct, timeZone }: CorrectionListProps) {
  if (corrections.length === 0) return <p className="muted">Nothing has been corrected.</p>;
  return <DataTable caption="Corrections" columns={columnsOf(mayAct, timeZone)} rows={corrections} rowKey={(row) => row.id} />;
}

function columnsOf(mayAct: boolean, timeZone: string): Column<CorrectionAnswer>[] {
  return [
    { key: 'when', head: 'Made', rowHead: true, oneLine: true, cell: (row) => moment(row.created_at, timeZone) },
    { key: 'who', head: 'By', cell: (row) => row.created_by ?? '–' },
    { key: 'site', head: 'Site', oneLine: true, cell: (row) => row.site },
    { key: 'variable', head: 'Variable', cell: (row) => (row.act === 'aridity' ? 'Temperature and humidity' : termOf(row.variable)) },
    { key: 'period', head: 'Period', cell: (row) => (row.from === row.to ? row.from : `${row.from} to ${row.to}`) },
    { key: 'act', head: 'Decision', cell: actWords },
    { key: 'rule', head: 'For', cell: (row) => (row.rule ? ruleName(row.rule) : '–') },
    { key: 'reason', head: 'Reason', wide: true, cell: (row) => row.reason },
    {
      key: 'undo',
      head: 'Undo',
      cell: (row) => {
        if (!row.standing) return `Undone ${moment(row.undone_at, timeZone)} by ${row.undone_by ?? '–'}`;
        return mayAct ? <UndoCorrection id={row.id} /> : 'stands';
      },
    },
  ];
}

function actWords(row: CorrectionAnswer): string {
  if (row.values) return `${ACT_WORDS[row.act]}, ${Object.keys(row.values).length} days`;
  if (row.amount === null) return ACT_WORDS[row.act];
  return `${ACT_WORDS[row.act]}: ${significant(row.amount)}${row.unit === '1' ? '' : ` ${row.unit}`}`;
}
