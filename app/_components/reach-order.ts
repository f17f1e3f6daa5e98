/** The conveyance tree from its rows: order for a table, and lines for a drawing. */

export interface TreeRow {
  readonly reach: string;
  readonly parent: string | null;
}

/** Rows depth first, each after the reach that feeds it, children in the order they came. Rows whose parent is absent stand as heads. */
export function inTreeOrder<Row extends TreeRow>(rows: readonly Row[]): Row[] {
  const children = childrenOf(rows);
  const ordered: Row[] = [];
  const stack = [...headsOf(rows)].reverse();
  while (stack.length > 0) {
    const row = stack.pop() as Row;
    ordered.push(row);
    stack.push(...[...(children.get(row.reach) ?? [])].reverse());
  }
  return ordered;
}

export function headsOf<Row extends TreeRow>(rows: readonly Row[]): Row[] {
  const known = new Set(rows.map((row) => row.reach));
  return rows.filter((row) => row.parent === null || !known.has(row.parent));
}

export function childrenOf<Row extends TreeRow>(rows: readonly Row[]): Map<string, Row[]> {
  const children = new Map<string, Row[]>();
  for (const row of rows) {
    if (row.parent === null) continue;
    const list = children.get(row.parent);
    if (list) list.push(row);
    else children.set(row.parent, [row]);
  }
  return children;
}

export interface DrawnReach<Row> {
  readonly row: Row;
  /** along the canal from the headworks to the reach's head and tail [km] */
  readonly from: number;
  readonly to: number;
  /** line of the drawing, 0 at the top: the main canal */
  readonly line: number;
  /** line that the reach branches off from; its own line when it carries on */
  readonly parentLine: number;
}

interface Sized extends TreeRow {
  readonly length_km: number;
  readonly head_inflow_m3: number | null;
  readonly area_ha: number;
}

/**
 * A schematic of the tree: every canal a level line as long as its reaches, every branch on a line of its own below.
 *
 * Of the reaches that one feeds, the one of the same kind as the reach itself carries on along the line, else the one that carries most.
 * Branches nearest the tail take the nearest lines, so that no connection crosses a canal.
 */
export function drawnTree<Row extends Sized & { readonly kind: string }>(rows: readonly Row[]): DrawnReach<Row>[] {
  const children = childrenOf(rows);
  const drawn: DrawnReach<Row>[] = [];
  let lines = 0;
  const starts = headsOf(rows).map((row) => ({ row, from: 0, parentLine: -1 }));
  const pending = starts.reverse();
  while (pending.length > 0) {
    const { row, from, parentLine } = pending.pop() as (typeof pending)[number];
    const line = lines++;
    let at = from;
    let before = parentLine < 0 ? line : parentLine;
    for (let current: Row | undefined = row; current; ) {
      const to: number = at + current.length_km;
      drawn.push({ row: current, from: at, to, line, parentLine: before });
      const fed: Row[] = children.get(current.reach) ?? [];
      const next: Row | undefined = carriesOn(current, fed);
      for (const branch of fed) if (branch !== next) pending.push({ row: branch, from: to, parentLine: line });
      [at, before, current] = [to, line, next];
    }
  }
  return drawn;
}

function carriesOn<Row extends Sized & { readonly kind: string }>(row: Row, fed: readonly Row[]): Row | undefined {
  const same = fed.filter((each) => each.kind === row.kind);
  return largest(same.length > 0 ? same : fed);
}

function largest<Row extends Sized>(rows: readonly Row[]): Row | undefined {
  let best = rows[0];
  for (const row of rows) if ((row.head_inflow_m3 ?? -1) > (best.head_inflow_m3 ?? -1)) best = row;
  return best;
}

/** The main canal: the reaches of the first line, headworks to tail. */
export function mainCanal<Row>(drawn: readonly DrawnReach<Row>[]): DrawnReach<Row>[] {
  return drawn.filter((reach) => reach.line === 0);
}
