/** Values of a library crop as the answers carry them: names of the crop's own definition, null where there is none. */
import type { StageCoefficients, StageLengths } from '../../lib/crop/curve.ts';
import type { CropAnswer } from '../../lib/http/contract/rest.ts';
import { calendarWords } from '../../lib/season/rule-words.ts';
import type { CropCalendar } from '../../lib/season/types.ts';

/** A number of a crop's definition; NaN when it has none. */
export function numberOf(crop: CropAnswer, key: string): number {
  const value = crop.definition[key];
  return typeof value === 'number' ? value : Number.NaN;
}

export function coefficientsOf(crop: CropAnswer): StageCoefficients {
  return { initial: numberOf(crop, 'basalInitial'), mid: numberOf(crop, 'basalMid'), end: numberOf(crop, 'basalEnd') };
}

export interface CalendarValues {
  readonly lengths: StageLengths;
  /** stages after a cut, for a crop that is cut */
  readonly later: StageLengths | null;
  /** by days, by thermal time, or how else it follows the weather */
  readonly kind: string;
  /** what the weather decides, a sentence each */
  readonly words: readonly string[];
  /** coefficients of single cycles, from the first */
  readonly cycles: readonly StageCoefficients[];
}

/** Stage lengths of a calendar [d], and what of it follows the weather. */
export function calendarOf(calendar: CropAnswer['calendars'][number]): CalendarValues {
  const definition = calendar.definition as Partial<CropCalendar>;
  const cycles = definition.cycles ?? [];
  return {
    lengths: lengthsOf(calendar.definition),
    later: definition.laterCycle ? lengthsOf(definition.laterCycle as unknown as Record<string, unknown>) : null,
    kind: kindOf(definition),
    words: calendarWords(definition as CropCalendar),
    cycles: cycles.map(({ basalInitial, basalMid, basalEnd }) => ({ initial: basalInitial, mid: basalMid, end: basalEnd })),
  };
}

function kindOf({ thermal, laterThermal, start, killingFrost, laterCycle }: Partial<CropCalendar>): string {
  return [
    thermal || laterThermal ? 'thermal time' : 'days',
    ...(start ? ['start by weather'] : []),
    ...(killingFrost ? ['ends with frost'] : []),
    ...(laterCycle ? ['cut in cycles'] : []),
  ].join(', ');
}

/** A curve to draw: a cycle of a calendar with the coefficients it has. */
export interface CalendarCurve {
  readonly id: string;
  readonly title: string;
  readonly lengths: StageLengths;
  readonly coefficients: StageCoefficients;
}

/** Curves of a calendar: the first cycle, and the one after a cut where it differs. Drawn in days, also where thermal time decides. */
export function curvesOf(calendar: CropAnswer['calendars'][number], coefficients: StageCoefficients): CalendarCurve[] {
  const { lengths, later, cycles } = calendarOf(calendar);
  const id = `curve-${calendar.code}`;
  const first = { id, title: calendar.name, lengths, coefficients: cycles[0] ?? coefficients };
  if (!later) return [first];
  return [
    first,
    { id: `${id}-later`, title: `${calendar.name}, after a cut`, lengths: later, coefficients: cycles[1] ?? first.coefficients },
  ];
}

function lengthsOf(definition: Readonly<Record<string, unknown>>): StageLengths {
  const days = (key: string) => Number(definition[key] ?? 0);
  return { initial: days('initial'), development: days('development'), mid: days('mid'), late: days('late') };
}
