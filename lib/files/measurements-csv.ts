/**
 * What was measured at parcels, in a delimited file: a column for each quantity, or one row for each value with its quantity named.
 */
import { counted } from '../base/counted.ts';
import { knownParcel } from './deliveries-csv.ts';
import { type FindingList, shown } from './finding-list.ts';
import { MEASURED, type MeasuredRole, measuredRoleNamed, type Quantity } from './measured-quantity.ts';
import { type PlainRow, readPlainTable } from './plain-table.ts';
import type { ImportContext, ImportFile, ImportOptions, ImportReading, Progress, StagedMeasurement } from './reading.ts';
import type { TableRole } from './table-columns.ts';
import { findUnit, unitConverter, unitNames } from './unit.ts';

export const MEASUREMENT_ROLES: readonly TableRole[] = [
  { role: 'parcel', names: ['parcel', 'parcel code', 'parcel id', 'field', 'field code', 'code'], required: true },
  { role: 'measured_date', names: ['date', 'measured date', 'day', 'measured', 'sampling date', 'sampled'], required: true },
  { role: 'quantity', names: ['quantity', 'variable', 'what', 'measurement', 'parameter'] },
  { role: 'value', names: ['value', 'result', 'reading'] },
  { role: 'unit', names: ['unit', 'units'] },
  { role: 'soil_depth', names: ['soil depth', 'depth', 'lower depth', 'bottom', 'to depth', 'depth to'], kind: 'length' },
  ...Object.values(MEASURED).map(({ role, names, kind }) => ({ role, names, kind })),
];

/** Deepest soil that is measured [m]. */
const DEEPEST = 10;

interface Work {
  readonly parcels: ReadonlySet<string>;
  readonly kept: Map<string, { measurement: StagedMeasurement; row: number }>;
  repeated: number;
  /** contents read in percent, and as fractions */
  percent: number;
  fractions: number;
}

/** Reads a table of measurements. */
export async function readMeasurements(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const work: Work = { parcels: new Set(context.knownParcels), kept: new Map(), repeated: 0, percent: 0, fractions: 0 };
  const finish = (findings: FindingList) => {
    noteContents(work, findings);
    const measurements = [...work.kept.values()].map(({ measurement }) => measurement).sort(inOrder);
    return { kind: 'measurements' as const, measurements: findings.fatal ? [] : measurements };
  };
  const range = () => {
    const dates = [...work.kept.values()].map(({ measurement }) => measurement.date).sort();
    return { dateRange: dates.length > 0 ? { start: dates[0], end: dates[dates.length - 1] } : null };
  };
  return readPlainTable({ files, options, progress, roles: MEASUREMENT_ROLES }, (row) => take(row, work), finish, range);
}

/** A value of a row with the quantity it is of. */
interface Reading {
  readonly measured: MeasuredRole;
  readonly value: number;
}

function take(row: PlainRow, work: Work): void {
  const parcelCode = knownParcel(row, (code) => work.parcels.has(code));
  const date = row.date('measured_date');
  if (date === null && row.good)
    row.fail({ code: 'missing-date', message: 'The row has no date.', role: 'measured_date', advice: 'Give the day of the measurement.' });
  const depth = row.number('soil_depth', { low: 0, high: DEEPEST, unit: 'm' });
  const readings = row.good ? [...wideReadings(row), ...longReading(row)] : [];
  if (row.good && readings.length === 0)
    row.fail({ code: 'missing-value', message: 'The row has no value.', role: 'value', advice: 'Give a value, or delete the row.' });
  for (const { measured, value } of readings) requireDepth(row, measured, depth, value);
  if (!row.good || parcelCode === null || date === null) return;
  for (const { measured, value } of readings) {
    const inSoil = measured.depth === 'none' ? 0 : trimmed(depth ?? 0);
    keep(row, work, { parcelCode, date, quantity: measured.quantity, depth: inSoil, value: trimmed(inside(measured, value, work)) });
  }
}

function* wideReadings(row: PlainRow): Generator<Reading> {
  for (const measured of Object.values(MEASURED)) {
    const value = row.number(measured.role, measured.limits);
    if (value !== null) yield { measured, value };
  }
}

function longReading(row: PlainRow): Reading[] {
  const named = row.text('quantity');
  const given = row.text('value');
  if (named === null && given === null) return [];
  if (named === null || given === null) {
    const role = named === null ? 'quantity' : 'value';
    row.fail({ code: 'missing-value', message: `The row has no ${role}.`, role, advice: 'Give the quantity and its value.' });
    return [];
  }
  const found = measuredRoleNamed(named);
  if (!found) {
    row.fail({
      code: 'unknown-quantity',
      message: `"${shown(named)}" is not a quantity that is kept.`,
      role: 'quantity',
      limit: Object.values(MEASURED)
        .map(({ names }) => names[0])
        .join(', '),
      advice: 'Correct the name, or delete the row.',
    });
    return [];
  }
  const { measured } = found;
  const convert = converterOf(row, measured, row.text('unit') ?? found.unitText);
  const value = row.number('value', { low: Number.NEGATIVE_INFINITY, high: Number.POSITIVE_INFINITY, unit: '' });
  if (value === null || convert === null) return [];
  const converted = convert(value);
  const { low, high, unit } = measured.limits;
  if (converted >= low && converted <= high) return [{ measured, value: converted }];
  row.fail({
    code: 'value-out-of-range',
    message: `${measured.role} ${shown(given)} is outside ${low} to ${high} ${unit}.`,
    role: 'value',
    limit: `${low} to ${high} ${unit}`,
    advice: 'Correct the cell, or its unit.',
  });
  return [];
}

function converterOf(row: PlainRow, { kind }: MeasuredRole, unitText: string | null): ((value: number) => number) | null {
  if (unitText === null) return (value) => value;
  const unit = findUnit(kind, unitText);
  if (unit) return unitConverter(kind, unit);
  row.fail({
    code: 'unknown-unit',
    message: `Unit "${shown(unitText)}" does not fit the quantity of the row.`,
    role: 'unit',
    limit: unitNames(kind).join(', '),
    advice: 'Correct the unit.',
  });
  return null;
}

function requireDepth(row: PlainRow, measured: MeasuredRole, depth: number | null, value: number): void {
  if (measured.depth === 'needed' && !(depth !== null && depth > 0)) {
    row.fail({
      code: 'missing-depth',
      message: `A ${measured.names[0]} needs the depth down to which it was measured.`,
      role: 'soil_depth',
      limit: `above 0, at most ${DEEPEST} m`,
      advice: 'Give the lower edge of the soil the value is of.',
    });
  }
  if (measured.percent && !Number.isNaN(value) && value > measured.percent.most && value < measured.percent.least) {
    row.fail({
      code: 'value-out-of-range',
      message: `${measured.names[0]} ${value} is neither a fraction nor a percentage.`,
      role: measured.role,
      limit: `up to ${measured.percent.most} as a fraction, from ${measured.percent.least} in percent`,
      advice: 'Correct the cell, or choose the unit of the column.',
    });
  }
}

/** A share as a fraction: numbers above the largest fraction are percent. Others as they are. */
function inside({ percent }: MeasuredRole, value: number, work: Work): number {
  if (!percent) return value;
  const isPercent = value > percent.most;
  if (isPercent) work.percent++;
  else work.fractions++;
  return isPercent ? value / 100 : value;
}

/** Without the last digits that a conversion of units leaves: depths are compared. */
function trimmed(value: number): number {
  return Math.round(value * 1e9) / 1e9;
}

function keep(row: PlainRow, work: Work, measurement: StagedMeasurement): void {
  const { parcelCode, date, quantity, depth, value } = measurement;
  const key = JSON.stringify([parcelCode, date, quantity, depth]);
  const earlier = work.kept.get(key);
  if (!earlier) {
    work.kept.set(key, { measurement, row: row.row });
    return;
  }
  if (earlier.measurement.value === value) {
    work.repeated++;
    return;
  }
  row.fail({
    code: 'duplicate-measurement',
    message: `Row ${earlier.row} has another value of the same parcel, day, quantity and depth; the first is kept.`,
    role: 'value',
    advice: 'Delete the wrong row.',
  });
}

function noteContents({ percent, fractions, repeated }: Work, findings: FindingList): void {
  if (repeated > 0)
    findings.note({
      code: 'rows-alike',
      message: `${counted(repeated, 'value stands', 'values stand')} in the file twice, and count once.`,
    });
  if (percent > 0 && fractions > 0)
    findings.warn({
      code: 'shares-mixed',
      message: `${counted(percent, 'share is', 'shares are')} read in percent and ${counted(fractions, 'one', 'others')} as ${fractions === 1 ? 'a fraction' : 'fractions'}: water contents and efficiencies above 1 are taken for percent.`,
      advice: 'Check that the file keeps to one of the two.',
    });
  else if (percent > 0)
    findings.note({ code: 'shares-in-percent', message: `${counted(percent, 'share is', 'shares are')} read in percent, being above 1.` });
}

function inOrder(a: StagedMeasurement, b: StagedMeasurement): number {
  const [one, other] = [orderKey(a), orderKey(b)];
  return one < other ? -1 : one > other ? 1 : a.depth - b.depth;
}

function orderKey({ parcelCode, date, quantity }: StagedMeasurement): string {
  return `${parcelCode}\u0000${date}\u0000${quantity satisfies Quantity}`;
}
