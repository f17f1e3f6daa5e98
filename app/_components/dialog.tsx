'use client';

import { type ReactNode, useId, useRef, useState } from 'react';
import { messageOf } from './problem-text.ts';

interface DialogButtonProps {
  /** on the button that opens it */
  readonly label: string;
  readonly title: string;
  readonly className?: string;
  /** drawn anew each time it opens */
  readonly children: (close: () => void) => ReactNode;
}

/** A button that opens a native dialog: Escape closes it, and focus returns to the button. */
export function DialogButton({ label, title, className = 'button', children }: DialogButtonProps) {
  const dialog = useRef<HTMLDialogElement>(null);
  const [open, setOpen] = useState(false);
  const id = useId();
  const show = () => {
    setOpen(true);
    dialog.current?.showModal();
  };
  return (
    <>
      <button type="button" className={className} onClick={show}>
        {label}
      </button>
      <dialog ref={dialog} aria-labelledby={id} onClose={() => setOpen(false)}>
        <div className="stack">
          <h2 id={id}>{title}</h2>
          {open ? children(() => dialog.current?.close()) : null}
        </div>
      </dialog>
    </>
  );
}

interface ConfirmButtonProps {
  readonly label: string;
  readonly title: string;
  /** what follows from it */
  readonly says: string;
  /** on the button that does it */
  readonly act: string;
  readonly onAct: () => Promise<void>;
}

/** Asks once more before something that cannot be taken back; a refusal is told where it was asked. */
export function ConfirmButton({ label, title, says, act, onAct }: ConfirmButtonProps) {
  return (
    <DialogButton label={label} title={title} className="button quiet">
      {(close) => <Confirmation says={says} act={act} onAct={onAct} close={close} />}
    </DialogButton>
  );
}

function Confirmation({ says, act, onAct, close }: Pick<ConfirmButtonProps, 'says' | 'act' | 'onAct'> & { close: () => void }) {
  const [fault, setFault] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  const go = async () => {
    setBusy(true);
    try {
      await onAct();
      close();
    } catch (error) {
      setFault(messageOf(error));
      setBusy(false);
    }
  };
  return (
    <>
      <p>{says}</p>
      {fault ? (
        <p className="notice bad" role="alert">
          {fault}
        </p>
      ) : null}
      <div className="row">
        <button type="button" className="button danger" disabled={busy} onClick={go}>
          {act}
        </button>
        <button type="button" className="button" onClick={close}>
          Leave it as it is
        </button>
      </div>
    </>
  );
}
