/**
 * A table over as many pages as it needs, its header repeated on each.
 */
import type { TextTable } from '../report/district-report.ts';
import { contentWidth, decoration, heading, INK, MARGIN, type Pdf, pageBottom } from './pdf-page.ts';

const SIZE = 7.6;
const ROW = 13.2;
const PAD = 4;

interface Column {
  readonly x: number;
  readonly width: number;
  readonly right: boolean;
}

export function drawTable(doc: Pdf, table: TextTable): void {
  heading(doc, table.title, 4 * ROW);
  const columns = columnsOf(doc, table);
  const root = doc.struct('Table', { title: table.title });
  doc.addStructure(root);
  let headed = false;
  const rows = table.total ? [...table.rows, table.total] : table.rows;
  rows.forEach((cells, at) => {
    if (doc.y + ROW > pageBottom(doc)) {
      doc.addPage();
      headed = false;
    }
    if (!headed) drawHeader(doc, table, columns, root);
    headed = true;
    drawRow(doc, { cells, columns, root, total: table.total !== null && at === rows.length - 1 });
  });
  root.end();
  doc.y += 6;
}

/** Widths by the widest cell, stretched or squeezed to the page; text columns take what is left or give what lacks. */
function columnsOf(doc: Pdf, table: TextTable): Column[] {
  const widths = table.columns.map(({ header }, i) => {
    doc.font('strong').fontSize(SIZE);
    const words = header.split(' ').map((word) => doc.widthOfString(word));
    const two = Math.max(...words, doc.widthOfString(header) / 2 + 6);
    const total = table.total ? doc.widthOfString(table.total[i]) : 0; // written in the strong face too
    doc.font('text');
    const cells = table.rows.map((row) => doc.widthOfString(row[i]));
    return Math.max(two, total, ...cells) + 2 * PAD;
  });
  const spare = contentWidth(doc) - widths.reduce((sum, width) => sum + width, 0);
  const flexible = table.columns.map(({ kind }, i) => (kind === 'text' || spare > 0 ? widths[i] : 0));
  const whole = flexible.reduce((sum, width) => sum + width, 0) || 1;
  let x = MARGIN.side;
  return widths.map((width, i) => {
    const column = { x, width: width + (spare * flexible[i]) / whole, right: table.columns[i].kind === 'number' };
    x += column.width;
    return column;
  });
}

function drawHeader(doc: Pdf, table: TextTable, columns: readonly Column[], root: PDFKit.PDFStructureElement): void {
  doc.font('strong').fontSize(SIZE);
  const heights = table.columns.map(({ header }, i) => doc.heightOfString(header, { width: columns[i].width - 2 * PAD }));
  const height = Math.max(...heights) + 5;
  const y = doc.y;
  decoration(doc, () => doc.rect(MARGIN.side, y, contentWidth(doc), height).fill(INK.faint));
  const cells = table.columns.map(({ header }, i) =>
    doc.struct('TH', {}, () => {
      const { x, width, right } = columns[i];
      doc.font('strong').fontSize(SIZE).fillColor(INK.text);
      doc.text(header, x + PAD, y + height - heights[i] - 2, { width: width - 2 * PAD, align: right ? 'right' : 'left' });
    }),
  );
  root.add(doc.struct('TR', {}, cells));
  doc.y = y + height + 1;
}

interface Row {
  readonly cells: readonly string[];
  readonly columns: readonly Column[];
  readonly root: PDFKit.PDFStructureElement;
  readonly total: boolean;
}

function drawRow(doc: Pdf, { cells, columns, root, total }: Row): void {
  const y = doc.y;
  const [from, to] = [MARGIN.side, MARGIN.side + contentWidth(doc)];
  decoration(doc, () => {
    const edge = total ? y : y + ROW - 0.5;
    doc
      .lineWidth(total ? 0.8 : 0.3)
      .strokeColor(total ? INK.soft : INK.line)
      .moveTo(from, edge)
      .lineTo(to, edge)
      .stroke();
  });
  const drawn = cells.map((text, i) =>
    doc.struct('TD', {}, () => {
      const { x, width, right } = columns[i];
      doc
        .font(total ? 'strong' : 'text')
        .fontSize(SIZE)
        .fillColor(INK.text);
      doc.text(text, x + PAD, y + 2.6, {
        width: width - 2 * PAD + 0.5,
        height: ROW,
        align: right ? 'right' : 'left',
        lineBreak: false,
        ellipsis: true,
      });
    }),
  );
  root.add(doc.struct('TR', {}, drawn));
  doc.y = y + ROW;
}
