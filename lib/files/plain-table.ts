/**
 * A plain table (stations, plantings, soils): opened, its columns bound, its rows handed out with typed access to their cells.
 */
import { isoDate } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import { openTable, readRows, type TableHead, understoodHead } from './csv.ts';
import { parseDate, sniffDateOrder } from './date-cell.ts';
import { FindingList, shown } from './finding-list.ts';
import { isMissingNumber, isMissingText, NOT_A_NUMBER, type NumberReader, numberReader } from './number-cell.ts';
import {
  type DateOrder,
  type ImportFile,
  type ImportOptions,
  type ImportReading,
  NOTHING_UNDERSTOOD,
  type Progress,
  type StagedImport,
  type Understood,
} from './reading.ts';
import { type BindRequest, type BoundTable, bindColumns, requireRoles, sampleOf, type TableRole, tableRoleOf } from './table-columns.ts';
import { TablePreviewRows } from './table-preview.ts';

/** One row with its cells by role. The problems found are collected; a row with one is left out. */
export interface PlainRow {
  readonly row: number;
  /** trimmed text, or null when the column or the cell is missing */
  text(role: string): string | null;
  /** trimmed text as it stands, words for a missing value too; empty when there is no column */
  cell(role: string): string;
  /** number in the inside unit, or null; outside the limits is a problem, unless customary codes for missing are allowed and it is one */
  number(role: string, limits: NumberLimits): number | null;
  /** ISO date, or null; a text that is no date is a problem */
  date(role: string): string | null;
  /** marks the row as bad */
  fail(problem: { code: string; message: string; role?: string; limit?: string; advice?: string }): void;
  /** true while no problem was found */
  readonly good: boolean;
  readonly header: (role: string) => string | undefined;
}

interface NumberLimits {
  readonly low: number;
  readonly high: number;
  readonly unit: string;
  /** -9999, -999 … outside the limits count as missing */
  readonly missingCodes?: boolean;
}

interface PlainTableRequest {
  readonly files: readonly ImportFile[];
  readonly options: ImportOptions;
  readonly progress: Progress;
  readonly roles: readonly TableRole[];
  readonly assumed?: BindRequest['assumed'];
}

export interface PlainTable {
  readonly findings: FindingList;
  readonly preview: TablePreviewRows;
  readonly bound: BoundTable['bound'];
  readonly file: string;
  /** header → code for missing → cells */
  readonly missing: Map<string, Map<string, number>>;
}

/** Reads the tables and calls `each` for every row; `finish` makes what is staged from the rows that were kept. */
export async function readPlainTable(
  request: PlainTableRequest,
  each: (row: PlainRow, table: PlainTable) => void,
  finish: (findings: FindingList) => StagedImport,
  extra: () => Partial<Understood> = () => ({}),
): Promise<ImportReading> {
  const findings = new FindingList();
  const preview = new TablePreviewRows();
  const totals = { rows: 0, usable: 0 };
  let understood: Understood = NOTHING_UNDERSTOOD;
  let header: readonly string[] = [];
  for (const [index, file] of request.files.entries()) {
    const progress: Progress = (fraction) => request.progress((index + fraction) / request.files.length);
    const part = await readOne({ ...request, progress }, file, { findings, preview, totals }, each);
    if (part && header.length === 0) [understood, header] = [part.understood, part.header];
  }
  if (totals.rows === 0 && !findings.fatal)
    findings.refuse({ code: 'no-rows', message: 'The file has a header and no rows of data.', file: request.files[0]?.name });
  const staged = finish(findings);
  return {
    understood: { ...understood, rowCount: totals.rows, usableRows: totals.usable, ...extra() },
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: preview.preview(header),
    staged,
  };
}

interface Sink {
  readonly findings: FindingList;
  readonly preview: TablePreviewRows;
  readonly totals: { rows: number; usable: number };
}

async function readOne(
  request: PlainTableRequest,
  file: ImportFile,
  { findings, preview, totals }: Sink,
  each: (row: PlainRow, table: PlainTable) => void,
): Promise<{ understood: Understood; header: readonly string[] } | null> {
  const { options, roles } = request;
  const head = openTable({ file, plan: options.plan ?? {}, recognise: (header) => tableRoleOf(header, roles) !== null }, findings);
  if (!head) return null;
  const { columns, bound } = bindColumns(
    {
      headers: head.header,
      roles,
      plan: options.plan ?? {},
      units: head.units,
      sample: (index) => sampleOf(head.sample, index),
      assumed: request.assumed,
      file: file.name,
    },
    findings,
  );
  const order = dateOrderOf(head, options, bound, file.name, findings);
  const understood: Understood = {
    ...understoodHead(head),
    columns,
    dateOrder: order,
  };
  if (!requireRoles(roles, bound, file.name, findings)) return { understood, header: head.header };
  const table: PlainTable = { findings, preview, bound, file: file.name, missing: new Map() };
  const reader = numberReader(head.decimalComma, options.missingCodes);
  const count = await readRows(
    file,
    head,
    {
      each: ({ row, cells }) => {
        const plain = new PlainRowCells(row, cells, table, { reader, order });
        each(plain, table);
        if (plain.reason) preview.addBad(row, cells, plain.reason);
        else preview.addGood(row, cells);
        if (plain.good) totals.usable++;
      },
      bad: ({ row, cells }, reason) => preview.addBad(row, cells, reason),
      progress: request.progress,
    },
    findings,
  );
  totals.rows += Math.max(0, count);
  noteMissing(table);
  return { understood, header: head.header };
}

function noteMissing({ missing, findings, file }: PlainTable): void {
  for (const [header, codes] of missing) {
    for (const [text, cells] of codes)
      findings.note({
        code: 'missing-value',
        message: `"${shown(text)}" treated as missing in column "${shown(header)}", ${counted(cells, 'cell', 'cells')}.`,
        file,
        column: header,
        value: shown(text),
      });
  }
}

function dateOrderOf(head: TableHead, options: ImportOptions, bound: BoundTable['bound'], file: string, findings: FindingList): DateOrder {
  const chosen = options.plan?.dateOrder ?? options.dateOrder;
  if (chosen) return chosen;
  const dates = [...bound].filter(([role]) => role.endsWith('_date')).map(([, column]) => column.index);
  const order = sniffDateOrder(head.sample.flatMap((cells) => dates.map((index) => cells[index] ?? '')));
  if (order !== 'ambiguous' && order !== 'mixed') return order;
  findings.warn({
    code: 'date-order-ambiguous',
    message: 'The dates may be day/month/year or month/day/year; they are read as day/month/year.',
    file,
    advice: 'Choose the date order in the column plan.',
  });
  return 'dmy';
}

function within(value: number, { low, high }: NumberLimits): boolean {
  return value >= low && value <= high;
}

class PlainRowCells implements PlainRow {
  good = true;
  reason: string | null = null;

  constructor(
    readonly row: number,
    private readonly cells: readonly string[],
    private readonly table: PlainTable,
    private readonly how: { reader: NumberReader; order: DateOrder },
  ) {}

  readonly header = (role: string): string | undefined => this.table.bound.get(role)?.header;

  cell(role: string): string {
    const column = this.table.bound.get(role);
    return column ? this.cells[column.index].trim() : '';
  }

  text(role: string): string | null {
    const cell = this.cell(role);
    return isMissingText(cell) ? null : cell;
  }

  number(role: string, limits: NumberLimits): number | null {
    const column = this.table.bound.get(role);
    if (!column) return null;
    const cell = this.cells[column.index];
    const number = this.how.reader.read(cell);
    if (number === NOT_A_NUMBER) {
      this.fail({
        code: 'not-a-number',
        message: `"${shown(cell)}" in column "${shown(column.header)}" is not a number.`,
        role,
        advice: 'Correct the cell.',
      });
      return null;
    }
    if (Number.isNaN(number)) return null;
    const value = column.convert(number);
    if (limits.missingCodes && isMissingNumber(number) && !(within(number, limits) && within(value, limits))) {
      this.countMissing(column.header, cell.trim());
      return null;
    }
    if (within(value, limits)) return value;
    const limit = `${limits.low} to ${limits.high} ${limits.unit}`.trim();
    this.fail({
      code: 'value-out-of-range',
      message: `${role} ${shown(cell.trim())} is outside ${limit}.`,
      role,
      limit,
      advice: 'Correct the cell, or choose another unit in the column plan.',
    });
    return null;
  }

  private countMissing(header: string, text: string): void {
    const codes = this.table.missing.get(header) ?? new Map<string, number>();
    this.table.missing.set(header, codes.set(text, (codes.get(text) ?? 0) + 1));
  }

  date(role: string): string | null {
    const text = this.text(role);
    if (text === null) return null;
    const reading = parseDate(text, this.how.order);
    if (reading) return isoDate(reading.day);
    this.fail({ code: 'not-a-date', message: `"${shown(text)}" is not a date.`, role, advice: 'Write dates as YYYY-MM-DD.' });
    return null;
  }

  fail(problem: { code: string; message: string; role?: string; limit?: string; advice?: string }): void {
    const { code, message, role, limit, advice } = problem;
    const column = role ? this.table.bound.get(role) : undefined;
    const value = column ? shown(this.cells[column.index]) : undefined;
    this.good = false;
    this.reason ??= message;
    this.table.findings.error({
      code,
      message,
      file: this.table.file,
      row: this.row,
      column: column?.header ?? role,
      value,
      limit,
      advice,
    });
  }
}
