/**
 * What makes a turnout: a code, a reach that feeds it, a capacity and a place. The same for tables and for points.
 */
import { counted } from '../base/counted.ts';
import { nearestOf, pointShape } from '../geo/nearest-place.ts';
import { codeFault } from './code-text.ts';
import { type FindingList, shown } from './finding-list.ts';
import { JOIN_DISTANCE } from './place-joins.ts';
import type { ImportContext, ImportOptions, StagedTurnout } from './reading.ts';
import type { TableRole } from './table-columns.ts';

/** Largest turnout that is believed [m³ s⁻¹]. */
export const TURNOUT_CAPACITY_HIGH = 100;
const LISTED = 15;

export const TURNOUT_ROLES: readonly TableRole[] = [
  { role: 'code', names: ['turnout', 'turnout code', 'turnout id', 'gate', 'outlet', 'code', 'id'], required: true },
  { role: 'reach', names: ['reach', 'reach code', 'reach id', 'canal', 'lateral'] },
  { role: 'capacity', names: ['capacity', 'turnout capacity', 'gate capacity', 'design capacity', 'max flow'], kind: 'flow' },
  { role: 'longitude', names: ['longitude', 'lon', 'long', 'lng', 'x'] },
  { role: 'latitude', names: ['latitude', 'lat', 'y'] },
];

/** A turnout as a row or point says. */
export interface TurnoutFacts {
  readonly code: string | null;
  readonly reach: string | null;
  /** m³ s⁻¹ */
  readonly capacity: number | null;
  /** degrees */
  readonly longitude: number | null;
  readonly latitude: number | null;
}

export interface TurnoutFault {
  readonly code: string;
  readonly message: string;
  readonly role?: string;
  readonly limit?: string;
  readonly advice?: string;
}

/** Gathers the turnouts of a file. */
export class TurnoutRules {
  private readonly kept = new Map<string, { turnout: StagedTurnout; row: number }>();
  private readonly reaches: ReadonlySet<string>;
  private readonly known: ReadonlyMap<string, string>;
  private readonly nearest: ReturnType<typeof nearestOf>;
  private readonly within: number;
  private readonly byPlace: { code: string; distance: number }[] = [];
  private placeless = 0;

  constructor(
    private readonly context: ImportContext,
    options: ImportOptions,
  ) {
    this.reaches = new Set(context.knownReaches.map(({ code }) => code));
    this.known = new Map(context.knownTurnouts.map(({ code, reachCode }) => [code, reachCode]));
    this.within = options.joinDistance ?? JOIN_DISTANCE;
    const lines = options.joinByPlace === 'nearest-reach' ? (context.reachLines ?? []) : [];
    this.nearest = nearestOf(lines.map(({ geometry }) => geometry));
  }

  /** Takes one; answers what is at fault, or how its reach was found by place. @param row of the file, from 1 */
  take(facts: TurnoutFacts, row: number): { readonly fault: TurnoutFault } | { readonly fault: null; readonly says: string | null } {
    const { code } = facts;
    if (code === null)
      return { fault: { code: 'missing-code', message: 'The turnout has no code.', role: 'code', advice: 'Give it a code.' } };
    const bad = codeFault('Turnout', code);
    if (bad) return { fault: { ...bad, role: 'code' } };
    const earlier = this.kept.get(code);
    if (earlier) return { fault: duplicate(code, earlier.row) };
    const half = placeFault(facts);
    if (half) return { fault: half };
    const found = this.reachOf(facts, code);
    if ('fault' in found) return found;
    const { longitude, latitude, capacity } = facts;
    if (longitude === null) this.placeless++;
    this.kept.set(code, { turnout: { code, reachCode: found.reach, capacity, longitude, latitude }, row });
    return { fault: null, says: found.says };
  }

  /** The reach it names; else the one it has now; else, when the options ask, the nearest. Codes are taken on trust while there are no canals. */
  private reachOf(facts: TurnoutFacts, code: string): { reach: string; says: string | null } | { fault: TurnoutFault } {
    const { reach, longitude, latitude } = facts;
    if (reach !== null && (this.reaches.size === 0 || this.reaches.has(reach))) return { reach, says: `On reach ${reach}.` };
    if (reach !== null) return { fault: unknownReach(code, reach) };
    const stored = this.known.get(code);
    if (stored !== undefined) return { reach: stored, says: `On reach ${stored}, as stored.` };
    const near = longitude === null || latitude === null ? null : this.nearest(pointShape(longitude, latitude), this.within);
    const line = near && this.context.reachLines?.[near.index];
    if (!near || !line) return { fault: noReach(code) };
    this.byPlace.push({ code, distance: near.distance });
    return { reach: line.code, says: `Joined by place to the nearest reach, ${line.code}, ${Math.round(near.distance)} m away.` };
  }

  turnouts(): StagedTurnout[] {
    return [...this.kept.values()].map(({ turnout }) => turnout);
  }

  finish(findings: FindingList): void {
    if (this.byPlace.length > 0)
      findings.note({
        code: 'joined-by-place',
        message: `${counted(this.byPlace.length, 'turnout that names no reach is', 'turnouts that name no reach are')} joined by place to the nearest reach. The furthest lies ${Math.round(Math.max(...this.byPlace.map(({ distance }) => distance)))} m from it.`,
        limit: `${this.within} m`,
        advice: 'Look at the joins before applying.',
      });
    if (this.placeless > 0)
      findings.note({
        code: 'no-place',
        message: `${counted(this.placeless, 'turnout has', 'turnouts have')} no longitude and latitude: parcels cannot be joined to ${this.placeless === 1 ? 'it' : 'them'} by place.`,
      });
    const moved = this.turnouts().filter(({ code, reachCode }) => this.known.has(code) && this.known.get(code) !== reachCode);
    if (moved.length > 0)
      findings.warn({
        code: 'turnout-moved',
        message: `${counted(moved.length, 'turnout moves', 'turnouts move')} to another reach: ${moved
          .slice(0, LISTED)
          .map(({ code, reachCode }) => `${shown(code)} from ${this.known.get(code)} to ${reachCode}`)
          .join(', ')}${moved.length > LISTED ? ' …' : ''}.`,
        advice: 'Check that the reaches are right: the demand of their parcels moves along.',
      });
    if (this.reaches.size === 0 && this.kept.size > 0)
      findings.note({
        code: 'reaches-not-yet-known',
        message: 'The district has no canals yet: the reach codes of the turnouts are taken on trust.',
        advice: 'Import canals with these codes.',
      });
  }
}

function duplicate(code: string, row: number): TurnoutFault {
  return {
    code: 'duplicate-code',
    message: `Turnout ${shown(code)} stands in row ${row} already; the first is kept.`,
    role: 'code',
    limit: 'one row per turnout',
    advice: 'Delete the wrong one.',
  };
}

function unknownReach(code: string, reach: string): TurnoutFault {
  return {
    code: 'unknown-reach',
    message: `Turnout ${shown(code)} stands on reach ${shown(reach)}, which the district does not have.`,
    role: 'reach',
    advice: 'Import the canals first, or correct the code.',
  };
}

function noReach(code: string): TurnoutFault {
  return {
    code: 'no-reach',
    message: `Turnout ${shown(code)} names no reach.`,
    role: 'reach',
    advice: 'Name its reach, or give its place and join it to the nearest reach in the options.',
  };
}

function placeFault({ longitude, latitude }: TurnoutFacts): TurnoutFault | null {
  if ((longitude === null) === (latitude === null)) return null;
  return {
    code: 'missing-coordinates',
    message: `The turnout has a ${longitude === null ? 'latitude' : 'longitude'} but no ${longitude === null ? 'longitude' : 'latitude'}.`,
    role: longitude === null ? 'longitude' : 'latitude',
    advice: 'Give both in decimal degrees, or neither.',
  };
}
