import { Fragment, type ReactNode } from 'react';
import { Go } from './go.tsx';
import { Icon } from './icon.tsx';

export interface Column<Row> {
  readonly key: string;
  readonly head: string;
  readonly unit?: string;
  /** figures are set flush right in tabular numerals */
  readonly numeric?: boolean;
  /** kept on one line: dates, codes */
  readonly oneLine?: boolean;
  /** several words: kept wide enough for them on a narrow screen */
  readonly wide?: boolean;
  /** the cell that names its row */
  readonly rowHead?: boolean;
  readonly cell: (row: Row) => ReactNode;
  /** the same column over all rows, in the foot */
  readonly total?: ReactNode;
}

export interface SortState {
  readonly by: string;
  readonly descending: boolean;
  /** keys that can be sorted by */
  readonly keys: readonly string[];
  readonly href: (key: string, descending: boolean) => string;
}

interface DataTableProps<Row> {
  readonly caption: string;
  readonly columns: readonly Column<Row>[];
  readonly rows: readonly Row[];
  readonly rowKey: (row: Row) => string;
  readonly sort?: SortState;
  readonly foot?: boolean;
  readonly showCaption?: boolean;
  /** sets units on a line of their own, so that many columns fit */
  readonly unitsBelow?: boolean;
  /** marks the row in the margin */
  readonly rowClass?: (row: Row) => string | undefined;
}

/** A table of figures that scrolls inside its own region on a narrow screen. */
export function DataTable<Row>(props: DataTableProps<Row>) {
  const { columns, rows } = props;
  return (
    // biome-ignore lint/a11y/noNoninteractiveTabindex: a region that scrolls must be reachable from the keyboard
    <section className="table-region" aria-label={props.caption} tabIndex={0}>
      <table className={props.unitsBelow ? 'data units-below' : 'data'}>
        <caption className={props.showCaption ? undefined : 'visually-hidden'}>{props.caption}</caption>
        <thead>
          <tr>
            {columns.map((column) => (
              <HeadCell key={column.key} column={column} sort={props.sort} />
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={props.rowKey(row)} className={props.rowClass?.(row)}>
              {columns.map((column) => (
                <BodyCell key={column.key} column={column} row={row} />
              ))}
            </tr>
          ))}
        </tbody>
        {props.foot ? <Foot columns={columns} /> : null}
      </table>
    </section>
  );
}

const MAY_WRAP = { whiteSpace: 'normal' } as const;
const ONE_LINE = { whiteSpace: 'nowrap' } as const;
const WIDE = { whiteSpace: 'normal', minWidth: '11rem' } as const;

function headStyle({ wide, oneLine }: { wide?: boolean; oneLine?: boolean }) {
  if (wide) return WIDE;
  return oneLine ? ONE_LINE : MAY_WRAP;
}

function HeadCell<Row>({ column, sort }: { column: Column<Row>; sort?: SortState }) {
  const sortable = sort?.keys.includes(column.key);
  const active = sort?.by === column.key;
  const order = active ? (sort?.descending ? 'descending' : 'ascending') : undefined;
  const label = (
    <>
      {column.head}
      {column.unit ? (
        <>
          {' '}
          <span className="unit">{column.unit}</span>
        </>
      ) : null}
    </>
  );
  return (
    <th scope="col" className={column.numeric ? 'num' : undefined} style={headStyle(column)} aria-sort={order}>
      {sortable && sort ? (
        <Go href={sort.href(column.key, active ? !sort.descending : Boolean(column.numeric))}>
          {label}
          {active ? <Icon name={sort.descending ? 'down' : 'up'} /> : null}
        </Go>
      ) : (
        label
      )}
    </th>
  );
}

function BodyCell<Row>({ column, row }: { column: Column<Row>; row: Row }) {
  const style = column.oneLine ? ONE_LINE : undefined;
  if (column.rowHead) {
    return (
      <th scope="row" style={style}>
        {column.cell(row)}
      </th>
    );
  }
  return (
    <td className={column.numeric ? 'num' : undefined} style={style}>
      {column.cell(row)}
    </td>
  );
}

function Foot<Row>({ columns }: { columns: readonly Column<Row>[] }) {
  return (
    <tfoot>
      <tr className="total">
        {columns.map((column, at) =>
          at === 0 ? (
            <th key={column.key} scope="row">
              {column.total}
            </th>
          ) : (
            <td key={column.key} className={column.numeric ? 'num' : undefined}>
              {column.total}
            </td>
          ),
        )}
      </tr>
    </tfoot>
  );
}

/** The figures behind a chart, folded away until asked for. `printed` unfolds them on paper; a long table stays folded there. */
export function FiguresBelow({ summary, printed, children }: { summary: string; printed?: boolean; children: ReactNode }) {
  return (
    <details className={printed ? 'stack printed' : 'stack'}>
      <summary>{summary}</summary>
      {children}
    </details>
  );
}

/** Names and values in two columns. */
export function FactList({ facts }: { facts: readonly (readonly [string, ReactNode])[] }) {
  return (
    <dl className="pairs">
      {facts.map(([name, value]) => (
        <Fragment key={name}>
          <dt>{name}</dt>
          <dd>{value}</dd>
        </Fragment>
      ))}
    </dl>
  );
}
