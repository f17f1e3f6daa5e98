/** Counts and times of answers, in the Prometheus text format. */
import { Counter, collectDefaultMetrics, Histogram, Registry } from 'prom-client';

interface Meters {
  readonly registry: Registry;
  readonly seconds: Histogram<'method' | 'path'>;
  readonly answers: Counter<'method' | 'path' | 'status'>;
}
const held = globalThis as unknown as { tillwaterMeters?: Meters };

function meters(): Meters {
  if (held.tillwaterMeters) return held.tillwaterMeters;
  const registry = new Registry();
  collectDefaultMetrics({ register: registry });
  const registers = [registry];
  held.tillwaterMeters = {
    registry,
    seconds: new Histogram({
      name: 'tillwater_answer_seconds',
      help: 'Time until the response began, by call',
      labelNames: ['method', 'path'],
      buckets: [0.005, 0.02, 0.05, 0.1, 0.25, 0.5, 1, 2.5, 10],
      registers,
    }),
    answers: new Counter({
      name: 'tillwater_answers_total',
      help: 'Answers by call and status',
      labelNames: ['method', 'path', 'status'],
      registers,
    }),
  };
  return held.tillwaterMeters;
}

export function countAnswer(call: { method: string; path: string }, status: number, seconds: number): void {
  meters().seconds.observe({ method: call.method, path: call.path }, seconds);
  meters().answers.inc({ method: call.method, path: call.path, status: String(status) });
}

/** The registry of the process; other parts may hang their own meters on it. */
export function metricsRegistry(): Registry {
  return meters().registry;
}
