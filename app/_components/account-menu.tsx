'use client';

import Link from 'next/link';
import { type ReactNode, useEffect, useRef, useState } from 'react';

/** Closes a details element on Escape or on a press outside it. */
function useLightDismiss(): React.RefObject<HTMLDetailsElement | null> {
  const details = useRef<HTMLDetailsElement>(null);
  useEffect(() => {
    const close = (event: Event) => {
      const element = details.current;
      if (!element?.open) return;
      if (event instanceof KeyboardEvent ? event.key === 'Escape' : !element.contains(event.target as Node)) element.open = false;
    };
    document.addEventListener('pointerdown', close);
    document.addEventListener('keydown', close);
    return () => {
      document.removeEventListener('pointerdown', close);
      document.removeEventListener('keydown', close);
    };
  }, []);
  return details;
}

async function signOut(): Promise<string | null> {
  const response = await fetch('/api/v1/sign-out', { method: 'POST' });
  if (!response.ok) return `Signing out failed (${response.status}). Try again.`;
  location.assign('/sign-in');
  return null;
}

/** Name, role, preferences and the way out. */
export function AccountMenu(props: { name: string; role: string; email: string | null; children: ReactNode }) {
  const details = useLightDismiss();
  const [fault, setFault] = useState<string | null>(null);
  return (
    <details className="menu no-print" ref={details}>
      <summary className="account-name">
        <span>{props.name}</span> <span className="muted">{props.role}</span>
      </summary>
      <div className="menu-sheet">
        {props.email ? <p className="small muted">{props.email}</p> : null}
        {props.children}
        <div className="spread">
          <Link href="/settings">Settings</Link>
          <button type="button" className="button" onClick={async () => setFault(await signOut())}>
            Sign out
          </button>
        </div>
        {fault ? (
          <p className="fault" role="alert">
            {fault}
          </p>
        ) : null}
      </div>
    </details>
  );
}
