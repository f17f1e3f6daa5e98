/**
 * The steps of a quantity over all its files, in the order of time: which day each one is of, or from when to when it lasts.
 */
import type { DayNumber } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import type { Finding } from '../base/errors.ts';
import { SECONDS_PER_DAY } from '../base/units.ts';
import type { FindingList } from './finding-list.ts';
import type { TimeAxis } from './grid-time.ts';
import { instantOfWallClock, type ZoneOffset } from './grid-zone.ts';
import type { ImportOptions } from './reading.ts';

/** Steps from this length [s] are days, up to `LONGEST_DAY`. */
const SHORTEST_DAY = 20 * 3600;
const LONGEST_DAY = 30 * 3600;

export type Stamp = NonNullable<ImportOptions['stamp']>;

/** Consecutive steps of one file. */
export interface Run {
  readonly piece: number;
  readonly first: number;
  readonly count: number;
}

export interface Steps {
  readonly daily: boolean;
  /** length of a step [s] */
  readonly seconds: number;
  readonly stamp: Stamp | null;
  readonly runs: readonly Run[];
  /** by piece and step: the day of a daily step */
  readonly days: readonly Int32Array[];
  /** by piece and step: start and end of a shorter step, instants [s since 1970-01-01 UTC] */
  readonly from: readonly Float64Array[];
  readonly to: readonly Float64Array[];
}

/** What the placing of steps depends on beside their times. */
export interface StepQuestion {
  /** name of the field, for findings */
  readonly label: string;
  /** sums over time, as against states */
  readonly amount: boolean;
  /** the file says that a step is one moment */
  readonly moment: boolean;
  readonly options: ImportOptions;
  /** zone of stamps that the file does not place, null for UTC */
  readonly stampZone: ZoneOffset | null;
  /** codes of findings that have been told for another field of the import */
  readonly told: Set<string>;
}

/**
 * Places the steps of the pieces of one quantity.
 *
 * @returns null, with a finding, when the steps are no days and no parts of days
 */
export function placeSteps(pieces: readonly TimeAxis[], question: StepQuestion, findings: FindingList): Steps | null {
  const runs = timeOrder(pieces, question.label, findings);
  const seconds = stepLength(pieces, runs);
  if (Number.isNaN(seconds) && question.moment)
    return refuse(
      findings,
      'single-moment',
      question.label,
      'is of one moment, which makes no day',
      'Bring the fields of whole days, hour by hour or as daily values.',
    );
  if (seconds > LONGEST_DAY) {
    return refuse(
      findings,
      'step-too-long',
      question.label,
      `has a value every ${Number((seconds / SECONDS_PER_DAY).toFixed(1))} days`,
      'Bring daily or hourly values; longer means cannot be cut into days.',
    );
  }
  if (Number.isNaN(seconds) || seconds >= SHORTEST_DAY) {
    if (Number.isNaN(seconds)) {
      findings.warn({
        code: 'single-step',
        message: `"${question.label}" has one field only; it is taken as the value of its day.`,
        column: question.label,
      });
    }
    return {
      daily: true,
      seconds: SECONDS_PER_DAY,
      stamp: null,
      runs,
      days: pieces.map((piece) => dailyDays(piece, question, findings)),
      from: [],
      to: [],
    };
  }
  return partSteps(pieces, runs, seconds, question, findings);
}

function refuse(findings: FindingList, code: string, label: string, what: string, advice: string): null {
  findings.warn({ code, message: `"${label}" ${what}; it is left out.`, column: label, advice });
  return null;
}

/** Runs of steps in the order of time; a step that an earlier file has already given is left out. */
function timeOrder(pieces: readonly TimeAxis[], label: string, findings: FindingList): Run[] {
  const order = pieces.map((_, i) => i).sort((a, b) => firstStamp(pieces[a]) - firstStamp(pieces[b]));
  const runs: Run[] = [];
  let last = Number.NEGATIVE_INFINITY;
  let repeated = 0;
  for (const piece of order) {
    const { stamps } = pieces[piece];
    let first = 0;
    const close = (end: number) => {
      if (end > first) runs.push({ piece, first, count: end - first });
      first = end + 1;
    };
    for (let i = 0; i < stamps.length; i++) {
      if (stamps[i] > last) last = stamps[i];
      else {
        if (!Number.isNaN(stamps[i])) repeated++;
        close(i);
      }
    }
    close(stamps.length);
  }
  if (repeated > 0) {
    findings.warn({
      code: 'repeated-steps',
      message: `"${label}": ${counted(repeated, 'step is', 'steps are')} at or before a time that was already given; the first is kept.`,
      column: label,
      advice: 'Check that no file is there twice and that time runs forwards.',
    });
  }
  return runs;
}

function firstStamp({ stamps }: TimeAxis): number {
  const first = stamps.find((stamp) => !Number.isNaN(stamp));
  return first ?? Number.POSITIVE_INFINITY;
}

/** Middle distance between stamps, or length of the bounds of a single step; NaN when nothing says. */
function stepLength(pieces: readonly TimeAxis[], runs: readonly Run[]): number {
  const distances: number[] = [];
  let last = Number.NaN;
  for (const { piece, first, count } of runs) {
    for (let i = first; i < first + count && distances.length < 100_000; i++) {
      const stamp = pieces[piece].stamps[i];
      if (!Number.isNaN(last)) distances.push(stamp - last);
      last = stamp;
    }
  }
  const bounds = pieces[runs[0]?.piece ?? 0]?.bounds;
  const bounded = bounds ? bounds.to[runs[0]?.first ?? 0] - bounds.from[runs[0]?.first ?? 0] : Number.NaN;
  if (bounded >= SHORTEST_DAY && bounded <= LONGEST_DAY) return bounded;
  return distances.length === 0 ? bounded : distances.sort((a, b) => a - b)[distances.length >> 1];
}

/** The day that each daily step stands for: of the middle of its bounds, else of its stamp. */
function dailyDays({ stamps, bounds }: TimeAxis, { label, options }: StepQuestion, findings: FindingList): Int32Array {
  const shift = bounds ? 0 : options.stamp === 'start' ? SECONDS_PER_DAY / 2 : options.stamp === 'end' ? -SECONDS_PER_DAY / 2 : 0;
  const hour = (((stamps[0] ?? 0) % SECONDS_PER_DAY) + SECONDS_PER_DAY) % SECONDS_PER_DAY;
  if (!bounds && !options.stamp && hour !== 0 && hour !== SECONDS_PER_DAY / 2) {
    findings.note({
      code: 'day-from-stamp',
      message: `The days of "${label}" are stamped at ${Number((hour / 3600).toFixed(2))} h; each is taken as the day of its stamp.`,
      column: label,
      advice: 'Say in the options whether the stamp is the start or the end of the day.',
    });
  }
  return Int32Array.from(
    stamps,
    (stamp, i) => Math.floor((bounds ? (bounds.from[i] + bounds.to[i]) / 2 : stamp + shift) / SECONDS_PER_DAY) as DayNumber,
  );
}

function partSteps(
  pieces: readonly TimeAxis[],
  runs: readonly Run[],
  seconds: number,
  question: StepQuestion,
  findings: FindingList,
): Steps {
  const stamp = pieces.every((piece) => piece.bounds) ? null : stampOf(pieces, runs, seconds, question, findings);
  const before = stamp === 'end' ? seconds : stamp === 'centre' ? seconds / 2 : 0;
  const instant = (time: number, zoned: boolean) => (question.stampZone && !zoned ? instantOfWallClock(time, question.stampZone) : time);
  const from = pieces.map((piece) =>
    Float64Array.from(piece.stamps, (time, i) =>
      piece.bounds ? instant(piece.bounds.from[i], piece.zoned) : instant(time, piece.zoned) - before,
    ),
  );
  const to = pieces.map((piece, p) =>
    Float64Array.from(piece.stamps, (_, i) => (piece.bounds ? instant(piece.bounds.to[i], piece.zoned) : from[p][i] + seconds)),
  );
  return { daily: false, seconds, stamp, runs, days: [], from, to };
}

/** What a stamp names: the user's word, else what the stamps themselves show, else the custom, with a warning. */
function stampOf(pieces: readonly TimeAxis[], runs: readonly Run[], seconds: number, question: StepQuestion, findings: FindingList): Stamp {
  const { label, amount, options } = question;
  if (options.stamp) return options.stamp;
  const first = pieces[runs[0].piece].stamps[runs[0].first];
  const lastRun = runs[runs.length - 1];
  const last = pieces[lastRun.piece].stamps[lastRun.first + lastRun.count - 1];
  if (Math.abs((first % seconds) - seconds / 2) < 1) {
    tellOnce(question, findings, { severity: 'note', code: 'stamp-centred', message: 'The time stamps lie in the middle of their steps.' });
    return 'centre';
  }
  if (last - first >= SECONDS_PER_DAY - seconds && first % SECONDS_PER_DAY === seconds && last % SECONDS_PER_DAY === 0) {
    const message = 'The time stamps run from the end of the first step of a day to a midnight: they are read as ends of steps.';
    tellOnce(question, findings, { severity: 'note', code: 'stamp-at-end', message });
    return 'end';
  }
  const stamp = amount ? 'end' : 'start';
  tellOnce(question, findings, {
    severity: 'warning',
    code: 'stamp-assumed',
    message: `The file does not say whether a time stamp is the start or the end of its step; for ${amount ? 'sums and mean fluxes' : 'readings'} ("${label}") the ${stamp} is taken, as is usual.`,
    column: label,
    advice: 'Name it in the options if it is otherwise: an hour too early or too late moves values into the wrong day.',
  });
  return stamp;
}

function tellOnce({ told, amount }: StepQuestion, findings: FindingList, finding: Finding): void {
  const key = `${finding.code} ${finding.code === 'stamp-assumed' ? amount : ''}`;
  if (told.has(key)) return;
  told.add(key);
  findings.add(finding);
}
