/**
 * Reaches → one tree: parents checked, or found from lines that touch.
 */
import type { LineString, MultiLineString, Position } from 'geojson';
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
    message: `No property names a parent; ${inferred.filter((reach) => reach.parentCode !== null).length} reaches are joined to the reach whose tail touches their head (within ${TOUCH} m).`,
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

/** One head, no unknown parents, no cycle: true. Each fault is a file-level error that names the reaches. */
export function checkTree(reaches: readonly TreeReach[], findings: FindingList): boolean {
  if (reaches.length === 0) return false;
  const byCode = new Map(reaches.map((reach) => [reach.code, reach]));
  const orphans = reaches.filter((reach) => reach.parentCode !== null && !byCode.has(reach.parentCode));
  const heads = reaches.filter((reach) => reach.parentCode === null);
  const looped = reaches.filter((reach) => isLooped(reach, byCode));
  for (const orphan of orphans) {
    refuse(
      findings,
      orphan,
      'orphan-reach',
      `Reach ${shown(orphan.code)} hangs on reach ${shown(orphan.parentCode ?? '')}, which is not in the file.`,
      'Bring the whole tree in one import, or correct the parent.',
    );
  }
  if (looped.length > 0)
    refuse(findings, looped[0], 'reach-cycle', `Reaches hang on each other in a circle: ${listed(looped)}.`, 'Correct the parents.');
  if (heads.length === 0)
    refuse(findings, reaches[0], 'no-head', 'No reach is the head: every one has a parent.', 'Leave the parent of the head reach empty.');
  if (heads.length > 1)
    refuse(
      findings,
      heads[1],
      'several-heads',
      `${heads.length} reaches have no parent: ${listed(heads)}. There must be one head.`,
      'Give each but one its parent.',
    );
  return orphans.length === 0 && looped.length === 0 && heads.length === 1;
}

function refuse(findings: FindingList, reach: TreeReach, code: string, message: string, advice: string): void {
  findings.refuse({ code, message, file: reach.file, row: reach.row, value: shown(reach.code), advice });
}

/** True when the reach stands on a circle of parents. */
function isLooped(reach: TreeReach, byCode: ReadonlyMap<string, TreeReach>): boolean {
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

function listed(reaches: readonly TreeReach[]): string {
  return `${reaches
    .slice(0, 12)
    .map((reach) => shown(reach.code))
    .join(', ')}${reaches.length > 12 ? ' …' : ''}`;
}
