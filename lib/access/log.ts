/** Structured logs: one JSON object a line on stdout, secrets removed. */
import { type Logger, pino } from 'pino';
import { environment } from './environment.ts';

const held = globalThis as unknown as { tillwaterLog?: Logger };

export function log(): Logger {
  held.tillwaterLog ??= pino({
    level: environment().LOG_LEVEL,
    base: { pid: process.pid },
    redact: ['req.headers.authorization', 'req.headers.cookie', 'password', 'token', '*.password', '*.token'],
  });
  return held.tillwaterLog;
}
