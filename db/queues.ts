/**
 * The job queues. A job whose process died is tried again when its lease (`expireInSeconds`) has run out; work is cut into pieces of at
 * most half a minute, and progress and cancel live on our own rows.
 */
const PIECE = { policy: 'standard', expireInSeconds: 120, retryLimit: 3, retryDelay: 1 } as const;

export const QUEUES = [
  { name: 'import-read', ...PIECE },
  { name: 'import-apply', ...PIECE },
  { name: 'run-start', ...PIECE },
  { name: 'run-slice', ...PIECE },
  { name: 'run-finish', ...PIECE },
  { name: 'run-band', ...PIECE },
  { name: 'feed-turn', ...PIECE },
  { name: 'weather-check', ...PIECE },
] as const;

export type QueueName = (typeof QUEUES)[number]['name'];
