/** The first days of the first cells of a grid, as a table. */
import { isHourVariable } from '../weather/variable.ts';
import type { StagedBlock, TablePreview } from './reading.ts';
import { TablePreviewRows } from './table-preview.ts';

const PREVIEW_CELLS = 10;
const PREVIEW_DAYS = 10;

/** Keeps what the preview shows while blocks pass. */
export class GridPreview {
  private month: string | null = null;
  private cells: readonly string[] = [];
  private readonly variables: string[] = [];
  private readonly values = new Map<string, string>();

  /** Looks at a block: of the first month seen, the first cells and days. */
  take(block: StagedBlock): void {
    if (isHourVariable(block.variable)) return;
    if (this.month === null) {
      this.month = block.month;
      this.cells = block.siteCodes.slice(0, PREVIEW_CELLS);
    }
    if (block.month !== this.month) return;
    if (!this.variables.includes(block.variable)) this.variables.push(block.variable);
    const days = block.values.length / Math.max(1, block.siteCodes.length);
    for (const [i, code] of block.siteCodes.entries()) {
      if (!this.cells.includes(code)) {
        if (i > 4 * PREVIEW_CELLS) break;
        continue;
      }
      for (let day = 0; day < days; day++) {
        const value = block.values[i * days + day];
        if (!Number.isNaN(value)) this.values.set(`${code}\n${day}\n${block.variable}`, String(Number(value.toPrecision(5))));
      }
    }
  }

  preview(): TablePreview {
    const rows = new TablePreviewRows();
    let row = 1;
    for (const code of this.cells) {
      const days = Array.from({ length: 31 }, (_, day) => day).filter((day) =>
        this.variables.some((variable) => this.values.has(`${code}\n${day}\n${variable}`)),
      );
      for (const day of days.slice(0, PREVIEW_DAYS)) {
        const date = `${(this.month ?? '').slice(0, 8)}${String(day + 1).padStart(2, '0')}`;
        rows.addGood(row++, [code, date, ...this.variables.map((variable) => this.values.get(`${code}\n${day}\n${variable}`) ?? '')]);
      }
    }
    return rows.preview(this.variables.length === 0 ? [] : ['site', 'date', ...this.variables]);
  }
}
