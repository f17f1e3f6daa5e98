/**
 * Which reach and turnout serve a parcel of the invented district.
 */
import type { Random } from '../../base/random.ts';
import type { DemoReachShape } from './canal-tree.ts';
import { distance } from './parcel-shapes.ts';
import type { PlanePoint } from './terrain.ts';

export interface Service {
  readonly reachCode: string;
  readonly turnoutCode: string;
}

/** Distance counts less from a lateral than from a canal that would rather not be tapped. */
const RELUCTANCE = { main: 1.7, branch: 1.25, lateral: 1, 'sub-lateral': 0.95 } as const;
/** Reaches without turnouts: the intake and the pipe under the river. */
const CLOSED = new Set(['M1', 'S1']);

interface Nearest {
  readonly reach: number;
  readonly chainage: number;
}

/** One service per centre, in order; parcels next to each other along a reach share turnouts of one to four. */
export function demoService(centres: readonly PlanePoint[], reaches: readonly DemoReachShape[], random: Random): Service[] {
  const nearest = centres.map((centre) => nearestReach(centre, reaches));
  const services: Service[] = new Array(centres.length);
  reaches.forEach((reach, index) => {
    const served = centres.map((_, i) => i).filter((i) => nearest[i].reach === index);
    served.sort((a, b) => nearest[a].chainage - nearest[b].chainage || a - b);
    let [turnout, room] = [0, 0];
    for (const parcel of served) {
      if (room === 0) {
        turnout++;
        room = 1 + Math.floor(random() * 3.8);
      }
      room--;
      services[parcel] = { reachCode: reach.code, turnoutCode: `${reach.code}-${String(turnout).padStart(2, '0')}` };
    }
  });
  return services;
}

function nearestReach(centre: PlanePoint, reaches: readonly DemoReachShape[]): Nearest {
  let best = { reach: -1, chainage: 0, cost: Number.POSITIVE_INFINITY };
  reaches.forEach((reach, index) => {
    if (CLOSED.has(reach.code)) return;
    const { away, chainage } = alongLine(centre, reach.points);
    const cost = away * RELUCTANCE[reach.kind];
    if (cost < best.cost) best = { reach: index, chainage, cost };
  });
  return best;
}

function alongLine(point: PlanePoint, line: readonly PlanePoint[]): { away: number; chainage: number } {
  let best = { away: Number.POSITIVE_INFINITY, chainage: 0 };
  let from = 0;
  for (let i = 0; i + 1 < line.length; i++) {
    const [a, b] = [line[i], line[i + 1]];
    const length = distance(a, b);
    const share = Math.min(1, Math.max(0, ((point[0] - a[0]) * (b[0] - a[0]) + (point[1] - a[1]) * (b[1] - a[1])) / (length * length)));
    const away = distance(point, [a[0] + (b[0] - a[0]) * share, a[1] + (b[1] - a[1]) * share]);
    if (away < best.away) best = { away, chainage: from + share * length };
    from += length;
  }
  return best;
}
