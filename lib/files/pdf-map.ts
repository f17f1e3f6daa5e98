/**
 * A choropleth with canals on paper: vector shapes, hatched classes, legend with areas, north arrow, scale bar.
 */
import type { LegendEntry } from '../report/legend.ts';
import type { PrintMap } from '../report/print-map.ts';
import { contentWidth, heading, INK, MARGIN, makeRoom, type Pdf, tagged } from './pdf-page.ts';

/** What the rest of a first page needs beside the map [points]: title, figures, legend, chart. */
const BESIDE_MAP = 590;
const LEGEND_ROW = 12.5;

interface Frame {
  readonly x: number;
  readonly y: number;
  /** points per drawing unit */
  readonly scale: number;
  readonly width: number;
  readonly height: number;
}

export function drawMap(doc: Pdf, title: string, note: string, map: PrintMap): void {
  const scale = Math.min(contentWidth(doc) / map.width, (doc.page.height - BESIDE_MAP) / map.height);
  const legendRows = map.legend.entries.length + (map.legend.missing ? 1 : 0) + 2;
  const height = map.height * scale;
  heading(doc, title, height + legendRows * LEGEND_ROW);
  const frame = { x: MARGIN.side + (contentWidth(doc) - map.width * scale) / 2, y: doc.y, scale, width: map.width * scale, height };
  tagged(
    doc,
    'Figure',
    () => {
      drawParcels(doc, map, frame);
      drawCanals(doc, map, frame);
      northArrow(doc, frame.x + 12, frame.y + 6);
      scaleBar(doc, map, frame);
    },
    { alt: map.alt },
  );
  doc.y = frame.y + height + 10;
  makeRoom(doc, legendRows * LEGEND_ROW);
  tagged(doc, 'P', () => drawLegend(doc, map, note));
}

/** One path per class: filled, then hatched inside, then its edges. */
function drawParcels(doc: Pdf, map: PrintMap, frame: Frame): void {
  const entries = [...map.legend.entries.keys(), -1];
  for (const at of entries) {
    const rings = map.parcels.filter((parcel) => parcel.classIndex === at).flatMap((parcel) => parcel.rings);
    const entry = at < 0 ? map.legend.missing : map.legend.entries[at];
    if (rings.length === 0 || !entry) continue;
    tracePaths(doc, rings, frame);
    doc.fillColor(entry.colour).fill('even-odd');
    doc.save();
    tracePaths(doc, rings, frame);
    doc.clip('even-odd');
    hatch(doc, map, entry, frame);
    doc.restore();
    tracePaths(doc, rings, frame);
    doc.lineWidth(0.25).strokeColor('#ffffff').stroke();
  }
}

function tracePaths(doc: Pdf, rings: readonly (readonly (readonly [number, number])[])[], { x, y, scale }: Frame): void {
  for (const ring of rings) {
    ring.forEach(([px, py], i) => {
      if (i === 0) doc.moveTo(x + px * scale, y + py * scale);
      else doc.lineTo(x + px * scale, y + py * scale);
    });
    doc.closePath();
  }
}

/** Lines over a box, to be clipped by the caller; light on a dark class. */
function hatch(doc: Pdf, map: PrintMap, entry: LegendEntry, box: { x: number; y: number; width: number; height: number }): void {
  const sets = map.hatches[entry.pattern] ?? [];
  const [cx, cy, reach] = [box.x + box.width / 2, box.y + box.height / 2, Math.hypot(box.width, box.height) / 2];
  doc
    .lineWidth(0.3)
    .strokeColor(isDark(entry.colour) ? '#ffffff' : '#000000')
    .strokeOpacity(0.5);
  for (const { angle, spacing } of sets) {
    const [cos, sin] = [Math.cos((angle * Math.PI) / 180), Math.sin((angle * Math.PI) / 180)];
    for (let off = -reach; off <= reach; off += spacing) {
      const [mx, my] = [cx - sin * off, cy + cos * off];
      doc.moveTo(mx - cos * reach, my - sin * reach).lineTo(mx + cos * reach, my + sin * reach);
    }
    doc.stroke();
  }
  doc.strokeOpacity(1);
}

/** By the mean of the channels of #rrggbb. */
function isDark(colour: string): boolean {
  const channel = (at: number) => Number.parseInt(colour.slice(at, at + 2), 16);
  return channel(1) + channel(3) + channel(5) < 330;
}

function drawCanals(doc: Pdf, map: PrintMap, { x, y, scale }: Frame): void {
  doc.lineJoin('round').lineCap('round');
  for (const casing of [true, false]) {
    for (const { points, width, colour } of map.canals) {
      points.forEach(([px, py], i) => {
        if (i === 0) doc.moveTo(x + px * scale, y + py * scale);
        else doc.lineTo(x + px * scale, y + py * scale);
      });
      doc
        .lineWidth(casing ? width + 1 : width)
        .strokeColor(casing ? '#ffffff' : colour)
        .stroke();
    }
  }
  doc.lineJoin('miter').lineCap('butt');
}

function northArrow(doc: Pdf, x: number, y: number): void {
  doc
    .moveTo(x, y)
    .lineTo(x + 5, y + 17)
    .lineTo(x, y + 13)
    .lineTo(x - 5, y + 17)
    .closePath()
    .fillColor(INK.text)
    .fill();
  doc
    .font('strong')
    .fontSize(8)
    .fillColor(INK.text)
    .text('N', x - 5, y + 19, { width: 10, align: 'center', lineBreak: false });
}

/** A round length, at most a fifth of the map, at its lower right. */
function scaleBar(doc: Pdf, map: PrintMap, frame: Frame): void {
  const unit = map.units === 'us' ? { metres: 1609.344, label: 'mi' } : { metres: 1000, label: 'km' };
  const longest = (map.width * map.metresPerUnit) / unit.metres / 5;
  const power = 10 ** Math.floor(Math.log10(longest));
  const length = ([5, 2, 1].find((step) => step * power <= longest) ?? 1) * power;
  const width = ((length * unit.metres) / map.metresPerUnit) * frame.scale;
  const [right, y] = [frame.x + frame.width - 4, frame.y + frame.height - 8];
  doc
    .rect(right - width, y, width / 2, 3)
    .fillColor(INK.text)
    .fill();
  doc
    .lineWidth(0.5)
    .strokeColor(INK.text)
    .rect(right - width, y, width, 3)
    .stroke();
  doc.font('text').fontSize(7).fillColor(INK.text);
  doc.text('0', right - width - 6, y - 10, { width: 12, align: 'center', lineBreak: false });
  doc.text(`${Number(length.toPrecision(2))} ${unit.label}`, right - 40, y - 10, { width: 44, align: 'right', lineBreak: false });
}

function drawLegend(doc: Pdf, map: PrintMap, note: string): void {
  const { title, unit, entries, missing } = map.legend;
  const [x, top] = [MARGIN.side, doc.y];
  doc.font('strong').fontSize(8).fillColor(INK.text).text(`${title}, ${unit}`, x, top, { lineBreak: false });
  doc.text('area', x + 110, top, { width: 70, align: 'right', lineBreak: false });
  const rows = missing ? [...entries, missing] : entries;
  const most = Math.max(1e-9, ...rows.map((entry) => entry.areaShare));
  for (const [i, entry] of rows.entries())
    legendRow(doc, map, entry, { x, y: top + LEGEND_ROW * (i + 1) + 2, barWidth: (70 * entry.areaShare) / most });
  const right = x + contentWidth(doc) * 0.62;
  doc.font('strong').fontSize(8).fillColor(INK.text).text('Canals, busiest week', right, top, { lineBreak: false });
  map.canalLegend.forEach(({ label, colour, width }, i) => {
    const y = top + LEGEND_ROW * (i + 1) + 7;
    doc
      .lineWidth(width)
      .strokeColor(colour)
      .moveTo(right, y)
      .lineTo(right + 20, y)
      .stroke();
    doc
      .font('text')
      .fontSize(8)
      .fillColor(INK.text)
      .text(label, right + 26, y - 5, { lineBreak: false });
  });
  const noteTop = top + LEGEND_ROW * (map.canalLegend.length + 1) + 8;
  doc
    .font('text')
    .fontSize(7.5)
    .fillColor(INK.soft)
    .text(note, right, noteTop, { width: contentWidth(doc) * 0.38 });
  doc.y = Math.max(doc.y, top + LEGEND_ROW * (rows.length + 1) + 6);
}

function legendRow(doc: Pdf, map: PrintMap, entry: LegendEntry, { x, y, barWidth }: { x: number; y: number; barWidth: number }): void {
  const box = { x, y, width: 20, height: 9 };
  doc.rect(box.x, box.y, box.width, box.height).fillColor(entry.colour).fill();
  doc.save();
  doc.rect(box.x, box.y, box.width, box.height).clip();
  hatch(doc, map, entry, box);
  doc.restore();
  doc.lineWidth(0.4).strokeColor(INK.soft).rect(box.x, box.y, box.width, box.height).stroke();
  doc
    .font('text')
    .fontSize(8)
    .fillColor(INK.text)
    .text(entry.label, x + 26, y - 0.5, { lineBreak: false });
  doc.text(entry.areaLabel, x + 110, y - 0.5, { width: 70, align: 'right', lineBreak: false });
  doc
    .rect(x + 188, y + 1.5, barWidth, 6)
    .fillColor(INK.line)
    .fill();
}
