/**
 * Parcels joined by where they lie: to the nearest turnout, the nearest reach, or the service area around them.
 */
import type { MultiPolygon, Polygon } from 'geojson';
import { counted } from '../base/counted.ts';
import { coverOf } from '../geo/area-shares.ts';
import { nearestOf, type Place } from '../geo/nearest-place.ts';
import { type PlaneShape, planeShape } from '../geo/plane-shape.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { ImportContext, ImportOptions } from './reading.ts';

/** Furthest a turnout or reach may lie from the edge of a parcel where the options do not say [m]. */
export const JOIN_DISTANCE = 500;
/** A parcel is joined to a service area that holds at least this share of it. Common practice, no source. */
const HOME_SHARE = 0.5;
/** A second service area is told of from this share on. */
const SECOND_SHARE = 0.05;
const LISTED = 15;

/** What a place gives a parcel. */
export interface PlaceJoin {
  readonly turnoutCode: string | null;
  readonly reachCode: string | null;
  /** how it was found, as the end of "joined …" */
  readonly how: string;
}

interface Outcome {
  readonly join: PlaceJoin | null;
  /** why there is none, or what else is worth telling */
  readonly note?: 'far' | 'outside' | 'bare' | 'second';
  /** m */
  readonly distance?: number;
}

type Joiner = (shape: PlaneShape, area: number) => Outcome;
type Kind = Exclude<ImportOptions['joinByPlace'], undefined | 'none'>;

/** Joins by place as the options ask; null when they do not, or there is nothing to join to, which is told. */
export function placeJoins(context: ImportContext, options: ImportOptions, findings: FindingList) {
  const kind = options.joinByPlace ?? 'none';
  if (kind === 'none') return null;
  const within = options.joinDistance ?? JOIN_DISTANCE;
  const joiner = joinerOf(kind, context, within);
  if (!joiner) {
    findings.warn({ code: 'no-places', ...NOTHING_THERE[kind] });
    return null;
  }
  const tally = { joined: 0, furthest: 0, second: [] as string[], far: [] as string[], outside: [] as string[], bare: [] as string[] };
  /** @param area [m²] */
  const join = (code: string, geometry: Polygon | MultiPolygon, area: number): PlaceJoin | null => {
    const { join: found, note, distance = 0 } = joiner(planeShape(geometry), area);
    if (note) tally[note].push(code);
    if (found) tally.joined++;
    tally.furthest = Math.max(tally.furthest, distance);
    return found;
  };
  return { join, finish: () => tell(kind, within, tally, findings) };
}

const NOTHING_THERE: Record<Kind, { message: string; advice: string }> = {
  'nearest-turnout': {
    message: 'No turnout of the district has a place: no parcel is joined by place.',
    advice: 'Import the turnouts with longitude and latitude first.',
  },
  'nearest-reach': {
    message: 'The district has no canals with lines: no parcel is joined by place.',
    advice: 'Import the canals first.',
  },
  'service-area': {
    message: 'The district has no service areas: no parcel is joined by place.',
    advice: 'Import the service areas first.',
  },
};

function joinerOf(kind: Kind, context: ImportContext, within: number): Joiner | null {
  if (kind === 'service-area') return areaJoiner(context);
  if (kind === 'nearest-reach') {
    const lines = context.reachLines ?? [];
    const how = (code: string, distance: string) => `to the nearest reach, ${code}, ${distance} away`;
    return nearestJoiner(
      lines.map(({ geometry }) => geometry),
      (index) => ({ turnoutCode: null, reachCode: lines[index].code }),
      (index, distance) => how(lines[index].code, distance),
      within,
    );
  }
  const placed = context.knownTurnouts.flatMap((turnout) => {
    const { longitude, latitude } = turnout;
    return typeof longitude === 'number' && typeof latitude === 'number' ? [{ ...turnout, longitude, latitude }] : [];
  });
  return nearestJoiner(
    placed.map(({ longitude, latitude }) => ({ type: 'Point', coordinates: [longitude, latitude] })),
    (index) => ({ turnoutCode: placed[index].code, reachCode: placed[index].reachCode }),
    (index, distance) => `to the nearest turnout, ${placed[index].code}, ${distance} away`,
    within,
  );
}

function nearestJoiner(
  places: readonly Place[],
  codesOf: (index: number) => Omit<PlaceJoin, 'how'>,
  howOf: (index: number, distance: string) => string,
  within: number,
): Joiner | null {
  if (places.length === 0) return null;
  const nearest = nearestOf(places);
  return (shape) => {
    const found = nearest(shape, within);
    if (!found) return { join: null, note: 'far' };
    const { index, distance } = found;
    return { join: { ...codesOf(index), how: howOf(index, `${Math.round(distance)} m`) }, distance };
  };
}

function areaJoiner({ serviceAreas = [], knownTurnouts }: ImportContext): Joiner | null {
  if (serviceAreas.length === 0) return null;
  const cover = coverOf(serviceAreas.map(({ geometry }) => planeShape(geometry)));
  const reachOf = new Map(knownTurnouts.map(({ code, reachCode }) => [code, reachCode]));
  return (shape, area) => {
    const [home, second] = cover.sharesOf(shape, area);
    if (!home || home.held < HOME_SHARE) return { join: null, note: 'outside' };
    const { code, turnoutCode, reachCode } = serviceAreas[home.index];
    const reach = (turnoutCode === null ? null : reachOf.get(turnoutCode)) ?? reachCode;
    if (turnoutCode === null && reach === null) return { join: null, note: 'bare' };
    const beside = second && second.held >= SECOND_SHARE ? second : null;
    const also = beside ? `, ${percent(beside.held)} in ${serviceAreas[beside.index].code}` : '';
    const how = `to service area ${code}, which holds ${percent(home.held)} of it${also}`;
    return { join: { turnoutCode, reachCode: reach, how }, note: beside ? 'second' : undefined };
  };
}

function percent(share: number): string {
  return `${Math.round(share * 100)} %`;
}

interface Tally {
  readonly joined: number;
  /** m */
  readonly furthest: number;
  readonly second: readonly string[];
  readonly far: readonly string[];
  readonly outside: readonly string[];
  readonly bare: readonly string[];
}

const TARGET: Record<Kind, string> = { 'nearest-turnout': 'turnout', 'nearest-reach': 'reach', 'service-area': 'service area' };

function tell(kind: Kind, within: number, tally: Tally, findings: FindingList): void {
  const near = kind === 'service-area' ? '' : ` The furthest lies ${Math.round(tally.furthest)} m from its edge.`;
  if (tally.joined > 0)
    findings.note({
      code: 'joined-by-place',
      message: `${counted(tally.joined, 'parcel that names no turnout or reach is', 'parcels that name no turnout or reach are')} joined by place to a ${TARGET[kind]}.${near} The join goes before what is stored for the parcel.`,
      advice: 'Look at the joins on the map before applying.',
    });
  list(findings, tally.far, {
    code: 'nothing-near',
    text: `with no ${TARGET[kind]} within ${within} m of the edge`,
    advice: 'Allow a larger distance, or give their codes in the file.',
    limit: `${within} m`,
  });
  list(findings, tally.outside, {
    code: 'outside-areas',
    text: `of which no service area holds half`,
    advice: 'Correct the service areas, or give the codes of these parcels in the file.',
    limit: `${HOME_SHARE * 100} % of the parcel`,
  });
  list(findings, tally.bare, {
    code: 'area-without-canal',
    text: 'in service areas that name neither turnout nor reach',
    advice: 'Give these service areas a turnout or reach.',
  });
  list(findings, tally.second, {
    code: 'areas-share-parcel',
    text: 'on several service areas; each is joined to the one with the largest share of its area',
    advice: 'Look at them on the map; give their codes in the file where another area serves them.',
    limit: `${SECOND_SHARE * 100} % of the parcel`,
  });
}

function list(
  findings: FindingList,
  codes: readonly string[],
  { code, text, advice, limit }: { code: string; text: string; advice: string; limit?: string },
): void {
  if (codes.length === 0) return;
  const names = `${codes.slice(0, LISTED).map(shown).join(', ')}${codes.length > LISTED ? ' …' : ''}`;
  findings.warn({ code, message: `${counted(codes.length, 'parcel lies', 'parcels lie')} ${text}: ${names}.`, limit, advice });
}
