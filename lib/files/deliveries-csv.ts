/**
 * Water delivered to parcels, one row for each parcel and day or turn, in a delimited file.
 */
import { counted } from '../base/counted.ts';
import { depthToVolume, volumeToDepth } from '../base/units.ts';
import { type FindingList, shown } from './finding-list.ts';
import { type PlainRow, type PlainTable, readPlainTable } from './plain-table.ts';
import type { ImportContext, ImportFile, ImportOptions, ImportReading, Progress, StagedDelivery } from './reading.ts';
import type { TableRole } from './table-columns.ts';

export const DELIVERY_ROLES: readonly TableRole[] = [
  { role: 'parcel', names: ['parcel', 'parcel code', 'parcel id', 'field', 'field code', 'code'], required: true },
  { role: 'delivery_date', names: ['date', 'delivery date', 'day', 'delivered', 'irrigation date', 'irrigated'], required: true },
  { role: 'volume', names: ['volume', 'delivered volume', 'delivery', 'water delivered', 'water', 'amount'], kind: 'volume' },
  { role: 'gross_depth', names: ['gross depth', 'depth', 'irrigation depth', 'applied depth', 'irrigation', 'applied'], kind: 'depth' },
];

/** Most water of a day over a parcel, gross [mm]: what a stored day holds. */
const MOST_DELIVERED = 600;
/** Largest number a cell may hold before it is taken for a slip [m³]: 600 mm over 100 km². */
const MOST_VOLUME = 6e7;
/** Volume and depth of one row may differ by so much of the larger: rounding of the file. */
const AGREES_WITHIN = 0.02;

interface Day extends StagedDelivery {
  readonly row: number;
  readonly rows: number;
}

interface Work {
  readonly areas: Readonly<Record<string, number>>;
  readonly days: Map<string, Day>;
  /** parcel, day and volume of every row */
  readonly seen: Set<string>;
  added: number;
  alike: number;
}

/**
 * Reads a table of deliveries: volumes, or gross depths over the parcel. Rows of one parcel and day add up. A row of 0 says that nothing was delivered.
 */
export async function readDeliveries(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const work: Work = { areas: context.parcelAreas ?? {}, days: new Map(), seen: new Set(), added: 0, alike: 0 };
  const refused = new Set<string>();
  const each = (row: PlainRow, table: PlainTable) => {
    if (!table.bound.has('volume') && !table.bound.has('gross_depth')) return noAmount(table, refused);
    take(row, work);
  };
  const finish = (findings: FindingList) => {
    noteDays(work, context, findings);
    const days = [...work.days.values()].filter((day) => fits(day, work.areas, findings));
    const deliveries = days.map(({ parcelCode, date, volume }) => ({ parcelCode, date, volume })).sort(inOrder);
    return { kind: 'deliveries' as const, deliveries: findings.fatal ? [] : deliveries };
  };
  const us = context.districtUnits === 'us';
  const assumed = us ? { volume: 'ac-ft', depth: 'in' } : undefined;
  return readPlainTable({ files, options, progress, roles: DELIVERY_ROLES, assumed }, each, finish, () => ({
    dateRange: rangeOf(work.days),
  }));
}

function noAmount({ findings, file }: PlainTable, refused: Set<string>): void {
  if (refused.has(file)) return;
  refused.add(file);
  findings.refuse({
    code: 'missing-column',
    message: 'No column for volume or gross_depth was found.',
    file,
    column: 'volume',
    advice: 'Name a column "volume_m3" or "gross_depth_mm", or choose one in the column plan.',
  });
}

function take(row: PlainRow, work: Work): void {
  const parcelCode = knownParcel(row, (code) => Object.hasOwn(work.areas, code));
  const date = row.date('delivery_date');
  const volume = volumeOf(row, parcelCode === null ? Number.NaN : work.areas[parcelCode]);
  if (date === null && row.good)
    row.fail({ code: 'missing-date', message: 'The row has no date.', role: 'delivery_date', advice: 'Give the day of the delivery.' });
  if (!row.good || parcelCode === null || date === null || volume === null) return;
  const key = `${date} ${parcelCode}`;
  const exact = `${key} ${volume}`;
  if (work.seen.has(exact)) work.alike++;
  work.seen.add(exact);
  const day = work.days.get(key);
  if (day) work.added++;
  work.days.set(key, { parcelCode, date, volume: (day?.volume ?? 0) + volume, row: day?.row ?? row.row, rows: (day?.rows ?? 0) + 1 });
}

/** The parcel of a row; one that is not known is a problem of the row. */
export function knownParcel(row: PlainRow, known: (code: string) => boolean): string | null {
  const code = row.text('parcel');
  if (code === null) {
    row.fail({ code: 'missing-code', message: 'The row has no parcel code.', role: 'parcel', advice: 'Give the code of the parcel.' });
    return null;
  }
  if (known(code)) return code;
  row.fail({
    code: 'unknown-parcel',
    message: `Parcel ${shown(code)} is not known.`,
    role: 'parcel',
    advice: 'Import parcels first, or correct the code.',
  });
  return null;
}

/** Volume of a row [m³], from its volume or its depth over the parcel. */
function volumeOf(row: PlainRow, area: number): number | null {
  const volume = row.number('volume', { low: 0, high: MOST_VOLUME, unit: 'm³' });
  const depth = row.number('gross_depth', { low: 0, high: MOST_DELIVERED, unit: 'mm' });
  if (volume === null && depth === null) {
    if (row.good)
      row.fail({
        code: 'missing-value',
        message: 'The row has neither a volume nor a depth.',
        role: row.header('volume') ? 'volume' : 'gross_depth',
        advice: 'Give what was delivered, 0 where nothing was, or delete the row.',
      });
    return null;
  }
  const byDepth = depth === null ? null : depthToVolume(depth, area);
  if (volume === null) return byDepth;
  if (byDepth !== null && Math.abs(volume - byDepth) > AGREES_WITHIN * Math.max(volume, byDepth)) {
    row.fail({
      code: 'volume-and-depth-differ',
      message: `The volume is ${round(volumeToDepth(volume, area))} mm over the parcel, the depth of the row ${round(depth as number)} mm.`,
      role: 'volume',
      limit: 'within 2 % of each other',
      advice: 'Correct one of the two, or leave one column out in the column plan.',
    });
  }
  return volume;
}

function fits({ parcelCode, date, volume, row, rows }: Day, areas: Work['areas'], findings: FindingList): boolean {
  const depth = volumeToDepth(volume, areas[parcelCode]);
  if (depth <= MOST_DELIVERED) return true;
  const together = rows > 1 ? `${rows} rows together` : 'the row';
  findings.error({
    code: 'delivery-too-deep',
    message: `Parcel ${shown(parcelCode)} on ${date}: ${together} would put ${round(depth)} mm on the parcel; the day is left out.`,
    row,
    value: String(round(volume)),
    limit: `${MOST_DELIVERED} mm in a day, ${round(depthToVolume(MOST_DELIVERED, areas[parcelCode]))} m³ on this parcel`,
    advice: 'Check the unit of the volume, and the parcel.',
  });
  return false;
}

function noteDays({ days, added, alike }: Work, context: ImportContext, findings: FindingList): void {
  if (added > 0)
    findings.note({
      code: 'deliveries-added-up',
      message: `${counted(added, 'row falls', 'rows fall')} on a parcel and day that an earlier row has; they are added up.`,
    });
  if (alike > 0)
    findings.warn({
      code: 'rows-alike',
      message: `${counted(alike, 'row repeats', 'rows repeat')} parcel, day and volume of another; all are added up.`,
      advice: 'Delete them if a delivery stands in the file twice.',
    });
  const outside = [...days.values()].filter(
    ({ date }) => !context.seasons.some(({ startDate, endDate }) => startDate <= date && date <= endDate),
  );
  if (outside.length > 0)
    findings.warn({
      code: 'date-outside-season',
      message: `${counted(outside.length, 'delivery lies', 'deliveries lie')} in no season of the district, the first on ${outside.map(({ date }) => date).sort()[0]}; they are kept, and no run takes them as they stand.`,
      advice: 'Check the dates and their order, or add the season.',
    });
}

function rangeOf(days: ReadonlyMap<string, Day>): { start: string; end: string } | null {
  if (days.size === 0) return null;
  const dates = [...new Set([...days.values()].map(({ date }) => date))].sort();
  return { start: dates[0], end: dates[dates.length - 1] };
}

function inOrder(a: StagedDelivery, b: StagedDelivery): number {
  if (a.parcelCode !== b.parcelCode) return a.parcelCode < b.parcelCode ? -1 : 1;
  return a.date < b.date ? -1 : 1;
}

function round(value: number): number {
  return Math.round(value * 10) / 10;
}
