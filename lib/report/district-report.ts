/**
 * What a district report says, block by block, apart from how it is written.
 */
import type { UnitSystem } from '../base/units.ts';
import { cautionTexts, INVENTED_CAUTION, REPORT_CAUTIONS } from './cautions.ts';
import { CLASS_METHODS, type ClassMethod, classify } from './classes.ts';
import { legendOf } from './legend.ts';
import type { ParcelPeriodRow } from './parcel-period-row.ts';
import { type PrintMap, type PrintMapRequest, printMap, widestCanalText } from './print-map.ts';
import { decimalsFor, formatArea, formatDepth, formatFlow, formatShare, formatVolume, MISSING_TEXT, numberText } from './quantity-text.ts';
import type { ReachPeriodRow } from './reach-period-row.ts';
import { type SummaryRow, summarise, summaryOf } from './summary.ts';
import { type ColumnPlan, headerText, type TableDocument, tableOf } from './table.ts';
import { type BarChart, type WeekVolume, weeklyBars } from './weekly-bars.ts';

export interface DistrictReportInput {
  readonly district: { readonly name: string; readonly invented: boolean };
  readonly season: { readonly name: string; readonly start: string; readonly end: string };
  readonly units: UnitSystem;
  /** day of making, YYYY-MM-DD, and what names the run */
  readonly made: string;
  readonly run: string;
  /** season sums, one row per parcel */
  readonly parcels: readonly ParcelPeriodRow[];
  /** MultiPolygon coordinates, in the order of `parcels` */
  readonly shapes: PrintMapRequest['shapes'];
  /** season sums of each reach with its lines, head reach first */
  readonly canals: PrintMapRequest['canals'];
  readonly weeks: readonly WeekVolume[];
  /** how the figures were made, a paragraph each */
  readonly method: readonly string[];
  readonly classMethod: ClassMethod;
}

export interface TextTable {
  readonly title: string;
  readonly columns: readonly { readonly header: string; readonly kind: 'text' | 'number' }[];
  readonly rows: readonly (readonly string[])[];
  /** last row, set apart; null when there is none */
  readonly total: readonly string[] | null;
}

export type ReportBlock =
  | { readonly kind: 'figures'; readonly items: readonly { readonly label: string; readonly value: string }[] }
  | { readonly kind: 'map'; readonly heading: string; readonly note: string; readonly map: PrintMap }
  | { readonly kind: 'bars'; readonly heading: string; readonly chart: BarChart }
  | { readonly kind: 'table'; readonly table: TextTable }
  | { readonly kind: 'text'; readonly heading: string; readonly paragraphs: readonly string[] };

export interface Report {
  readonly title: string;
  readonly subtitle: string;
  /** stands on every page when the data are made up */
  readonly notice: string | null;
  readonly paper: 'a4' | 'letter';
  readonly language: string;
  readonly made: string;
  readonly run: string;
  readonly blocks: readonly ReportBlock[];
}

/** Width and height of the chart [points]. */
const CHART = { width: 499, height: 128 } as const;

/** The whole report: key figures, map, weekly volumes, canals, crops, methods of application, how it was made, cautions. */
export function districtReport(input: DistrictReportInput): Report {
  const { district, season, units, parcels, weeks } = input;
  const chart = weeklyBars({ weeks, ...CHART, units });
  return {
    title: district.name,
    subtitle: `Water requirement, ${season.name.toLowerCase()}, ${season.start} to ${season.end}`,
    notice: district.invented ? INVENTED_CAUTION : null,
    paper: units === 'us' ? 'letter' : 'a4',
    language: 'en',
    made: input.made,
    run: input.run,
    blocks: [
      { kind: 'figures', items: keyFigures(input) },
      mapBlock(input),
      { kind: 'bars', heading: barsHeading(weeks), chart },
      {
        kind: 'table',
        table: canalTable(
          input.canals.map(({ row }) => row),
          units,
        ),
      },
      { kind: 'table', table: groupTable('Crop', summarise(parcels, cropGroup), parcels, units) },
      {
        kind: 'table',
        table: groupTable(
          'Method',
          summarise(parcels, (row) => row.method),
          parcels,
          units,
        ),
      },
      { kind: 'text', heading: 'How these figures were made', paragraphs: input.method },
      { kind: 'text', heading: 'Cautions', paragraphs: cautionTexts(REPORT_CAUTIONS) },
    ],
  };
}

function barsHeading(weeks: readonly WeekVolume[]): string {
  const heading = 'Gross requirement of the parcels by delivery week';
  const first = weeks.find((week) => week.forecast);
  return first
    ? `${heading}; open bars, from the week of ${first.start}: not wholly observed (forecast, normal or analogue weather)`
    : heading;
}

function keyFigures({ parcels, canals, units }: DistrictReportInput) {
  const all = summaryOf('', parcels);
  const head = canals.find(({ row }) => row.parent === null)?.row;
  const over = canals.filter(({ row }) => row.status === 'over').length;
  const delivered = head ? head.demandBelow / head.headInflow : Number.NaN;
  return [
    { label: 'Area of the parcels', value: formatArea(all.area, units) },
    { label: 'Parcels', value: numberText(all.parcelCount, 0, units) },
    { label: 'Crop ET', value: formatDepth(all.cropEt, units) },
    { label: 'Net requirement', value: formatVolume(all.netVolume, units) },
    { label: 'Gross requirement', value: formatVolume(all.grossVolume, units) },
    { label: 'Inflow at headworks', value: head ? formatVolume(head.headInflow, units) : MISSING_TEXT },
    { label: 'Delivered of inflow', value: formatShare(delivered) },
    { label: 'Busiest week at headworks', value: head ? formatFlow(head.busiestFlow, units) : MISSING_TEXT },
    { label: 'Reaches over capacity', value: `${over} of ${canals.length}` },
  ];
}

function mapBlock({ parcels, shapes, canals, units, classMethod }: DistrictReportInput): ReportBlock {
  const values = parcels.map((row) => row.grossRequirement);
  const classes = classify({ values, areas: parcels.map((row) => row.area), method: classMethod, count: 6 });
  const legend = legendOf({ title: 'Gross requirement', quantity: 'mm', classes, units, scale: 'amount', theme: 'light' });
  const alt = `Map of ${parcels.length} parcels coloured by gross requirement in ${legend.entries.length} classes, with ${canals.length} reaches.`;
  const busiest = Math.max(0, ...canals.map(({ row }) => row.busiestFlow).filter(Number.isFinite));
  const note = `Classes: ${CLASS_METHODS[classMethod].toLowerCase()}. Canals as wide as the flow of their busiest seven days: ${widestCanalText(busiest, units)}.`;
  return {
    kind: 'map',
    heading: 'Gross requirement of each parcel',
    note,
    map: printMap({ shapes, values, classes, legend, canals, alt, units }),
  };
}

const CANAL_PLANS: readonly ColumnPlan<ReachPeriodRow>[] = [
  { name: 'reach', header: 'Reach', quantity: 'text', value: (row) => row.reach },
  { name: 'name', header: 'Name', quantity: 'text', value: (row) => row.name },
  { name: 'demand_below', header: 'Demand below', quantity: 'm3', value: (row) => row.demandBelow },
  { name: 'reach_loss', header: 'Loss', quantity: 'm3', value: (row) => row.loss },
  { name: 'head_inflow', header: 'Head inflow', quantity: 'm3', value: (row) => row.headInflow },
  { name: 'peak_flow', header: 'Peak flow', quantity: 'm3_s', value: (row) => row.peakFlow },
  { name: 'capacity', header: 'Capacity', quantity: 'm3_s', value: (row) => row.capacity },
  { name: 'capacity_share', header: 'Busiest week', quantity: 'percent', value: (row) => row.capacityShare },
  { name: 'status', header: 'Status', quantity: 'text', value: (row) => row.status },
];

function canalTable(rows: readonly ReachPeriodRow[], units: UnitSystem): TextTable {
  return textTable(tableOf('Canals', CANAL_PLANS, rows, units), units, null);
}

const GROUP_PLANS: readonly ColumnPlan<SummaryRow>[] = [
  { name: 'parcels', header: 'Parcels', quantity: 'plain', value: (row) => row.parcelCount },
  { name: 'area', header: 'Area', quantity: 'm2', value: (row) => row.area },
  { name: 'crop_et', header: 'Crop ET', quantity: 'mm', value: (row) => row.cropEt },
  { name: 'effective_precipitation', header: 'Effective rain', quantity: 'mm', value: (row) => row.effectivePrecipitation },
  { name: 'net_requirement', header: 'Net', quantity: 'mm', value: (row) => row.netRequirement },
  { name: 'gross_requirement', header: 'Gross', quantity: 'mm', value: (row) => row.grossRequirement },
  { name: 'gross_requirement_volume', header: 'Gross volume', quantity: 'm3', value: (row) => row.grossVolume },
];

function groupTable(by: string, groups: readonly SummaryRow[], parcels: readonly ParcelPeriodRow[], units: UnitSystem): TextTable {
  const first: ColumnPlan<SummaryRow> = { name: 'name', header: by, quantity: 'text', value: (row) => row.name };
  const plans = [first, ...GROUP_PLANS];
  const rows = [...groups, summaryOf('All', parcels)];
  const table = textTable(tableOf(`By ${by.toLowerCase()}`, plans, rows, units), units, null);
  return { ...table, rows: table.rows.slice(0, -1), total: table.rows.at(-1) ?? null };
}

/** Crops of a parcel as one group: the rotation within the season in order. */
function cropGroup(row: ParcelPeriodRow): string {
  return row.crops.length === 0 ? 'no crop' : row.crops.join(' + ');
}

/**
 * Cells as text, every number of a column with the same decimals: three significant digits of the largest depth, four of the rest. Columns that
 * reach a million m³ are shown in thousand m³.
 */
function textTable(table: TableDocument, units: UnitSystem, total: readonly string[] | null): TextTable {
  const shown = table.columns.map((column, i) => {
    const largest = Math.max(0, ...table.rows.map((row) => (typeof row[i] === 'number' ? Math.abs(row[i]) : 0)));
    const divisor = column.unit === 'm³' && largest >= 1e6 ? 1000 : 1;
    const digits = column.unit === 'mm' ? 3 : 4;
    const decimals = column.unit === '%' || column.unit === '' ? 0 : decimalsFor(largest / divisor, digits, 2);
    return { column: divisor === 1 ? column : { ...column, unit: 'thousand m³' }, divisor, decimals };
  });
  const text = (cell: string | number | null, at: number) => {
    if (cell === null || typeof cell === 'string') return cell ?? MISSING_TEXT;
    return numberText(cell / shown[at].divisor, shown[at].decimals, units);
  };
  return {
    title: table.title,
    columns: shown.map(({ column }) => ({ header: headerText(column).replace('ac-ft', 'ac\u2011ft'), kind: column.kind })),
    rows: table.rows.map((row) => row.map(text)),
    total,
  };
}
