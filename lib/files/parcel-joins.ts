/**
 * The codes on a parcel that point elsewhere: turnout, reach, soil, application method.
 */
import type { MultiPolygon, Polygon } from 'geojson';
import { counted } from '../base/counted.ts';
import { codeFault } from './code-text.ts';
import { numberOf, textOf } from './feature-properties.ts';
import { type FindingList, shown } from './finding-list.ts';
import { placeJoins } from './place-joins.ts';
import type { RawFeature } from './raw-feature.ts';
import type { ImportContext, ImportOptions, StagedParcel, StagedTurnout } from './reading.ts';
import type { BoundTable } from './table-columns.ts';

const LISTED = 15;
/** Largest turnout that is believed [m³ s⁻¹]. */
const TURNOUT_CAPACITY_HIGH = 100;

type Joined = Pick<StagedParcel, 'turnoutCode' | 'reachCode' | 'soilCode' | 'methodCode'>;

/** The ground of a parcel, for joins by place. */
export interface ParcelGround {
  readonly code: string;
  readonly geometry: Polygon | MultiPolygon;
  /** m² */
  readonly area: number;
}

interface JoinedParcel {
  readonly codes: Joined;
  /** how it was joined by place, as a sentence; null when by code, or not at all */
  readonly how: string | null;
}

/** Joins parcels to what the district knows, by code first and then as the options ask by place, and gathers the turnouts that the file names. */
export function parcelJoins(context: ImportContext, options: ImportOptions, findings: FindingList) {
  const places = placeJoins(context, options, findings);
  const reaches = new Set(context.knownReaches.map((reach) => reach.code));
  const known = new Map(context.knownTurnouts.map((turnout) => [turnout.code, turnout.reachCode]));
  const made = new Map<string, StagedTurnout>();
  const soils = codeIndex(context.soils);
  const methods = codeIndex(context.methods);
  const unknown = {
    soil: new Map<string, number>(),
    method: new Map<string, number>(),
    reach: new Map<string, number>(),
    turnout: new Map<string, number>(),
  };
  let withoutReach = 0;
  let withoutSoil = 0;
  let withoutMethod = 0;

  function join(feature: RawFeature, bound: BoundTable['bound'], ground: ParcelGround): JoinedParcel {
    const soilText = textOf(feature, bound, 'soil');
    const methodText = textOf(feature, bound, 'method');
    if (soilText === null) withoutSoil++;
    if (methodText === null) withoutMethod++;
    const reach = reachOf(textOf(feature, bound, 'reach'));
    const turnoutCode = textOf(feature, bound, 'turnout');
    const named = turnoutCode === null ? { turnoutCode: null, reachCode: reach } : turnoutOf(turnoutCode, reach, feature, bound);
    const placed = named.reachCode === null ? (places?.join(ground.code, ground.geometry, ground.area) ?? null) : null;
    const { turnoutCode: turnout, reachCode } = placed ?? named;
    if (reachCode === null) withoutReach++;
    return {
      codes: {
        turnoutCode: turnout,
        reachCode,
        soilCode: look(soils, soilText, unknown.soil),
        methodCode: look(methods, methodText, unknown.method),
      },
      how: placed ? `Joined by place ${placed.how}.` : null,
    };
  }

  /** A reach is taken on trust while the district has no canals; later it must exist. */
  function reachOf(text: string | null): string | null {
    if (text === null || reaches.size === 0 || reaches.has(text)) return text;
    tally(unknown.reach, text);
    return null;
  }

  function turnoutOf(
    code: string,
    reach: string | null,
    feature: RawFeature,
    bound: BoundTable['bound'],
  ): { turnoutCode: string | null; reachCode: string | null } {
    if (refusedCode(code, feature, bound, findings)) return { turnoutCode: null, reachCode: reach };
    const reachCode = reach ?? made.get(code)?.reachCode ?? known.get(code) ?? null;
    if (reachCode === null) {
      tally(unknown.turnout, code);
      return { turnoutCode: null, reachCode: null };
    }
    const earlier = made.get(code);
    if (earlier && earlier.reachCode !== reachCode) {
      refuseSecondReach(earlier, reachCode, feature, findings);
      return { turnoutCode: code, reachCode: earlier.reachCode };
    }
    const capacity = numberOf(feature, bound, { role: 'turnout_capacity', low: 0, high: TURNOUT_CAPACITY_HIGH, unit: 'm³/s' }, findings);
    if (!earlier && (known.get(code) !== reachCode || capacity !== null)) made.set(code, { code, reachCode, capacity });
    else if (earlier && earlier.capacity === null && capacity !== null) made.set(code, { ...earlier, capacity });
    return { turnoutCode: code, reachCode };
  }

  function finish(parcelCount: number): void {
    places?.finish();
    listUnknown(unknown.soil, 'soil', 'The run takes the soil of the district.', 'note', findings);
    listUnknown(unknown.method, 'method', 'The run takes the method of the district.', 'note', findings);
    listUnknown(unknown.reach, 'reach', 'Their parcels hang on no canal.', 'warning', findings);
    listUnknown(unknown.turnout, 'turnout', 'They have no reach: their parcels hang on no canal.', 'warning', findings);
    noteMissing(withoutSoil, 'soil', 'they take the soil polygons under them, else the soil of the district', findings);
    noteMissing(withoutMethod, 'method', 'the method of the district is used', findings);
    noteMissing(withoutReach, 'reach', 'their demand reaches no canal', findings);
    if (reaches.size === 0 && parcelCount > withoutReach)
      findings.note({
        code: 'reaches-not-yet-known',
        message: 'The district has no canals yet: the reach codes of the parcels are taken on trust.',
        advice: 'Import canals with these codes.',
      });
  }

  return { join, finish, turnouts: () => [...made.values()] };
}

/** True when a turnout's code cannot be used, which is told; the parcel comes without turnout. */
function refusedCode(code: string, feature: RawFeature, bound: BoundTable['bound'], findings: FindingList): boolean {
  const fault = codeFault('Turnout', code);
  if (fault) findings.error({ ...fault, file: feature.file, row: feature.row, column: bound.get('turnout')?.header, value: shown(code) });
  return fault !== null;
}

function refuseSecondReach(turnout: StagedTurnout, reachCode: string, feature: RawFeature, findings: FindingList): void {
  findings.error({
    code: 'turnout-on-two-reaches',
    message: `Turnout ${shown(turnout.code)} stands on reach ${turnout.reachCode} and on ${reachCode}; the first is kept.`,
    file: feature.file,
    row: feature.row,
    value: shown(turnout.code),
    advice: 'Correct the reach or the turnout.',
  });
}

function codeIndex(codes: readonly string[]): Map<string, string> {
  return new Map(codes.map((code) => [code.toLowerCase(), code]));
}

function look(index: ReadonlyMap<string, string>, text: string | null, unknown: Map<string, number>): string | null {
  if (text === null) return null;
  const code = index.get(text.toLowerCase());
  if (code === undefined) tally(unknown, text);
  return code ?? null;
}

function tally(map: Map<string, number>, key: string): void {
  map.set(key, (map.get(key) ?? 0) + 1);
}

function listUnknown(
  unknown: ReadonlyMap<string, number>,
  role: string,
  effect: string,
  severity: 'note' | 'warning',
  findings: FindingList,
): void {
  if (unknown.size === 0) return;
  const list = [...unknown].slice(0, LISTED).map(([code, count]) => `${shown(code)} (${count})`);
  findings.add({
    severity,
    code: `unknown-${role}`,
    message: `${counted(unknown.size, `${role} code is`, `${role} codes are`)} not known: ${list.join(', ')}${unknown.size > LISTED ? ' …' : ''}. ${effect}`,
    column: role,
    advice: `Add them first, or correct the codes.`,
  });
}

function noteMissing(count: number, role: string, effect: string, findings: FindingList): void {
  if (count > 0)
    findings.note({
      code: `no-${role}`,
      message: `${counted(count, 'parcel names', 'parcels name')} no known ${role}; ${effect}.`,
      column: role,
    });
}
