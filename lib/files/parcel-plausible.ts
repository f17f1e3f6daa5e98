/**
 * Parcels that can be read and are yet suspect: very large, far away; and the parcels that replacing would remove.
 */
import { counted } from '../base/counted.ts';
import { geodesicDistance } from '../geo/geodesic.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { ImportContext, ImportOptions, StagedParcel } from './reading.ts';

/** Area beyond which a parcel is suspect [m²]. */
const LARGE = 50_000_000;
/** Distance from the rest of the district beyond which a parcel is suspect [m]. */
const FAR = 500_000;
const LISTED = 12;

type Box = readonly [number, number, number, number];

interface Parcels {
  readonly parcels: readonly StagedParcel[];
  readonly rows: readonly { readonly row: number; readonly file: string }[];
}

export function warnLarge({ parcels, rows }: Parcels, findings: FindingList): void {
  for (const [index, { code, area }] of parcels.entries()) {
    if (area <= LARGE) continue;
    findings.warn({
      code: 'parcel-large',
      message: `Parcel ${shown(code)} has ${Math.round(area / 10_000)} ha.`,
      ...rows[index],
      value: shown(code),
      limit: `${LARGE / 10_000} ha`,
      advice: 'Check that the outline is that of one parcel.',
    });
  }
}

/** Parcels far from the district: its stored parcels and stations, or, while it has none, the middle of the file. */
export function warnFar({ parcels, rows }: Parcels, context: ImportContext, options: ImportOptions, findings: FindingList): void {
  const stored = options.replace === true ? null : context.districtBox;
  const known = [stored, context.siteBox].filter((box) => box !== null && box !== undefined);
  const boxes = known.length > 0 && options.replace !== true ? known : [...known, middleOf(parcels)];
  for (const [index, { code, longitude, latitude }] of parcels.entries()) {
    const distance = Math.min(...boxes.map((box) => distanceTo(box, longitude, latitude)));
    if (distance <= FAR) continue;
    findings.warn({
      code: 'parcel-far-away',
      message: `Parcel ${shown(code)} lies ${Math.round(distance / 1000)} km from ${known.length > 0 ? 'the district' : 'the middle of the file'}.`,
      ...rows[index],
      value: `${longitude}, ${latitude}`,
      limit: `${FAR / 1000} km`,
      advice: boxes.some((box) => distanceTo(box, -longitude, latitude) <= FAR)
        ? 'West longitudes are negative: change the sign.'
        : 'Check the coordinates; longitude stands before latitude.',
    });
  }
}

function distanceTo([west, south, east, north]: Box, longitude: number, latitude: number): number {
  return geodesicDistance(longitude, latitude, Math.min(Math.max(longitude, west), east), Math.min(Math.max(latitude, south), north));
}

function middleOf(parcels: readonly StagedParcel[]): Box {
  const middle = (values: number[]) => values.sort((a, b) => a - b)[values.length >> 1];
  const longitude = middle(parcels.map((parcel) => parcel.longitude));
  const latitude = middle(parcels.map((parcel) => parcel.latitude));
  return [longitude, latitude, longitude, latitude];
}

/** What replacing all parcels by those of the file removes. `refused` are the codes of features that were left out. */
export function warnRemoved(
  parcels: readonly StagedParcel[],
  refused: ReadonlySet<string>,
  { knownParcels, plantingCounts }: ImportContext,
  findings: FindingList,
): void {
  const kept = new Set(parcels.map(({ code }) => code));
  const removed = parcels.length === 0 ? [] : knownParcels.filter((code) => !kept.has(code));
  if (removed.length === 0) return;
  const plantings = removed.reduce((sum, code) => sum + (plantingCounts?.[code] ?? 0), 0);
  const unread = removed.filter((code) => refused.has(code));
  const inFile =
    unread.length > 0
      ? ` ${counted(unread.length, 'of them stands', 'of them stand')} in the file but could not be read: ${listed(unread)}.`
      : '';
  findings.warn({
    code: 'parcels-removed',
    message: `Replacing the parcels removes ${counted(removed.length, 'parcel', 'parcels')} and ${counted(plantings, 'planting', 'plantings')}: ${listed(removed)}.${inFile}`,
    advice: 'Import without replacing to keep them.',
  });
}

function listed(codes: readonly string[]): string {
  return `${codes.slice(0, LISTED).map(shown).join(', ')}${codes.length > LISTED ? ' …' : ''}`;
}
