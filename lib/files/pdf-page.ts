/**
 * The page every PDF of the product is written on: fonts, margins, inks, headings, running foot.
 */
import { join } from 'node:path';
import PdfKit from 'pdfkit';
import type { Report } from '../report/district-report.ts';

export type Pdf = PDFKit.PDFDocument;

/** Points. */
export const MARGIN = { top: 46, side: 48, bottom: 54 } as const;
export const INK = {
  text: '#1c1f23',
  soft: '#5b6068',
  line: '#c9c5bb',
  faint: '#efece5',
  accent: '#1f4e79',
  caution: '#7a4a00',
  cautionGround: '#fff4dc',
} as const;

/** Every process of the service runs in the project's folder; a bundler must not try to resolve the font files. */
function font(name: string): string {
  return join(/* turbopackIgnore: true */ process.cwd(), 'node_modules', 'dejavu-fonts-ttf', 'ttf', `${name}.ttf`);
}

/** A document ready to draw on; every page is kept until the running feet are written. */
export function openPdf(content: Report): Pdf {
  const made = new Date(`${content.made}T00:00:00Z`);
  const doc = new PdfKit({
    size: content.paper === 'letter' ? 'LETTER' : 'A4',
    margins: { top: MARGIN.top, bottom: MARGIN.bottom, left: MARGIN.side, right: MARGIN.side },
    bufferPages: true,
    tagged: true,
    pdfVersion: '1.7',
    lang: content.language,
    displayTitle: true,
    font: font('DejaVuSansCondensed'),
    info: {
      Title: `${content.title}: ${content.subtitle}`,
      Subject: content.subtitle,
      Creator: 'Tillwater',
      Producer: 'Tillwater',
      CreationDate: made,
      ModDate: made,
    },
  });
  doc.registerFont('text', font('DejaVuSansCondensed'));
  doc.registerFont('strong', font('DejaVuSansCondensed-Bold'));
  return doc.font('text').fontSize(9).fillColor(INK.text);
}

export function contentWidth(doc: Pdf): number {
  return doc.page.width - 2 * MARGIN.side;
}

/** Lowest y that may be drawn on. */
export function pageBottom(doc: Pdf): number {
  return doc.page.height - MARGIN.bottom;
}

/** Starts a new page unless `height` still fits. */
export function makeRoom(doc: Pdf, height: number): void {
  if (doc.y + height > pageBottom(doc)) doc.addPage();
}

/** Adds a tagged piece of the document: what is drawn inside carries the tag. */
export function tagged(doc: Pdf, tag: string, draw: () => void, options: { alt?: string; title?: string } = {}): void {
  doc.addStructure(doc.struct(tag, options, draw));
}

/** Drawing that a screen reader should pass over. */
export function decoration(doc: Pdf, draw: () => void): void {
  doc.markContent('Artifact', { type: 'Layout' });
  draw();
  doc.endMarkedContent();
}

export function heading(doc: Pdf, text: string, room: number): void {
  makeRoom(doc, room + 26);
  doc.y += 10;
  tagged(doc, 'H2', () => {
    doc
      .font('strong')
      .fontSize(11)
      .fillColor(INK.accent)
      .text(text, MARGIN.side, doc.y, { width: contentWidth(doc) });
  });
  doc.y += 5;
  doc.font('text').fontSize(9).fillColor(INK.text);
}

/** Page numbers, title and notice at the foot of every page; call once, last. */
export function runningFeet(doc: Pdf, content: Report): void {
  const { start, count } = doc.bufferedPageRange();
  for (let page = start; page < start + count; page++) {
    doc.switchToPage(page);
    doc.markContent('Artifact', { type: 'Pagination', attached: ['Bottom'] });
    foot(doc, content, `${page - start + 1} of ${count}`);
    doc.endMarkedContent();
  }
}

function foot(doc: Pdf, content: Report, place: string): void {
  const y = doc.page.height - MARGIN.bottom + 16;
  const width = contentWidth(doc);
  const bottom = doc.page.margins.bottom;
  doc.page.margins.bottom = 0;
  doc
    .lineWidth(0.5)
    .strokeColor(INK.line)
    .moveTo(MARGIN.side, y - 6)
    .lineTo(MARGIN.side + width, y - 6)
    .stroke();
  const left = [content.title, content.subtitle].join(', ');
  doc
    .font('text')
    .fontSize(7)
    .fillColor(INK.soft)
    .text(left, MARGIN.side, y, { width: width - 60, height: 9, ellipsis: true, lineBreak: false });
  doc.text(place, MARGIN.side + width - 60, y, { width: 60, align: 'right', lineBreak: false });
  if (content.notice) doc.fillColor(INK.caution).text(content.notice, MARGIN.side, y + 10, { width, lineBreak: false });
  doc.page.margins.bottom = bottom;
}

/** Everything written so far as bytes. */
export function closePdf(doc: Pdf): Promise<Uint8Array> {
  return new Promise((resolve, reject) => {
    const chunks: Uint8Array[] = [];
    doc.on('data', (chunk: Uint8Array) => chunks.push(chunk));
    doc.on('end', () => resolve(new Uint8Array(Buffer.concat(chunks))));
    doc.on('error', reject);
    doc.end();
  });
}
