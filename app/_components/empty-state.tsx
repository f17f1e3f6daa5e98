import type { ReactNode } from 'react';
import { type Caution as CautionName, cautionTexts } from '../../lib/report/cautions.ts';
import { Go } from './go.tsx';

/** Nothing to show yet, and what to do about it. */
export function EmptyState({ title, children }: { title: string; children: ReactNode }) {
  return (
    <section className="empty" aria-label={title}>
      <h2>{title}</h2>
      <div>{children}</div>
    </section>
  );
}

/** No finished run is in use for the season: most screens have nothing to show until there is one. */
export function NoRun() {
  return (
    <EmptyState title="No season has been computed yet">
      <p>
        The figures appear here as soon as a run of the season is done. <Go href="/">See what is there and what is still to do</Go>.
      </p>
    </EmptyState>
  );
}

/** What the figures are for and what they do not replace. */
export function Caution({ children }: { children: ReactNode }) {
  return (
    <p className="notice" role="note">
      {children}
    </p>
  );
}

/** The product's own cautions, in its own words, in one block; what the page has to add stands first. */
export function Cautions({ which, children }: { which: readonly CautionName[]; children?: ReactNode }) {
  return (
    <div className="notice cautions" role="note">
      {children ? <p>{children}</p> : null}
      {cautionTexts(which).map((text) => (
        <p key={text}>{text}</p>
      ))}
    </div>
  );
}

/** `NoRun` as a whole page. */
export function NoRunPage() {
  return (
    <div className="page">
      <NoRun />
    </div>
  );
}
