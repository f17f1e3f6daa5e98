/**
 * Reaches → one tree: parents checked, or found from lines that touch.
 */
import type { LineString, MultiLineString, Position } from 'geojson';
import { counted } from '../base/counted.ts';
import { geodesicDistance } from '../geo/geodesic.ts';
import { type FindingList, shown } from './finding-list.ts';

/** A child's head lies this near its parent's line end [m]. */
const TOUCH = 5;
/** Degrees of latitude surely longer than `TOUCH`: cheap first test. */
const TOUCH_DEGREES = 0.0001;

export interface TreeReach {
  readonly code: string;
  readonly parentCode: string | null;
  readonly geometry: LineString | MultiLineString;
  readonly row: number;
  readonly file: string;
}

/** Parents by touch: the reach whose tail lies within `TOUCH` of this one's head. A reach that meets none is a head. */
export function inferParents(reaches: readonly TreeReach[], findings: FindingList): TreeReach[] {
  const inferred = reaches.map((reach) => {
    const parent = reaches.find((other) => other !== reach && near(tailOf(other.geometry), headOf(reach.geometry)));
    return { ...reach, parentCode: parent?.code ?? null };
  });
  findings.note({
    code: 'tree-inferred',
    message: `No property names a parent; ${counted(inferred.filter((reach) => reach.parentCode !== null).length, 'reach is', 'reaches are')} joined to the reach whose tail touches the head (within ${TOUCH} m).`,
    file: reaches[0]?.file,
    advice: 'Lines must be drawn from head to tail.',
  });
  return inferred;
}

function partsOf(shape: LineString | MultiLineString): Position[][] {
  return shape.type === 'LineString' ? [shape.coordinates] : shape.coordinates;
}

function headOf(shape: LineString | MultiLineString): Position {
  return partsOf(shape)[0][0];
}

function tailOf(shape: LineString | MultiLineString): Position {
  const last = partsOf(shape).at(-1) as Position[];
  return last[last.length - 1];
}

function near(a: Position, b: Position): boolean {
  return Math.abs(a[1] - b[1]) < TOUCH_DEGREES && geodesicDistance(a[0], a[1], b[0], b[1]) <= TOUCH;
}

/** A reach of the tree that is to be: of the file, or stored and kept. */
type TreeNode = Pick<TreeReach, 'code' | 'parentCode'> & Partial<TreeReach>;

/** What the reaches of a file are put together with. */
interface TreeSurroundings {
  /** reaches the district has and keeps */
  readonly stored: readonly { readonly code: string; readonly parentCode: string | null }[];
  /** reaches of the file that were left out, with the reason */
  readonly leftOut: ReadonlyMap<string, string>;
}

/** The reaches of the file with the stored ones: one head, no unknown parents, no cycle: true. Each fault is a file-level error that names the reaches. */
export function checkTree(reaches: readonly TreeReach[], { stored, leftOut }: TreeSurroundings, findings: FindingList): boolean {
  if (reaches.length === 0) return false;
  const own = new Set(reaches.map((reach) => reach.code));
  const nodes: TreeNode[] = [...reaches, ...stored.filter((reach) => !own.has(reach.code))];
  const byCode = new Map(nodes.map((reach) => [reach.code, reach]));
  const orphans = nodes.filter((reach) => reach.parentCode !== null && !byCode.has(reach.parentCode));
  const heads = nodes.filter((reach) => reach.parentCode === null);
  const looped = nodes.filter((reach) => isLooped(reach, byCode));
  for (const orphan of orphans) refuseOrphan(orphan, leftOut, findings);
  if (looped.length > 0)
    refuse(findings, looped, 'reach-cycle', `Reaches hang on each other in a circle: ${listed(looped)}.`, 'Correct the parents.');
  if (heads.length === 0 && orphans.length === 0)
    refuse(findings, nodes, 'no-head', 'No reach is the head: every one has a parent.', 'Leave the parent of the head reach empty.');
  if (heads.length > 1) refuseHeads(heads, leftOut, findings);
  return orphans.length === 0 && looped.length === 0 && heads.length === 1;
}

function refuseOrphan(orphan: TreeNode, leftOut: TreeSurroundings['leftOut'], findings: FindingList): void {
  const parent = orphan.parentCode ?? '';
  const reason = leftOut.get(parent);
  refuse(
    findings,
    [orphan],
    'orphan-reach',
    `Reach ${named(orphan)} hangs on reach ${shown(parent)}, ${reason ? `which was left out: ${reason}` : 'which is neither in the file nor among the canals that stay.'}`,
    reason ? 'Correct that reach.' : 'Bring the whole tree in one import, or correct the parent.',
  );
}

function refuseHeads(heads: readonly TreeNode[], leftOut: TreeSurroundings['leftOut'], findings: FindingList): void {
  const missing = leftOut.size > 0 ? ` ${counted(leftOut.size, 'reach was', 'reaches were')} left out of the file.` : '';
  const withStored = heads.some((reach) => reach.file === undefined);
  refuse(
    findings,
    heads.slice(1),
    'several-heads',
    `${heads.length} reaches have no parent: ${listed(heads)}. There must be one head.${missing}`,
    withStored
      ? 'Give each but one its parent, or choose to replace the stored canals if the file holds the whole tree.'
      : 'Give each but one its parent.',
  );
}

/** Refuses at the first of the reaches that stands in the file. */
function refuse(findings: FindingList, reaches: readonly TreeNode[], code: string, message: string, advice: string): void {
  const at = reaches.find((reach) => reach.file !== undefined) ?? reaches[0];
  findings.refuse({ code, message, file: at.file, row: at.row, value: shown(at.code), advice });
}

/** True when the reach stands on a circle of parents. */
function isLooped(reach: TreeNode, byCode: ReadonlyMap<string, TreeNode>): boolean {
  const seen = new Set<string>([reach.code]);
  let at = reach.parentCode === null ? undefined : byCode.get(reach.parentCode);
  while (at) {
    if (at.code === reach.code) return true;
    if (seen.has(at.code)) return false;
    seen.add(at.code);
    at = at.parentCode === null ? undefined : byCode.get(at.parentCode);
  }
  return false;
}

function named({ code, file }: TreeNode): string {
  return file === undefined ? `${shown(code)} (stored)` : shown(code);
}

function listed(reaches: readonly TreeNode[]): string {
  return `${reaches.slice(0, 12).map(named).join(', ')}${reaches.length > 12 ? ' …' : ''}`;
}
