'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { ConfirmButton, DialogButton } from './dialog.tsx';
import { ROLES, type RoleName } from './district-words.ts';
import { Field } from './field.tsx';
import { faultsOf, formMessageOf, sendJson } from './problem-text.ts';

export interface Member {
  readonly user_id: string;
  readonly name: string;
  readonly email: string;
  readonly role: RoleName;
  readonly parcels: readonly string[];
}

type Faults = Readonly<Record<string, string>>;

/** Codes as they are written one after the other. @example codesIn('0001, 0002') // ['0001', '0002'] */
export function codesIn(text: string): string[] {
  return [...new Set(text.split(/[\s,;]+/).filter(Boolean))];
}

/** What the form asks for, as the API names it. */
function requestOf(form: FormData): object {
  const text = (name: string) => String(form.get(name) ?? '').trim();
  return {
    email: text('email'),
    role: text('role'),
    ...(text('role') === 'grower' ? { parcels: codesIn(text('parcels')) } : {}),
    ...(text('name') ? { name: text('name') } : {}),
    ...(text('password') ? { password: String(form.get('password')) } : {}),
  };
}

export function AddMember() {
  return (
    <DialogButton label="Add a member" title="Add a member">
      {(close) => <MemberForm member={null} close={close} />}
    </DialogButton>
  );
}

export function ChangeMember({ member }: { member: Member }) {
  return (
    <DialogButton label="Change" title={`What ${member.name} may do`} className="button quiet">
      {(close) => <MemberForm member={member} close={close} />}
    </DialogButton>
  );
}

export function RemoveMember({ member, self, district }: { member: Member; self: boolean; district: string }) {
  const router = useRouter();
  const remove = async () => {
    await sendJson('DELETE', `/api/v1/members/${encodeURIComponent(member.user_id)}`);
    if (self) location.assign('/');
    else router.refresh();
  };
  return (
    <ConfirmButton
      label="Remove"
      title={`Remove ${member.name} from ${district}?`}
      says={
        self
          ? 'This is you: you lose sight of the district at once, and only another manager can add you again.'
          : `${member.email} loses sight of the district at once. What ${member.name} has done in it stays, and a manager can add the person again.`
      }
      act="Remove"
      onAct={remove}
    />
  );
}

function MemberForm({ member, close }: { member: Member | null; close: () => void }) {
  const router = useRouter();
  const [role, setRole] = useState<RoleName>(member?.role ?? 'operator');
  const [fault, setFault] = useState<string | null>(null);
  const [faults, setFaults] = useState<Faults>({});
  async function save(form: FormData) {
    setFault(null);
    setFaults({});
    try {
      await sendJson('POST', '/api/v1/members', requestOf(form));
      router.refresh();
      close();
    } catch (error) {
      setFaults(faultsOf(error));
      setFault(formMessageOf(error));
    }
  }
  return (
    <form
      className="form"
      onSubmit={(event) => {
        event.preventDefault();
        save(new FormData(event.currentTarget));
      }}
    >
      {member ? <input type="hidden" name="email" value={member.email} /> : <PersonFields faults={faults} />}
      <Field name="Role" fault={faults.role}>
        {(control) => (
          <select {...control} name="role" value={role} onChange={(event) => setRole(event.target.value as RoleName)}>
            {ROLES.map((one) => (
              <option key={one.role} value={one.role}>
                {one.name}: {one.may}
              </option>
            ))}
          </select>
        )}
      </Field>
      {role === 'grower' ? <ParcelsField member={member} fault={faults.parcels} /> : null}
      {fault ? (
        <p className="notice bad" role="alert">
          {fault}
        </p>
      ) : null}
      <div className="row">
        <button type="submit" className="button primary">
          {member ? 'Save' : 'Add'}
        </button>
        <button type="button" className="button" onClick={close}>
          Cancel
        </button>
      </div>
    </form>
  );
}

function PersonFields({ faults }: { faults: Faults }) {
  return (
    <>
      <Field name="E-mail address" fault={faults.email}>
        {(control) => <input {...control} name="email" type="email" required maxLength={254} autoComplete="off" />}
      </Field>
      <Field name="Name" help="May stay empty for somebody who signs in here already." fault={faults.name}>
        {(control) => <input {...control} name="name" maxLength={120} autoComplete="off" />}
      </Field>
      <Field
        name="First password"
        help="For somebody new, at least 10 characters. Somebody who signs in here already keeps the own one."
        fault={faults.password}
      >
        {(control) => <input {...control} name="password" type="password" minLength={10} maxLength={200} autoComplete="new-password" />}
      </Field>
    </>
  );
}

function ParcelsField({ member, fault }: { member: Member | null; fault?: string }) {
  return (
    <Field name="Parcels" help="Codes, divided by commas or spaces. A grower sees these and no others." fault={fault}>
      {(control) => <textarea {...control} name="parcels" rows={3} spellCheck={false} defaultValue={member?.parcels.join(', ')} />}
    </Field>
  );
}
