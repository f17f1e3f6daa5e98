'use client';

import { useRef } from 'react';
import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import styles from './import.module.css';
import { kindName } from './import-kinds.ts';
import type { ImportAct } from './use-import.ts';

interface ImportActionsProps {
  readonly now: ImportAnswer;
  /** false when nothing in the files is usable */
  readonly mayApply: boolean;
  readonly act: (name: ImportAct) => Promise<void>;
  readonly reread: () => Promise<void>;
  readonly busy: boolean;
}

/** What can be done with an import in its present state. */
export function ImportActions({ now, mayApply, act, reread, busy }: ImportActionsProps) {
  const { state } = now;
  const name = kindName(now.kind).toLowerCase();
  return (
    <>
      {state === 'failed' ? (
        <button type="button" className="button" disabled={busy} onClick={reread}>
          Read again
        </button>
      ) : null}
      {state === 'reading' || state === 'ready' || state === 'failed' ? (
        <Ask
          verb="Cancel"
          title="Cancel this import?"
          busy={busy}
          onYes={() => act('cancel')}
          yes="Cancel the import"
          no="Keep it"
          className="button"
        >
          <p>Nothing has been changed, and nothing will be. The files would have to be uploaded again.</p>
        </Ask>
      ) : null}
      {state === 'ready' && mayApply ? (
        <Ask
          verb="Apply"
          title={`Apply ${name}?`}
          busy={busy}
          onYes={() => act('apply')}
          yes="Apply"
          no="Not yet"
          className="button primary"
        >
          <ApplyWords now={now} />
        </Ask>
      ) : null}
      {state === 'applied' ? (
        <Ask
          verb="Undo"
          title={`Undo ${name}?`}
          busy={busy}
          onYes={() => act('undo')}
          yes="Undo the import"
          no="Leave it"
          className="button danger"
        >
          <p>
            Everything this import changed is put back as it was before. Imports applied after it are not touched; if one of them changed
            the same things, this is refused.
          </p>
        </Ask>
      ) : null}
    </>
  );
}

function ApplyWords({ now }: { now: ImportAnswer }) {
  const { error } = now.finding_counts;
  return (
    <>
      <p>All of it is written at once, or none. It can be undone.</p>
      {error > 0 ? (
        <p>
          {error} {error === 1 ? 'error was' : 'errors were'} found: rows at fault are left out.
        </p>
      ) : null}
      {now.options.replace === true ? <p>Parcels that these files do not have are removed, with their plantings.</p> : null}
      {now.options.recompute === false ? <p>The seasons are not computed anew.</p> : <p>Seasons that rest on it are computed anew.</p>}
    </>
  );
}

interface AskProps {
  readonly verb: string;
  readonly title: string;
  readonly yes: string;
  readonly no: string;
  readonly busy: boolean;
  readonly className: string;
  readonly onYes: () => void;
  readonly children: React.ReactNode;
}

/** A button that asks first, in a native dialog. */
function Ask({ verb, title, yes, no, busy, className, onYes, children }: AskProps) {
  const dialog = useRef<HTMLDialogElement>(null);
  return (
    <>
      <button type="button" className={className} disabled={busy} onClick={() => dialog.current?.showModal()}>
        {verb}
      </button>
      <dialog ref={dialog} className={styles.ask} aria-label={title}>
        <div>
          <h2>{title}</h2>
          {children}
          <div className="row">
            <button
              type="button"
              className={className === 'button' ? 'button danger' : className}
              onClick={() => {
                dialog.current?.close();
                onYes();
              }}
            >
              {yes}
            </button>
            <button type="button" className="button" onClick={() => dialog.current?.close()}>
              {no}
            </button>
          </div>
        </div>
      </dialog>
    </>
  );
}
