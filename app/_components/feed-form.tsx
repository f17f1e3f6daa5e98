'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import type { FeedAnswer } from '../../lib/http/contract/feeds.ts';
import { ConfirmButton, DialogButton } from './dialog.tsx';
import { messageOf, sendJson } from './problem-text.ts';

const RHYTHMS = [
  { value: 'day', name: 'every day at' },
  { value: '6', name: 'every 6 hours' },
  { value: '3', name: 'every 3 hours' },
  { value: '1', name: 'every hour' },
] as const;

/** Cron of a rhythm and a time of day. */
function scheduleOf(rhythm: string, time: string): string {
  const [hour, minute] = time.split(':').map(Number);
  if (rhythm === 'day') return `${minute} ${hour} * * *`;
  return rhythm === '1' ? `${minute} * * * *` : `${minute} */${rhythm} * * *`;
}

/** Rhythm and time of day of a schedule that this form can say; null for any other. */
function rhythmOf(schedule: string): { rhythm: string; time: string } | null {
  const match = /^(\d+) (\*|\d+|\*\/[36]) \* \* \*$/.exec(schedule);
  if (!match) return null;
  const [, minute, hour] = match;
  const rhythm = hour === '*' ? '1' : hour.startsWith('*/') ? hour.slice(2) : 'day';
  const at = rhythm === 'day' ? hour : '0';
  return { rhythm, time: `${at.padStart(2, '0')}:${minute.padStart(2, '0')}` };
}

export function NewFeed() {
  return (
    <DialogButton label="New feed" title="New feed" className="button primary">
      {(close) => <FeedForm close={close} />}
    </DialogButton>
  );
}

/** Makes a feed, or changes one. */
function FeedForm({ feed, close }: { feed?: FeedAnswer; close: () => void }) {
  const router = useRouter();
  const [fault, setFault] = useState<string | null>(null);
  const [from, setFrom] = useState<string>(feed?.from ?? 'url');
  const said = feed ? rhythmOf(feed.schedule) : { rhythm: 'day', time: '06:30' };
  async function save(form: FormData) {
    setFault(null);
    const text = (name: string) => String(form.get(name) ?? '').trim();
    const request = {
      name: text('name'),
      template: text('template'),
      schedule: said ? scheduleOf(text('rhythm'), text('time')) : text('schedule'),
      look_back_days: Number(form.get('look_back_days')),
      apply_automatically: form.has('apply_automatically'),
    };
    try {
      if (feed) await sendJson('PATCH', `/api/v1/weather/feeds/${feed.id}`, request);
      else {
        const options = { ...(text('site') ? { site: text('site') } : {}), ...(text('role') === 'forecast' ? { role: 'forecast' } : {}) };
        await sendJson('POST', '/api/v1/weather/feeds', { ...request, from, kind: text('kind'), options });
      }
      close();
      router.refresh();
    } catch (error) {
      setFault(messageOf(error));
    }
  }
  return (
    <form
      className="stack"
      onSubmit={(event) => {
        event.preventDefault();
        save(new FormData(event.currentTarget));
      }}
    >
      <label className="field">
        <span className="label">Name, also of the weather source it fills</span>
        <input name="name" required maxLength={120} defaultValue={feed?.name} />
      </label>
      {feed ? null : <Origin from={from} onChange={setFrom} />}
      <label className="field">
        <span className="label">{from === 'url' ? 'Address' : 'File name in the district’s folder'}</span>
        <input
          name="template"
          required
          maxLength={1000}
          defaultValue={feed?.template}
          placeholder={from === 'url' ? 'https://weather.example/daily_{YYYY}{MM}{DD}.csv' : 'daily_{YYYY}{MM}{DD}*.csv'}
        />
        <span className="hint">
          {'{YYYY} {MM} {DD} {DDD}'} stand for year, month, day and day of the year{from === 'folder' ? '; a star for any letters' : ''}.
        </span>
      </label>
      <Rhythm said={said} schedule={feed?.schedule} />
      <label className="field">
        <span className="label">Days back that are asked for again</span>
        <input name="look_back_days" type="number" required min={0} max={60} defaultValue={feed?.look_back_days ?? 3} />
        <span className="hint">Late days and corrections of past days come in this way.</span>
      </label>
      <label className="check">
        <input type="checkbox" name="apply_automatically" defaultChecked={feed?.apply_automatically ?? true} />
        Apply files without errors at once; others wait for a person
      </label>
      {fault ? (
        <p className="fault" role="alert">
          {fault}
        </p>
      ) : null}
      <div className="row">
        <button type="submit" className="button primary">
          {feed ? 'Save' : 'Make the feed'}
        </button>
        <button type="button" className="button" onClick={close}>
          Cancel
        </button>
      </div>
    </form>
  );
}

function Origin({ from, onChange }: { from: string; onChange: (from: string) => void }) {
  return (
    <>
      <label className="field">
        <span className="label">Brings</span>
        <select name="kind" defaultValue="weather">
          <option value="weather">weather (tables or grids)</option>
          <option value="stations">stations</option>
        </select>
      </label>
      <label className="field">
        <span className="label">Its values are</span>
        <select name="role" defaultValue="observed">
          <option value="observed">observed</option>
          <option value="forecast">a forecast of days to come</option>
        </select>
        <span className="hint">A forecast stays apart from what was measured; the newest issue stands.</span>
      </label>
      <label className="field">
        <span className="label">From</span>
        <select name="from" value={from} onChange={(event) => onChange(event.target.value)}>
          <option value="url">a web address</option>
          <option value="folder">the district’s watched folder</option>
        </select>
      </label>
      <label className="field">
        <span className="label">Station of files that name none</span>
        <input name="site" maxLength={120} />
      </label>
    </>
  );
}

function Rhythm({ said, schedule }: { said: { rhythm: string; time: string } | null; schedule?: string }) {
  if (!said) {
    return (
      <label className="field">
        <span className="label">Schedule: minute, hour, day of month, month, weekday</span>
        <input name="schedule" required maxLength={60} defaultValue={schedule} />
      </label>
    );
  }
  return (
    <div className="row">
      <label className="field">
        <span className="label">When</span>
        <select name="rhythm" defaultValue={said.rhythm}>
          {RHYTHMS.map((rhythm) => (
            <option key={rhythm.value} value={rhythm.value}>
              {rhythm.name}
            </option>
          ))}
        </select>
      </label>
      <label className="field">
        <span className="label">Time (for hours: minutes past)</span>
        <input name="time" type="time" required defaultValue={said.time} />
      </label>
    </div>
  );
}

/** What can be done with one feed. */
export function FeedActs({ feed, scope }: { feed: FeedAnswer; scope: 'read' | 'write' | 'administer' }) {
  const router = useRouter();
  const [told, setTold] = useState<string | null>(null);
  const path = `/api/v1/weather/feeds/${feed.id}`;
  const act = async (method: 'POST' | 'PATCH' | 'DELETE', address: string, body?: unknown, says?: string) => {
    try {
      await sendJson(method, address, body);
      setTold(says ?? null);
      router.refresh();
    } catch (error) {
      setTold(messageOf(error));
    }
  };
  if (scope === 'read') return '–';
  return (
    <div className="row">
      <button
        type="button"
        className="button"
        onClick={() => act('POST', `${path}/fetch`, undefined, 'Asked for; look again in a moment.')}
      >
        Fetch now
      </button>
      {scope === 'administer' ? (
        <>
          <DialogButton label="Change" title={`Feed “${feed.name}”`}>
            {(close) => <FeedForm feed={feed} close={close} />}
          </DialogButton>
          <button type="button" className="button" onClick={() => act('PATCH', path, { enabled: !feed.enabled })}>
            {feed.enabled ? 'Rest' : 'Resume'}
          </button>
          <ConfirmButton
            label="Remove"
            title={`Remove the feed “${feed.name}”?`}
            says="It is not asked any more. What it brought stays in the district."
            act="Remove"
            onAct={() => act('DELETE', path)}
          />
        </>
      ) : null}
      {told ? (
        <span className="small" role="status">
          {told}
        </span>
      ) : null}
    </div>
  );
}
