/** Words for the state of a run; those for its settings are beside them. */
export { SETTINGS } from './run-setting-words.ts';
export { settingText } from './run-value-words.ts';

export const STATES = { queued: 'waiting', running: 'running', done: 'done', failed: 'failed', cancelled: 'called off' } as const;
export type RunStateName = keyof typeof STATES;

export function isOver(state: string): boolean {
  return state === 'done' || state === 'failed' || state === 'cancelled';
}
