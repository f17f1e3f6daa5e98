/**
 * The sample of a table shown to the user: bad rows first, then the first good ones, in the order of the file.
 */
import { shown } from './finding-list.ts';
import type { TablePreview } from './reading.ts';

/** Most rows of a preview. */
const PREVIEW_ROWS = 200;

type Row = TablePreview['rows'][number];

export class TablePreviewRows {
  private readonly bad: Row[] = [];
  private readonly good: Row[] = [];

  addBad(row: number, cells: readonly string[], reason: string): void {
    if (this.bad.length < PREVIEW_ROWS) this.bad.push({ row, cells: cells.map(shown), status: 'bad', reason });
  }

  /** false once there are enough good rows to show */
  get wantsGood(): boolean {
    return this.good.length < PREVIEW_ROWS;
  }

  addGood(row: number, cells: readonly string[]): void {
    if (this.good.length < PREVIEW_ROWS) this.good.push({ row, cells: cells.map(shown), status: 'ok', reason: null });
  }

  preview(header: readonly string[]): TablePreview {
    const rows = [...this.bad, ...this.good.slice(0, PREVIEW_ROWS - this.bad.length)].sort((a, b) => a.row - b.row);
    return { kind: 'table', header: [...header], rows };
  }
}
