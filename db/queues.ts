/**
 * The job queues. A job whose process died is tried again when its lease (`expireInSeconds`) has run out; work is cut into pieces of at
 * most half a minute, and progress and cancel live on our own rows. A job that has failed for the last time goes to `given-up`, whose
 * handler marks the run or import as failed, so that nothing hangs.
 */
const PIECE = { policy: 'standard', expireInSeconds: 120, retryLimit: 3, retryDelay: 1, deadLetter: 'given-up' } as const;

export const QUEUES = [
  { name: 'given-up', policy: 'standard', expireInSeconds: 60, retryLimit: 5, retryDelay: 5 },
  { name: 'import-read', ...PIECE },
  { name: 'import-apply', ...PIECE },
  { name: 'run-start', ...PIECE },
  { name: 'run-slice', ...PIECE },
  { name: 'run-finish', ...PIECE },
] as const;

export type QueueName = (typeof QUEUES)[number]['name'];
