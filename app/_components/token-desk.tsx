'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { ConfirmButton } from './dialog.tsx';
import { messageOf, sendJson } from './problem-text.ts';

interface Made {
  readonly name: string;
  readonly token?: string;
}

/** Makes a token and shows it this once. */
export function NewToken() {
  const router = useRouter();
  const [made, setMade] = useState<Made | null>(null);
  const [fault, setFault] = useState<string | null>(null);
  async function make(form: FormData) {
    setFault(null);
    const request = { name: String(form.get('name')).trim(), scope: form.get('scope'), expires_in_days: Number(form.get('days')) };
    try {
      setMade(await sendJson<Made>('POST', '/api/v1/tokens', request));
      router.refresh();
    } catch (error) {
      setFault(messageOf(error));
    }
  }
  return (
    <>
      {made?.token ? <ShownOnce name={made.name} token={made.token} /> : null}
      <form
        className="toolbar no-print"
        onSubmit={(event) => {
          event.preventDefault();
          make(new FormData(event.currentTarget));
          event.currentTarget.reset();
        }}
      >
        <label className="field">
          <span className="label">Name of the new token</span>
          <input name="name" required maxLength={80} placeholder="nightly export" />
        </label>
        <label className="field">
          <span className="label">May</span>
          <select name="scope" defaultValue="read">
            <option value="read">read</option>
            <option value="write">read, import and run</option>
            <option value="administer">administer</option>
          </select>
        </label>
        <label className="field">
          <span className="label">Days until it expires</span>
          <input name="days" type="number" required min={1} max={3650} defaultValue={365} />
        </label>
        <button type="submit" className="button">
          Make a token
        </button>
      </form>
      {fault ? (
        <p className="fault" role="alert">
          {fault}
        </p>
      ) : null}
    </>
  );
}

function ShownOnce({ name, token }: { name: string; token: string }) {
  const [copied, setCopied] = useState(false);
  return (
    <div className="notice good" role="status">
      <p>Token “{name}”. Copy it now: it cannot be shown again.</p>
      <p className="row">
        <code>{token}</code>
        <button type="button" className="button" onClick={() => navigator.clipboard.writeText(token).then(() => setCopied(true))}>
          {copied ? 'Copied' : 'Copy'}
        </button>
      </p>
    </div>
  );
}

/** Withdraws a token after asking once more. */
export function WithdrawToken({ id, name }: { id: string; name: string }) {
  const router = useRouter();
  const withdraw = async () => {
    await sendJson('DELETE', `/api/v1/tokens/${id}`);
    router.refresh();
  };
  return (
    <ConfirmButton
      label="Withdraw"
      title={`Withdraw the token “${name}”?`}
      says="Scripts that send it are refused from now on. A withdrawn token cannot be brought back."
      act="Withdraw"
      onAct={withdraw}
    />
  );
}
