/**
 * Images of a vegetation index or of the fraction of ground covered, dated, as GeoTIFF → the mean over each parcel.
 *
 * A cell counts for the parcel its centre lies in; a parcel smaller than the cells takes the cell it lies in. Cells without a value (cloud, edge of
 * the scene) are left out, and a parcel of which too little was seen has no value on that day. Tiles of one day are put together.
 */
import type { MultiPolygon, Polygon } from 'geojson';
import { pointInside } from '../geo/point-inside.ts';
import { type CellShape, cellShape, insideRuns, type ToCell } from '../geo/raster-mean.ts';
import type { ArrayFile, ArrayVariable } from './array-file.ts';
import { FindingList, shown } from './finding-list.ts';
import { openGeotiff } from './geotiff-file.ts';
import { degreesTo, gridSystem } from './grid-projection.ts';
import { imageDate } from './image-date.ts';
import {
  type ImportContext,
  type ImportFile,
  type ImportOptions,
  type ImportReading,
  NOTHING_UNDERSTOOD,
  type Progress,
  type StagedImageMean,
} from './reading.ts';

/** Least share of a parcel that must be seen for its mean to count. Common practice, no source. */
export const LEAST_SEEN = 0.7;
/** Cells read at once. */
const STRIP_CELLS = 8_000_000;
/** An index or cover stored as whole numbers is taken as so many ten-thousandths when it passes 1 by far. Common practice, no source. */
const TEN_THOUSANDTHS = 1e-4;
const LOW = { vegetation_index: -1, fraction_covered: 0 } as const;

interface Ground {
  readonly code: string;
  readonly geometry: Polygon | MultiPolygon;
}

/** What one image says of the parcels: sums over cells seen, cells seen, cells in all; by place in the list of parcels. */
interface Tally {
  readonly sum: Float64Array;
  readonly seen: Float64Array;
  readonly all: Float64Array;
}

/** Reads dated images and takes the mean over every parcel. */
export async function readImages(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const findings = new FindingList();
  const parcels = context.parcelShapes ?? [];
  const days = new Map<string, Tally>();
  const rows: { row: number; cells: string[]; status: 'ok' | 'bad'; reason: string | null }[] = [];
  if (parcels.length === 0) {
    findings.refuse({ code: 'no-parcels', message: 'The district has no parcels to take means over.', advice: 'Import parcels first.' });
  }
  const quantity = options.quantity ?? 'vegetation_index';
  for (const [index, file] of files.entries()) {
    if (findings.fatal) break;
    const outcome = await readImage(file, { options, quantity, parcels, days }, findings);
    rows.push({ row: index + 1, cells: [file.name, outcome.date ?? '–', outcome.text], status: outcome.text ? 'ok' : 'bad', reason: null });
    progress((index + 1) / files.length);
  }
  const images = findings.fatal ? [] : meansOf(days, parcels, quantity, findings);
  const dates = [...days.keys()].sort();
  return {
    understood: {
      ...NOTHING_UNDERSTOOD,
      format: 'geotiff',
      rowCount: images.length,
      usableRows: images.length,
      dateRange: dates.length > 0 ? { start: dates[0], end: dates[dates.length - 1] } : null,
    },
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: { kind: 'table', header: ['file', 'day', 'read as'], rows },
    staged: { kind: 'images', images },
  };
}

interface Work {
  readonly options: ImportOptions;
  readonly quantity: StagedImageMean['quantity'];
  readonly parcels: readonly Ground[];
  readonly days: Map<string, Tally>;
}

async function readImage(file: ImportFile, work: Work, findings: FindingList): Promise<{ date: string | null; text: string }> {
  const arrays = await openGeotiff(file, findings);
  try {
    const date = imageDate(file.name, arrays.attributes.TIFFTAG_DATETIME);
    if (date === null) {
      findings.error({
        code: 'image-without-day',
        message: 'Neither the name nor a tag of the image says on which day it was taken.',
        file: file.name,
        advice: 'Put the day into its name, such as cover_2024-06-15.tif.',
      });
      return { date, text: '' };
    }
    const band = bandOf(file.name, arrays, work.options, findings);
    const toCell = band ? await cellsOf(file.name, arrays, work.options, findings) : null;
    if (!band || !toCell) return { date, text: '' };
    const tally = work.days.get(date) ?? emptyTally(work.parcels.length);
    const text = await addImage({ file: file.name, arrays, band, toCell }, work, tally, findings);
    if (text) work.days.set(date, tally);
    return { date, text };
  } finally {
    await arrays.close();
  }
}

function emptyTally(length: number): Tally {
  return { sum: new Float64Array(length), seen: new Float64Array(length), all: new Float64Array(length) };
}

function bandOf(file: string, arrays: ArrayFile, options: ImportOptions, findings: FindingList): ArrayVariable | null {
  const bands = arrays.variables.filter(({ name }) => name.startsWith('band_'));
  const asked = options.layer ? bands.find(({ name }) => name === options.layer) : undefined;
  if (options.layer && !asked) {
    findings.error({
      code: 'no-such-band',
      message: `The image has no band "${shown(options.layer)}".`,
      file,
      advice: `Choose one of ${bands.map(({ name }) => name).join(', ')}.`,
    });
    return null;
  }
  if (!asked && bands.length > 1) {
    findings.warn({
      code: 'first-band-taken',
      message: `The image has ${bands.length} bands; the first is read.`,
      file,
      advice: `If the index is in another one, name it as the layer: ${bands.map(({ name }) => name).join(', ')}.`,
    });
  }
  return asked ?? bands[0] ?? null;
}

/** From degrees to the cells of the image, or null with a finding when it cannot be placed. */
async function cellsOf(file: string, arrays: ArrayFile, options: ImportOptions, findings: FindingList): Promise<ToCell | null> {
  const [x, y] = (['x', 'y'] as const).map((name) => arrays.variables.find((variable) => variable.name === name));
  if (!x || !y) return null; // the opener has said that the image has no place
  if (x.shape.length !== 1 || y.shape.length !== 1) {
    findings.error({ code: 'image-turned', message: 'The image is turned against its axes.', file, advice: 'Export it north up.' });
    return null;
  }
  const crs = options.crs ?? (typeof arrays.attributes.crs === 'string' ? arrays.attributes.crs : null);
  const system = crs === null ? null : gridSystem(crs);
  if (!system) {
    findings.error({
      code: 'image-without-system',
      message: crs === null ? 'The image does not name its coordinate system.' : `The coordinate system "${shown(crs)}" is not known.`,
      file,
      advice: 'Choose its coordinate system, such as EPSG:32630.',
    });
    return null;
  }
  const along = async (variable: ArrayVariable) => {
    const values = await arrays.read(variable.name, [0], [Math.min(2, variable.shape[0])]);
    return { first: values[0], step: values.length > 1 ? values[1] - values[0] : 1 };
  };
  const [columns, rows] = [await along(x), await along(y)];
  const project = /^EPSG:4326$/i.test(crs ?? '')
    ? (longitude: number, latitude: number) => [longitude, latitude] as const
    : degreesTo(system.definition);
  return (longitude, latitude) => {
    const [easting, northing] = project(longitude, latitude);
    return [(easting - columns.first) / columns.step, (northing - rows.first) / rows.step];
  };
}

interface Image {
  readonly file: string;
  readonly arrays: ArrayFile;
  readonly band: ArrayVariable;
  readonly toCell: ToCell;
}

/** A parcel's cells within the image. */
interface Placed {
  readonly parcel: number;
  readonly shape: CellShape;
  /** cells whose centre lies inside, or the one it takes */
  readonly cells: number;
  /** the one cell of a parcel that holds no centre */
  readonly only: readonly [number, number] | null;
}

/** Adds the cells of an image to the tally of its day; answers in words what it was read as, empty when nothing was. */
async function addImage(image: Image, work: Work, tally: Tally, findings: FindingList): Promise<string> {
  const [height, width] = image.band.shape;
  const placed = work.parcels.map((ground, parcel) => placedOn(ground, parcel, image.toCell));
  const within = placed.filter((each) => rightOf(each) >= 0 && leftOf(each) < width && bottomOf(each) >= 0 && topOf(each) < height);
  if (within.length === 0) {
    findings.error({
      code: 'image-outside-district',
      message: 'No parcel lies within the image.',
      file: image.file,
      advice: 'Check its coordinate system, or choose an image of the district.',
    });
    return '';
  }
  const columns = [
    Math.max(
      0,
      within.reduce((least, each) => Math.min(least, leftOf(each)), width),
    ),
    Math.min(
      width - 1,
      within.reduce((most, each) => Math.max(most, rightOf(each)), 0),
    ),
  ];
  const span = columns[1] - columns[0] + 1;
  const strip = Math.max(1, Math.floor(STRIP_CELLS / span));
  const scaling = scalingOf(image.band);
  const first = Math.max(
    0,
    within.reduce((least, each) => Math.min(least, topOf(each)), height),
  );
  const last = Math.min(
    height - 1,
    within.reduce((most, each) => Math.max(most, bottomOf(each)), 0),
  );
  for (let row = first; row <= last; row += strip) {
    const count = Math.min(strip, last - row + 1);
    const raw = await image.arrays.read(image.band.name, [row, columns[0]], [count, span]);
    const strips = { raw, row, count, column: columns[0], span };
    for (const each of within) addRows(each, strips, { scaling, quantity: work.quantity }, tally);
  }
  for (const { parcel, cells } of within) tally.all[parcel] = Math.max(tally.all[parcel], cells);
  return scaling.words;
}

const leftOf = ({ shape, only }: Placed) => only?.[0] ?? shape.columnFrom;
const rightOf = ({ shape, only }: Placed) => only?.[0] ?? shape.columnTo;
const topOf = ({ shape, only }: Placed) => only?.[1] ?? shape.rowFrom;
const bottomOf = ({ shape, only }: Placed) => only?.[1] ?? shape.rowTo;

function placedOn({ geometry }: Ground, parcel: number, toCell: ToCell): Placed {
  const shape = cellShape(geometry, toCell);
  const cells = cellCount(shape);
  if (cells > 0) return { parcel, shape, cells, only: null };
  const [column, row] = toCell(...pointInside(geometry));
  return { parcel, shape, cells: 1, only: [Math.round(column), Math.round(row)] };
}

function cellCount(shape: CellShape): number {
  let count = 0;
  for (let row = shape.rowFrom; row <= shape.rowTo; row++) for (const [from, to] of insideRuns(shape, row)) count += to - from + 1;
  return count;
}

interface Scaling {
  readonly factor: number;
  readonly offset: number;
  readonly missing: number | null;
  readonly words: string;
}

/** How stored numbers become values: as the file says; whole numbers without a word are ten-thousandths. */
function scalingOf({ attributes, type }: ArrayVariable): Scaling {
  const number = (name: string) => {
    const value = attributes[name];
    return Array.isArray(value) && typeof value[0] === 'number' ? value[0] : null;
  };
  const missing = number('_FillValue');
  const factor = number('scale_factor');
  if (factor !== null) return { factor, offset: number('add_offset') ?? 0, missing, words: `stored × ${factor}, as the file says` };
  if (/^u?int(16|32)$/.test(type)) return { factor: TEN_THOUSANDTHS, offset: 0, missing, words: 'whole numbers taken as ten-thousandths' };
  if (type === 'uint8') return { factor: 0.01, offset: 0, missing, words: 'whole numbers taken as hundredths' };
  return { factor: 1, offset: 0, missing, words: 'values as stored' };
}

interface Strip {
  readonly raw: Float64Array;
  readonly row: number;
  readonly count: number;
  readonly column: number;
  readonly span: number;
}

function addRows(
  { parcel, shape, only }: Placed,
  strip: Strip,
  { scaling, quantity }: { scaling: Scaling; quantity: StagedImageMean['quantity'] },
  tally: Tally,
): void {
  const low = LOW[quantity];
  const add = (row: number, from: number, to: number) => {
    const start = (row - strip.row) * strip.span - strip.column;
    for (let column = Math.max(from, strip.column); column <= Math.min(to, strip.column + strip.span - 1); column++) {
      const stored = strip.raw[start + column];
      if (stored === scaling.missing) continue;
      const value = stored * scaling.factor + scaling.offset;
      if (!(value >= low && value <= 1)) continue;
      tally.sum[parcel] += value;
      tally.seen[parcel]++;
    }
  };
  const holds = (row: number) => row >= strip.row && row < strip.row + strip.count;
  if (only) {
    if (holds(only[1])) add(only[1], only[0], only[0]);
    return;
  }
  const last = Math.min(shape.rowTo, strip.row + strip.count - 1);
  for (let row = Math.max(shape.rowFrom, strip.row); row <= last; row++) {
    for (const [from, to] of insideRuns(shape, row)) add(row, from, to);
  }
}

function meansOf(
  days: ReadonlyMap<string, Tally>,
  parcels: readonly Ground[],
  quantity: StagedImageMean['quantity'],
  findings: FindingList,
): StagedImageMean[] {
  const means: StagedImageMean[] = [];
  for (const [date, { sum, seen, all }] of [...days].sort(([a], [b]) => (a < b ? -1 : 1))) {
    let hidden = 0;
    for (const [index, { code }] of parcels.entries()) {
      if (all[index] === 0) continue;
      const seenShare = Math.min(1, seen[index] / all[index]);
      if (seenShare < LEAST_SEEN) hidden++;
      else means.push({ parcelCode: code, date, quantity, value: sum[index] / seen[index], seenShare });
    }
    if (hidden > 0) {
      findings.note({
        code: 'parcels-not-seen',
        message: `${hidden} parcels were seen on less than ${100 * LEAST_SEEN} % of their area on ${date}: they have no value on that day.`,
      });
    }
  }
  return means;
}
