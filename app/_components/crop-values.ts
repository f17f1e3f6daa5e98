/** Values of a library crop as the answers carry them: names of the crop's own definition, null where there is none. */
import type { StageCoefficients, StageLengths } from '../../lib/crop/curve.ts';
import type { CropAnswer } from '../../lib/http/contract/rest.ts';

/** A number of a crop's definition; NaN when it has none. */
export function numberOf(crop: CropAnswer, key: string): number {
  const value = crop.definition[key];
  return typeof value === 'number' ? value : Number.NaN;
}

export function coefficientsOf(crop: CropAnswer): StageCoefficients {
  return { initial: numberOf(crop, 'basalInitial'), mid: numberOf(crop, 'basalMid'), end: numberOf(crop, 'basalEnd') };
}

export interface CalendarLengths {
  readonly lengths: StageLengths;
  /** stages after a cut, for a crop that is cut */
  readonly later: StageLengths | null;
}

/** Stage lengths of a calendar [d]. */
export function calendarOf(calendar: CropAnswer['calendars'][number]): CalendarLengths {
  const later = calendar.definition.laterCycle;
  return {
    lengths: lengthsOf(calendar.definition),
    later: typeof later === 'object' && later !== null ? lengthsOf(later as Record<string, unknown>) : null,
  };
}

function lengthsOf(definition: Readonly<Record<string, unknown>>): StageLengths {
  const days = (key: string) => Number(definition[key] ?? 0);
  return { initial: days('initial'), development: days('development'), mid: days('mid'), late: days('late') };
}
