'use client';

import { type FormEvent, useState } from 'react';
import { refusalText } from './map/map-values.ts';

export interface DemoSignIn {
  readonly role: string;
  readonly email: string;
  readonly password: string;
}

/** Signs in; answers what went wrong, or null. */
async function signIn(email: string, password: string): Promise<string | null> {
  try {
    const response = await fetch('/api/v1/sign-in', {
      method: 'POST',
      headers: { 'content-type': 'application/json' },
      body: JSON.stringify({ email, password }),
    });
    if (response.ok) return null;
    if (response.status === 401) return 'E-mail address and password do not go together.';
    return refusalText(response);
  } catch {
    return 'The server did not answer. Check the connection and try again.';
  }
}

/** E-mail address and password; in a demo also its invented people, each one press away. */
export function SignInForm({ demo }: { demo: readonly DemoSignIn[] }) {
  const [email, setEmail] = useState('');
  const [password, setPassword] = useState('');
  const [busy, setBusy] = useState(false);
  const [fault, setFault] = useState<string | null>(null);
  const go = async (address: string, secret: string) => {
    setBusy(true);
    setFault(null);
    const refused = await signIn(address, secret);
    if (refused === null) return location.assign('/');
    setFault(refused);
    setBusy(false);
  };
  const submit = (event: FormEvent) => {
    event.preventDefault();
    void go(email, password);
  };
  return (
    <>
      <form className="form" method="post" onSubmit={submit}>
        <div className="field">
          <label htmlFor="email">E-mail address</label>
          <input
            id="email"
            name="email"
            type="email"
            required
            autoComplete="username"
            value={email}
            onChange={(event) => setEmail(event.target.value)}
          />
        </div>
        <div className="field">
          <label htmlFor="password">Password</label>
          <input
            id="password"
            name="password"
            type="password"
            required
            autoComplete="current-password"
            value={password}
            aria-describedby={fault ? 'sign-in-fault' : undefined}
            onChange={(event) => setPassword(event.target.value)}
          />
        </div>
        {fault ? (
          <p className="fault" id="sign-in-fault" role="alert">
            {fault}
          </p>
        ) : null}
        <button type="submit" className="button primary" disabled={busy}>
          {busy ? 'Signing in …' : 'Sign in'}
        </button>
      </form>
      {demo.length > 0 ? <DemoPeople demo={demo} busy={busy} onGo={go} /> : null}
    </>
  );
}

function DemoPeople({ demo, busy, onGo }: { demo: readonly DemoSignIn[]; busy: boolean; onGo: (email: string, password: string) => void }) {
  return (
    <section className="panel" aria-labelledby="demo-people">
      <h2 id="demo-people">An invented district to look around in</h2>
      <p className="small muted">Its land, canals, crops and people do not exist. Sign in as any of them:</p>
      <ul className="demo-people">
        {demo.map((person) => (
          <li key={person.email}>
            <button type="button" className="button" disabled={busy} onClick={() => onGo(person.email, person.password)}>
              {person.role}
            </button>
            <span className="small">
              {person.email}
              <br />
              <span className="muted">password</span> <code>{person.password}</code>
            </span>
          </li>
        ))}
      </ul>
    </section>
  );
}
