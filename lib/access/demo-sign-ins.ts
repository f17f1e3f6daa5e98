/** The sign-ins of the invented demo district: printed at start, and shown on the sign-in page while the service listens to this machine only. */
import { createHmac } from 'node:crypto';
import { environment } from './environment.ts';

type DemoRole = 'manager' | 'operator' | 'regulator' | 'grower';

export interface DemoSignIn {
  readonly role: DemoRole;
  readonly name: string;
  readonly email: string;
  readonly password: string;
}

/** Invented people. `.example` is a name reserved for examples (RFC 2606). */
const PEOPLE: readonly { role: DemoRole; name: string; email: string }[] = [
  { role: 'manager', name: 'Ines Calloway', email: 'manager@arrowmere.example' },
  { role: 'operator', name: 'Tomas Reuter', email: 'operator@arrowmere.example' },
  { role: 'regulator', name: 'Adaeze Brandt', email: 'regulator@arrowmere.example' },
  { role: 'grower', name: 'Luis Farrow', email: 'grower@arrowmere.example' },
];

function derived(label: string, length: number): string {
  return createHmac('sha256', environment().TILLWATER_SECRET ?? '')
    .update(label)
    .digest('base64url')
    .slice(0, length);
}

/** Every demo sign-in. The password is the one configured, else one derived from the service's secret. */
export function allDemoSignIns(): DemoSignIn[] {
  const password = environment().TILLWATER_DEMO_PASSWORD ?? `demo-${derived('demo password', 10)}`;
  return PEOPLE.map((person) => ({ ...person, password }));
}

/** The demo's write token: the one configured, else one derived from the service's secret. */
export function demoToken(): string {
  return environment().TILLWATER_DEMO_TOKEN ?? `tw_${derived('demo token', 43)}`;
}

/** What the sign-in page may show: nothing unless the launcher said that the demo is there and only this machine can reach it. */
export function demoSignIns(): DemoSignIn[] {
  return environment().TILLWATER_DEMO_SHOWN ? allDemoSignIns() : [];
}
