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

/** No finished run stands for the season: most screens have nothing to show until there is one. */
export function NoRun() {
  return (
    <EmptyState title="No season has been computed yet">
      <ol>
        <li>
          <Go href="/imports">Bring in</Go> weather, parcels, canals and plantings.
        </li>
        <li>
          <Go href="/runs">Start a run</Go> of the season. Its figures appear here as soon as it is done.
        </li>
      </ol>
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

/** The product's own cautions, in its own words. */
export function Cautions({ which }: { which: readonly CautionName[] }) {
  return (
    <div className="stack">
      {cautionTexts(which).map((text) => (
        <Caution key={text}>{text}</Caution>
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
