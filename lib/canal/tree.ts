/**
 * The conveyance tree: reaches from the headworks down. Each reach names the reach that feeds it; the head reach names none.
 */
import { TreeError } from '../base/errors.ts';

export interface TreeNode {
  readonly code: string;
  readonly parentCode: string | null;
}

/** Indices refer to the order in which the nodes were given. */
export interface ConveyanceTree {
  readonly codes: readonly string[];
  readonly indexOf: ReadonlyMap<string, number>;
  /** index of the feeding reach, −1 for the head reach */
  readonly parent: Int32Array;
  readonly children: readonly (readonly number[])[];
  /** every reach after the one that feeds it */
  readonly order: Int32Array;
  /** number of reaches above; 0 for the head reach */
  readonly depth: Int32Array;
  readonly head: number;
}

/**
 * Builds the tree and proves that it is one.
 *
 * @throws {TreeError} naming the codes at fault: no reach, a code twice, a parent that is not there, no head, two heads, a cycle.
 * @example buildTree([{ code: 'A', parentCode: null }, { code: 'B', parentCode: 'A' }]).head // 0
 */
export function buildTree(nodes: readonly TreeNode[]): ConveyanceTree {
  const indexOf = indexCodes(nodes);
  const parent = linkParents(nodes, indexOf);
  const children: number[][] = nodes.map(() => []);
  for (let i = 0; i < nodes.length; i++) if (parent[i] >= 0) children[parent[i]].push(i);
  const head = findHead(nodes, parent);
  const { order, depth } = walk(head, children, nodes.length);
  if (order.length < nodes.length) refuseCycle(nodes, parent, order);
  return { codes: nodes.map((node) => node.code), indexOf, parent, children, order: Int32Array.from(order), depth, head };
}

function indexCodes(nodes: readonly TreeNode[]): Map<string, number> {
  if (nodes.length === 0) throw new TreeError('the conveyance tree has no reach: give at least the head reach', []);
  const indexOf = new Map<string, number>();
  const twice = new Set<string>();
  nodes.forEach((node, i) => {
    if (indexOf.has(node.code)) twice.add(node.code);
    indexOf.set(node.code, i);
  });
  if (twice.size > 0) throw new TreeError(`reach codes given more than once: ${list(twice)}; each reach needs its own code`, [...twice]);
  return indexOf;
}

function linkParents(nodes: readonly TreeNode[], indexOf: ReadonlyMap<string, number>): Int32Array {
  const orphans = nodes.filter((node) => node.parentCode !== null && !indexOf.has(node.parentCode));
  if (orphans.length > 0) {
    const pairs = orphans.map((node) => `${node.code} (parent ${node.parentCode})`);
    throw new TreeError(
      `reaches whose parent is not among the reaches: ${list(pairs)}; correct the parent or add that reach`,
      orphans.map((node) => node.code),
    );
  }
  return Int32Array.from(nodes, (node) => (node.parentCode === null ? -1 : (indexOf.get(node.parentCode) as number)));
}

function findHead(nodes: readonly TreeNode[], parent: Int32Array): number {
  const heads = nodes.map((_, i) => i).filter((i) => parent[i] < 0);
  if (heads.length === 1) return heads[0];
  const codes = heads.map((i) => nodes[i].code);
  if (heads.length > 1) {
    throw new TreeError(`reaches without a parent: ${list(codes)}; only the one at the headworks may have none`, codes);
  }
  return refuseCycle(nodes, parent, []);
}

function walk(head: number, children: readonly (readonly number[])[], count: number) {
  const order = [head];
  const depth = new Int32Array(count);
  for (let at = 0; at < order.length; at++) {
    for (const child of children[order[at]]) {
      depth[child] = depth[order[at]] + 1;
      order.push(child);
    }
  }
  return { order, depth };
}

/** Reaches never arrived at from the head hang on a cycle: walk up from one of them until a code repeats. */
function refuseCycle(nodes: readonly TreeNode[], parent: Int32Array, reached: readonly number[]): never {
  const done = new Set(reached);
  let at = nodes.findIndex((_, i) => !done.has(i));
  const seen: number[] = [];
  while (!seen.includes(at)) {
    seen.push(at);
    at = parent[at];
  }
  const cycle = seen.slice(seen.indexOf(at)).map((i) => nodes[i].code);
  throw new TreeError(`reaches feed each other in a circle: ${[...cycle, cycle[0]].join(' ← ')}; one of them needs another parent`, cycle);
}

function list(codes: Iterable<string>): string {
  const all = [...codes];
  return all.length > 8 ? `${all.slice(0, 8).join(', ')} and ${all.length - 8} more` : all.join(', ');
}

/** Indices of `reach` and every reach it feeds, parents before children. */
export function reachesBelow(tree: ConveyanceTree, reach: number): number[] {
  const below = [reach];
  for (let at = 0; at < below.length; at++) below.push(...tree.children[below[at]]);
  return below;
}
