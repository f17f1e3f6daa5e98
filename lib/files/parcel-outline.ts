/**
 * What is said of the outline of a parcel or an area: why it cannot be used, or what was put right.
 */
import { AREA_CHANGE_LIMIT, AREA_MINIMUM, type RepairedPolygon, type RepairFault, type RepairNote } from '../geo/polygon-repair.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { RawFeature } from './raw-feature.ts';

const FAULT_TEXT: Record<RepairFault, { message: string; advice: string; limit?: string }> = {
  'too-few-vertices': { message: 'The polygon has fewer than three different corners.', advice: 'Draw it again.' },
  'zero-area': {
    message: 'The polygon has no area.',
    advice: 'Draw it again, or delete it.',
    limit: `at least ${AREA_MINIMUM} m²`,
  },
  'self-intersection': {
    message: 'The outline crosses itself so that it is not clear what is inside.',
    advice: 'Correct the outline.',
    limit: `area change of ${AREA_CHANGE_LIMIT * 100} % at most`,
  },
  antimeridian: {
    message: 'The polygon is more than 180 degrees wide: it crosses the 180th meridian or mixes signs of longitude.',
    advice: 'Cut it at the 180th meridian, or correct the sign.',
  },
};

/** What was put right, as the end of "… polygons". */
export const NOTE_TEXT: Record<RepairNote, string> = {
  closed: 'had an open outline, which is closed',
  oriented: 'had an outline in the other direction, which is turned',
  'duplicates-removed': 'had repeated corners, which are removed',
  'height-dropped': 'carried heights, which are dropped',
  'hole-dropped': 'had a hole of fewer than three corners, which is dropped',
};

/** Reports an outline that cannot be used, and says the same in words. @param thing what has the outline, with a capital */
export function reportFault(
  feature: RawFeature,
  code: string,
  { fault, areaChange }: RepairedPolygon,
  findings: FindingList,
  thing = 'Parcel',
): string {
  const text = FAULT_TEXT[fault ?? 'zero-area'];
  const change =
    fault === 'self-intersection' && Number.isFinite(areaChange) ? ` A repair would change its area by ${percent(areaChange)}.` : '';
  const message = `${thing} ${shown(code)}: ${text.message}${change}`;
  findings.error({
    code: fault ?? 'zero-area',
    message,
    file: feature.file,
    row: feature.row,
    value: shown(code),
    limit: text.limit,
    advice: text.advice,
  });
  return message;
}

/** Reports an outline that crossed itself and was repaired; null when it did not. */
export function reportCrossing(
  feature: RawFeature,
  code: string,
  { crossingRepaired, areaChange }: RepairedPolygon,
  findings: FindingList,
  thing = 'Parcel',
): string | null {
  if (!crossingRepaired) return null;
  const message = `${thing} ${shown(code)}: the outline crossed itself and is repaired; its area changes by ${percent(areaChange)}.`;
  findings.warn({
    code: 'self-intersection-repaired',
    message,
    file: feature.file,
    row: feature.row,
    value: shown(code),
    limit: `area change of ${AREA_CHANGE_LIMIT * 100} % at most`,
    advice: 'Look at it on the map.',
  });
  return message;
}

function percent(change: number): string {
  if (change > 10) return 'more than tenfold';
  return `${change >= 0 ? '+' : '−'}${Math.abs(change * 100).toPrecision(2)} %`;
}
