/**
 * The places of an import of arrays: the window of its one grid, and its lists of stations.
 */
import { Refused } from '../base/errors.ts';
import type { GridShape } from '../weather/variable.ts';
import { type FindingList, shown } from './finding-list.ts';
import { readElevations } from './grid-elevation.ts';
import type { Field } from './grid-fields.ts';
import type { GridFile } from './grid-files.ts';
import type { CellGroup } from './grid-group.ts';
import { cellPlace, type Lattice, readLattice } from './grid-lattice.ts';
import type { CellsOfFile } from './grid-slab.ts';
import { type FileStation, readStations } from './grid-stations.ts';
import { chooseWindow, type GridWindow, type Orientation, orientationOf } from './grid-window.ts';
import type { ImportContext, ImportOptions, StagedCell, StagedSite } from './reading.ts';

export interface PlaceQuestion {
  readonly options: ImportOptions;
  readonly context: ImportContext;
  readonly findings: FindingList;
  /** name of the weather source */
  readonly source: string;
}

/** The grid of an import. */
export interface GridPlaces {
  readonly lattice: Lattice;
  readonly shape: GridShape;
  readonly window: GridWindow;
  readonly cells: readonly StagedCell[];
  readonly group: CellGroup;
}

/** One list of stations. */
export interface StationPlaces {
  readonly sites: readonly StagedSite[];
  readonly group: CellGroup;
}

const SAME: Orientation = { flipRows: false, flipColumns: false };

/** The grid of the fields that have one; null when none has. @throws {Refused} when it is not that of the source, or not near the district */
export async function gridGroup(
  fields: readonly Field[],
  elevations: readonly Field[],
  question: PlaceQuestion,
): Promise<GridPlaces | null> {
  const gridded = fields.filter(({ layout, role }) => layout === 'grid' && role.taken);
  if (gridded.length === 0) return null;
  const { options, context, findings } = question;
  const lattices = new LatticeReader(options.crs);
  const lattice = await lattices.of(gridded[0]);
  checkSource(lattice, question);
  const window = chooseWindow(lattice, options, context, findings);
  const orientations = new Map<Field, Orientation>();
  for (const field of gridded) {
    const orientation = orientationOf(await lattices.of(field), lattice);
    if (orientation) orientations.set(field, orientation);
    else otherLattice(field, gridded[0], findings);
  }
  const cellsOf = (field: Field): CellsOfFile => ({ ...window, lattice, orientation: orientations.get(field) ?? SAME, list: false });
  const cells = await cellsOfWindow(lattice, window, elevations, question);
  const usable = fields.filter((field) => orientations.has(field) || (!field.role.taken && field.layout === 'grid'));
  return { lattice, shape: shapeOf(lattice), window, cells, group: { codes: cells.map(({ code }) => code), fields: usable, cellsOf } };
}

/** Lattices, read once for fields that share their axes in one file. */
class LatticeReader {
  private readonly known = new Map<string, Lattice>();

  constructor(private readonly crs: string | undefined) {}

  async of(field: Field): Promise<Lattice> {
    const { file, variable, dimensions } = field;
    const key = `${file.name}\n${variable.dimensions[dimensions.row]}\n${variable.dimensions[dimensions.column]}`;
    let lattice = this.known.get(key);
    if (!lattice) {
      lattice = await readLattice(file.arrays, variable, dimensions, this.crs);
      this.known.set(key, lattice);
    }
    return lattice;
  }
}

function shapeOf({ rows, columns, kind, x, y, crs }: Lattice): GridShape {
  return { rows, columns, kind, x, y, crs };
}

function checkSource(lattice: Lattice, { context, source }: PlaceQuestion): void {
  const known = context.sources?.find(({ name }) => name === source);
  if (!known) return;
  const advice = 'Give this import another source name in the options.';
  if (known.kind !== 'grid')
    throw refusal('source-of-stations', `The source "${shown(source)}" holds stations; a grid cannot be added to it.`, advice);
  const orientation = known.grid && orientationOf(lattice, known.grid);
  if (known.grid === null || (orientation && !orientation.flipRows && !orientation.flipColumns)) return;
  const size = (shape: GridShape) => `${shape.rows} × ${shape.columns} cells`;
  const reason = orientation ? 'its axes run the other way' : `it has ${size(lattice)} against ${size(known.grid)}, or other places`;
  throw refusal('other-lattice', `The grid is not that of the source "${shown(source)}": ${reason}.`, advice);
}

function refusal(code: string, message: string, advice: string): Refused {
  return new Refused(`${message} ${advice}`, [{ severity: 'error', code, message, advice }]);
}

function otherLattice(field: Field, first: Field, findings: FindingList): void {
  findings.error({
    code: 'other-lattice',
    message: `The cells of "${shown(field.label)}" are not those of "${shown(first.label)}"; it is left out.`,
    file: field.file.name,
    column: field.label,
    advice: 'Import each grid as a source of its own.',
  });
}

/** Code of a cell from its row and column in the whole grid, both from 0. @example cellCode({ rows: 211, columns: 470 }, 7, 31) // 'r007c031' */
export function cellCode({ rows, columns }: { readonly rows: number; readonly columns: number }, row: number, column: number): string {
  const padded = (index: number, count: number) => String(index).padStart(String(count - 1).length, '0');
  return `r${padded(row, rows)}c${padded(column, columns)}`;
}

async function cellsOfWindow(
  lattice: Lattice,
  window: GridWindow,
  elevations: readonly Field[],
  question: PlaceQuestion,
): Promise<StagedCell[]> {
  const heights = elevations.length > 0 ? await heightsOf(lattice, window, elevations, question) : null;
  return Array.from(window.rows, (row, i) => {
    const column = window.columns[i];
    const [longitude, latitude] = cellPlace(lattice, row, column);
    const height = heights?.[i] ?? Number.NaN;
    return {
      code: cellCode(lattice, row, column),
      row,
      column,
      longitude,
      latitude,
      elevation: Number.isNaN(height) ? null : Math.round(height * 100) / 100,
    };
  });
}

async function heightsOf(
  lattice: Lattice,
  window: GridWindow,
  elevations: readonly Field[],
  { options, findings }: PlaceQuestion,
): Promise<Float64Array> {
  const heights = new Float64Array(window.rows.length).fill(Number.NaN);
  for (const field of elevations.filter(({ layout }) => layout === 'grid')) {
    const found = await readElevations(field, lattice, window, options.crs);
    for (let i = 0; i < heights.length; i++) if (Number.isNaN(heights[i])) heights[i] = found[i];
  }
  const without = heights.filter((height) => Number.isNaN(height)).length;
  if (without > 0)
    findings.note({
      code: 'cells-without-elevation',
      message: `${without} of ${heights.length} cells have no elevation in "${shown(elevations[0].label)}".`,
      column: elevations[0].label,
    });
  return heights;
}

/** The lists of stations, one for each file that has one. */
export async function stationGroups(
  fields: readonly Field[],
  question: PlaceQuestion & { readonly besideGrid: boolean },
): Promise<StationPlaces[]> {
  const listed = fields.filter(({ layout }) => layout === 'sites');
  if (listed.length === 0) return [];
  if (question.besideGrid) {
    question.findings.warn({
      code: 'stations-beside-grid',
      message: `The import has a grid and ${listed.length} fields of stations; the stations are left out.`,
      advice: 'Import the stations apart.',
    });
    return [];
  }
  checkStationSource(question);
  const lists = new Map<string, { stations: readonly FileStation[]; fields: Field[]; places: Map<GridFile, Map<string, number>> }>();
  const read = new Map<string, readonly FileStation[]>();
  for (const field of listed) {
    const key = `${field.file.name}\n${field.dimensions.site < 0 ? '' : field.variable.dimensions[field.dimensions.site]}`;
    const stations = read.get(key) ?? (await readStations(field, question.options, question.findings));
    read.set(key, stations);
    const signature = stations.map(({ code }) => code).join('\n');
    const list = lists.get(signature) ?? { stations, fields: [] as Field[], places: new Map<GridFile, Map<string, number>>() };
    list.fields.push(field);
    list.places.set(field.file, new Map(stations.map(({ code, index }) => [code, index])));
    lists.set(signature, list);
  }
  return [...lists.values()].filter(({ stations }) => stations.length > 0).map(stationPlaces);
}

function checkStationSource({ context, source }: PlaceQuestion): void {
  const known = context.sources?.find(({ name }) => name === source);
  if (known?.kind === 'grid')
    throw refusal(
      'source-of-grid',
      `The source "${shown(source)}" holds a grid; stations cannot be added to it.`,
      'Give this import another source name in the options.',
    );
}

function stationPlaces({
  stations,
  fields,
  places,
}: {
  stations: readonly FileStation[];
  fields: readonly Field[];
  places: ReadonlyMap<GridFile, ReadonlyMap<string, number>>;
}): StationPlaces {
  const codes = stations.map(({ code }) => code);
  const cellsOf = (field: Field): CellsOfFile => {
    const rows = Int32Array.from(codes, (code) => places.get(field.file)?.get(code) ?? 0);
    return {
      rows,
      columns: new Int32Array(codes.length),
      lattice: { rows: Math.max(...rows) + 1, columns: 1 },
      orientation: SAME,
      list: true,
    };
  };
  const sites = stations.map(({ code, longitude, latitude, elevation }) => ({
    code,
    name: code,
    longitude,
    latitude,
    elevation: Number.isNaN(elevation) ? null : elevation,
    windHeight: null,
    zone: null,
  }));
  return { sites, group: { codes, fields, cellsOf } };
}
