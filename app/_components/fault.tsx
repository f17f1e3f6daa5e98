'use client';

/** What a page's error boundary is given. */
export interface FaultProps {
  readonly error: Error & { digest?: string };
  readonly reset: () => void;
}

/** A failure of ours: says so, gives the id that the log has, and offers to try again. */
export function Fault({ error, reset }: FaultProps) {
  return (
    <>
      <h1>This page could not be drawn</h1>
      <p className="notice bad" role="alert">
        The fault is on our side. Try again; if it stays, give the district’s manager this number: <code>{error.digest ?? 'none'}</code>
      </p>
      <p className="row">
        <button type="button" className="button primary" onClick={reset}>
          Try again
        </button>
        {/* a full load, because the fault may be in what the browser holds */}
        <a className="button" href="/sign-in">
          Sign in again
        </a>
      </p>
    </>
  );
}
