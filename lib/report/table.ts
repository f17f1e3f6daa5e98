/**
 * A table as a document: columns whose keys carry the unit, headers for people, rows of plain values.
 */
import { roundOrNull } from '../base/missing.ts';
import { BORDER_UNITS, type UnitSystem } from '../base/units.ts';
import { inUnits, type Quantity, unitLabel } from './quantity-text.ts';

type Cell = string | number | null;

interface TableColumn {
  /** column name in files, with the unit as suffix: `crop_et_mm`, `crop_et_in` */
  readonly key: string;
  readonly header: string;
  /** as readers see it, empty for text and plain numbers */
  readonly unit: string;
  readonly kind: 'text' | 'number';
  readonly decimals: number;
}

export interface TableDocument {
  readonly title: string;
  readonly columns: readonly TableColumn[];
  readonly rows: readonly (readonly Cell[])[];
}

/** How one column is made from a row. `quantity` converts and names the unit; 'text' keeps a string; 'plain' a number without unit; 'percent' a fraction. */
export interface ColumnPlan<Row> {
  readonly name: string;
  readonly header: string;
  readonly quantity: Quantity | 'text' | 'plain' | 'percent';
  readonly value: (row: Row) => string | number | null;
}

/** Decimals of each quantity in files, metric and US. */
const DECIMALS: Record<Quantity, Record<UnitSystem, number>> = {
  mm: { metric: 2, us: 3 },
  m3: { metric: 1, us: 3 },
  m3_s: { metric: 4, us: 3 },
  m2: { metric: 4, us: 3 },
  m: { metric: 1, us: 1 },
};

/** Builds the table in the reader's units. NaN becomes null. */
export function tableOf<Row>(title: string, plans: readonly ColumnPlan<Row>[], rows: readonly Row[], units: UnitSystem): TableDocument {
  const columns = plans.map((plan) => columnOf(plan, units));
  return { title, columns, rows: rows.map((row) => plans.map((plan, i) => cellOf(plan, row, columns[i], units))) };
}

function columnOf<Row>({ name, header, quantity }: ColumnPlan<Row>, units: UnitSystem): TableColumn {
  if (quantity === 'text') return { key: name, header, unit: '', kind: 'text', decimals: 0 };
  if (quantity === 'plain') return { key: name, header, unit: '', kind: 'number', decimals: 4 };
  if (quantity === 'percent') return { key: `${name}_pct`, header, unit: '%', kind: 'number', decimals: 1 };
  const suffix = BORDER_UNITS[quantity][units].suffix;
  return { key: `${name}_${suffix}`, header, unit: unitLabel(quantity, units), kind: 'number', decimals: DECIMALS[quantity][units] };
}

function cellOf<Row>(plan: ColumnPlan<Row>, row: Row, column: TableColumn, units: UnitSystem): Cell {
  const value = plan.value(row);
  if (value === null || typeof value === 'string') return value;
  if (plan.quantity === 'text') return String(value);
  if (plan.quantity === 'plain') return roundOrNull(value, column.decimals);
  return roundOrNull(plan.quantity === 'percent' ? value * 100 : inUnits(value, plan.quantity, units), column.decimals);
}

/** Header with its unit. @example headerText({ key: 'a_mm', header: 'Rain', unit: 'mm', kind: 'number', decimals: 1 }) // 'Rain (mm)' */
export function headerText({ header, unit }: TableColumn): string {
  return unit === '' ? header : `${header} (${unit})`;
}
