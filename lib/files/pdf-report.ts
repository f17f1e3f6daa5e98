/**
 * A report as PDF: title block, key figures, map, chart, tables, text, page numbers. Tagged, titled, fonts embedded.
 *
 * Source: ISO 32000-1 (PDF 1.7), section 14.8 for the tags.
 */

import type { Report, ReportBlock } from '../report/district-report.ts';
import type { BarChart } from '../report/weekly-bars.ts';
import { drawMap } from './pdf-map.ts';
import { closePdf, contentWidth, decoration, heading, INK, MARGIN, makeRoom, openPdf, type Pdf, runningFeet, tagged } from './pdf-page.ts';
import { drawTable } from './pdf-table.ts';

/**
 * Bytes of the report. The same content gives the same pages; dates come from the content, not from a clock.
 *
 * @throws {Error} from the font loader when the DejaVu fonts are not installed.
 */
export function pdfReport(content: Report): Promise<Uint8Array> {
  const doc = openPdf(content);
  titleBlock(doc, content);
  for (const block of content.blocks) drawBlock(doc, block);
  runningFeet(doc, content);
  return closePdf(doc);
}

function drawBlock(doc: Pdf, block: ReportBlock): void {
  if (block.kind === 'figures') keyFigures(doc, block.items);
  else if (block.kind === 'map') drawMap(doc, block.heading, block.note, block.map);
  else if (block.kind === 'bars') barChart(doc, block.heading, block.chart);
  else if (block.kind === 'table') drawTable(doc, block.table);
  else paragraphs(doc, block.heading, block.paragraphs);
}

function titleBlock(doc: Pdf, content: Report): void {
  const width = contentWidth(doc);
  decoration(doc, () => doc.rect(MARGIN.side, MARGIN.top - 10, 44, 3).fill(INK.accent));
  tagged(doc, 'H1', () => {
    doc.font('strong').fontSize(18).fillColor(INK.text).text(content.title, MARGIN.side, MARGIN.top, { width });
  });
  tagged(doc, 'P', () => {
    doc.font('text').fontSize(10).fillColor(INK.soft).text(content.subtitle, { width });
    doc.fontSize(8).text(`Made ${content.made} from run ${content.run}`, { width });
  });
  if (content.notice) noticeBox(doc, content.notice);
  doc.y += 8;
}

function noticeBox(doc: Pdf, notice: string): void {
  const width = contentWidth(doc);
  doc.y += 6;
  doc.font('strong').fontSize(8.5);
  const height = doc.heightOfString(notice, { width: width - 16 }) + 9;
  const y = doc.y;
  decoration(doc, () => {
    doc.rect(MARGIN.side, y, width, height).fill(INK.cautionGround);
    doc.rect(MARGIN.side, y, 3, height).fill(INK.caution);
  });
  tagged(doc, 'P', () => {
    doc
      .font('strong')
      .fontSize(8.5)
      .fillColor(INK.caution)
      .text(notice, MARGIN.side + 10, y + 4.5, { width: width - 16 });
  });
  doc.y = y + height;
}

function keyFigures(doc: Pdf, items: readonly { readonly label: string; readonly value: string }[]): void {
  const perRow = 3;
  const width = contentWidth(doc) / perRow;
  const rowHeight = 31;
  const rows = Math.ceil(items.length / perRow);
  makeRoom(doc, rows * rowHeight);
  const top = doc.y;
  decoration(doc, () => {
    for (let row = 0; row <= rows; row++) {
      const y = top + row * rowHeight - 4;
      doc
        .lineWidth(0.5)
        .strokeColor(INK.line)
        .moveTo(MARGIN.side, y)
        .lineTo(MARGIN.side + contentWidth(doc), y)
        .stroke();
    }
  });
  items.forEach(({ label, value }, i) => {
    const [x, y] = [MARGIN.side + (i % perRow) * width, top + Math.floor(i / perRow) * rowHeight];
    tagged(doc, 'P', () => {
      doc
        .font('text')
        .fontSize(7.5)
        .fillColor(INK.soft)
        .text(label, x, y, { width: width - 6, lineBreak: false });
      doc
        .font('strong')
        .fontSize(12)
        .fillColor(INK.text)
        .text(value, x, y + 9, { width: width - 6, lineBreak: false });
    });
  });
  doc.y = top + rows * rowHeight;
}

function barChart(doc: Pdf, title: string, chart: BarChart): void {
  const scale = contentWidth(doc) / chart.width;
  heading(doc, title, chart.height * scale + 16);
  const top = doc.y;
  tagged(doc, 'Figure', () => drawBars(doc, chart, { x: MARGIN.side, y: top, scale }), { alt: `${title}. ${chart.description}` });
  doc.y = top + chart.height * scale + 2;
  tagged(doc, 'P', () => {
    doc
      .font('text')
      .fontSize(7.5)
      .fillColor(INK.soft)
      .text(chart.description, MARGIN.side, doc.y, { width: contentWidth(doc) });
  });
}

interface Place {
  readonly x: number;
  readonly y: number;
  readonly scale: number;
}

/** The band of a bar as a line with its ends marked. */
function drawBand(doc: Pdf, { x, top, bottom }: { readonly x: number; readonly top: number; readonly bottom: number }): void {
  const end = (y: number) => doc.moveTo(x - 2, y).lineTo(x + 2, y);
  doc.lineWidth(0.8).strokeColor(INK.text).moveTo(x, top).lineTo(x, bottom);
  end(top);
  end(bottom).stroke();
}

function drawBars(doc: Pdf, chart: BarChart, { x, y, scale }: Place): void {
  const { plot } = chart;
  doc.save().translate(x, y).scale(scale);
  doc.font('text').fontSize(7.5);
  for (const { at, label } of chart.yTicks) {
    doc
      .lineWidth(0.4)
      .strokeColor(INK.line)
      .moveTo(plot.x, at)
      .lineTo(plot.x + plot.width, at)
      .stroke();
    doc.fillColor(INK.soft).text(label, plot.x - 50, at - 4.5, { width: 45, align: 'right', lineBreak: false });
  }
  for (const bar of chart.bars) {
    if (bar.height <= 0) continue;
    if (bar.forecast) doc.lineWidth(0.6).strokeColor(INK.accent).rect(bar.x, bar.y, bar.width, bar.height).stroke();
    else doc.rect(bar.x, bar.y, bar.width, bar.height).fill(INK.accent);
  }
  for (const { band } of chart.bars) if (band) drawBand(doc, band);
  const base = plot.y + plot.height;
  doc
    .lineWidth(0.7)
    .strokeColor(INK.text)
    .moveTo(plot.x, base)
    .lineTo(plot.x + plot.width, base)
    .stroke();
  for (const { at, label } of chart.xTicks) {
    doc
      .lineWidth(0.5)
      .strokeColor(INK.soft)
      .moveTo(at, base)
      .lineTo(at, base + 4)
      .stroke();
    doc.fillColor(INK.soft).text(label, at + 2, base + 3, { lineBreak: false });
  }
  doc.save().rotate(-90, { origin: [8, plot.y + plot.height / 2] });
  doc
    .fillColor(INK.soft)
    .text(chart.yTitle, 8 - plot.height / 2, plot.y + plot.height / 2 - 6, { width: plot.height, align: 'center', lineBreak: false });
  doc.restore();
  doc.restore();
}

function paragraphs(doc: Pdf, title: string, texts: readonly string[]): void {
  heading(doc, title, 40);
  for (const text of texts) {
    tagged(doc, 'P', () => {
      doc
        .font('text')
        .fontSize(8.8)
        .fillColor(INK.text)
        .text(text, MARGIN.side, doc.y, { width: contentWidth(doc), lineGap: 1.5 });
    });
    doc.y += 4;
  }
}
