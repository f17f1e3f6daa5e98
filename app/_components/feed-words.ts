/** Feeds in a reader's words. */

const OUTCOMES: Readonly<Record<string, string>> = {
  new: 'new',
  changed: 'changed',
  unchanged: 'unchanged',
  absent: 'not there yet',
  failed: 'no answer',
  refused: 'refused',
};

export function outcomeWords(outcome: string | null): string {
  return outcome === null ? '–' : (OUTCOMES[outcome] ?? outcome);
}

const IMPORTS: Readonly<Record<string, string>> = {
  reading: 'being read',
  ready: 'waits for a person',
  applying: 'being applied',
  applied: 'applied',
  failed: 'failed',
};

/** What has become of the import that a feed made. */
export function importWords(state: string | null): string {
  return state === null ? 'open' : (IMPORTS[state] ?? state);
}

/** @example scheduleWords('30 6 * * *') // 'every day at 06:30' */
export function scheduleWords(schedule: string): string {
  const [minute, hour, ...rest] = schedule.trim().split(/\s+/);
  if (rest.join(' ') !== '* * *' || !/^\d+$/.test(minute)) return schedule;
  const past = minute.padStart(2, '0');
  if (/^\d+$/.test(hour)) return `every day at ${hour.padStart(2, '0')}:${past}`;
  if (hour === '*') return `every hour at ${past} past`;
  const step = /^\*\/(\d+)$/.exec(hour)?.[1];
  return step ? `every ${step} hours at ${past} past` : schedule;
}
