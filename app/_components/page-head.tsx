import type { ReactNode } from 'react';
import { Go } from './go.tsx';

interface PageHeadProps {
  readonly title: ReactNode;
  readonly lead?: ReactNode;
  /** pages above this one: address and name */
  readonly crumbs?: readonly (readonly [string, string])[];
  readonly children?: ReactNode;
}

/** Title of a screen, one line on what it shows, and what can be done with it. */
export function PageHead({ title, lead, crumbs, children }: PageHeadProps) {
  return (
    <div className="stack">
      {crumbs ? (
        <nav className="crumbs" aria-label="Above this page">
          <ol>
            {crumbs.map(([href, name]) => (
              <li key={href}>
                <Go href={href}>{name}</Go>
              </li>
            ))}
          </ol>
        </nav>
      ) : null}
      <header className="page-head">
        <h1>{title}</h1>
        {children ? <div className="actions">{children}</div> : null}
      </header>
      {lead ? <p className="lede">{lead}</p> : null}
    </div>
  );
}

/** A part of a screen with its own heading, and an anchor to link to. */
export function Section({
  id,
  title,
  note,
  actions,
  children,
}: {
  id?: string;
  title: string;
  note?: ReactNode;
  actions?: ReactNode;
  children: ReactNode;
}) {
  return (
    <section className="panel" id={id} aria-label={title}>
      <div className="panel-head">
        <h2>{title}</h2>
        {actions ? <div className="actions">{actions}</div> : null}
      </div>
      {note ? <p className="small muted">{note}</p> : null}
      {children}
    </section>
  );
}
