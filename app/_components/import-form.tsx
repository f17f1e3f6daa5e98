'use client';

import { useRouter } from 'next/navigation';
import { type DragEvent, useRef, useState } from 'react';
import styles from './import.module.css';
import { JoinChoice } from './import-join.tsx';
import { IMPORT_KINDS, type ImportKindText, SHAPE_FORMATS, templateHref } from './import-kinds.ts';
import { sizeWords } from './import-words.ts';
import { messageOf, problemText } from './problem-text.ts';

interface ImportFormProps {
  readonly seasons: readonly { readonly code: string; readonly name: string }[];
  readonly sources: readonly string[];
  readonly limitMegabytes: number;
  /** the kind that the reader came for */
  readonly wanted?: string;
}

/** Choose what it is, drop the files, have them read. Nothing of the district changes here. */
export function ImportForm(props: ImportFormProps) {
  const router = useRouter();
  const [kind, setKind] = useState<ImportKindText>(IMPORT_KINDS.find((one) => one.kind === props.wanted) ?? IMPORT_KINDS[0]);
  const [files, setFiles] = useState<readonly File[]>([]);
  const [sending, setSending] = useState(false);
  const [fault, setFault] = useState<string | null>(null);
  async function send(form: HTMLFormElement) {
    setSending(true);
    setFault(null);
    try {
      const response = await fetch('/api/v1/imports', { method: 'POST', body: bodyOf(kind, files, new FormData(form)) });
      if (!response.ok) throw new Error(await problemText(response));
      const { id } = (await response.json()) as { id: string };
      router.push(`/imports/${id}`);
    } catch (error) {
      setFault(messageOf(error));
      setSending(false);
    }
  }
  return (
    <form
      className="stack"
      onSubmit={(event) => {
        event.preventDefault();
        send(event.currentTarget);
      }}
    >
      <KindChoice kind={kind} onChange={setKind} />
      {kind.template ? (
        <p className="small">
          <strong>Columns of {kind.name.toLowerCase()}:</strong> {kind.columns}. Headers in any order and case; columns can be assigned by
          hand afterwards. {kind.formats === 'shapes' ? `Read from ${SHAPE_FORMATS}, in any coordinate system. ` : ''}
          <a href={templateHref(kind.template)} download={kind.template.name}>
            Download a template ({kind.template.name.endsWith('.csv') ? 'CSV' : 'GeoJSON'})
          </a>
        </p>
      ) : (
        <p className="small">
          <strong>{kind.name}:</strong> {kind.columns}.
        </p>
      )}
      <FileDrop kind={kind} files={files} onChange={setFiles} limitMegabytes={props.limitMegabytes} />
      <KindOptions kind={kind} {...props} />
      {fault ? (
        <p className="fault" role="alert">
          {fault}
        </p>
      ) : null}
      <div className="row">
        <button type="submit" className="button primary" disabled={sending || files.length === 0}>
          {sending ? 'Sending…' : 'Read the files'}
        </button>
        <span className="hint">Reading changes nothing: what was understood is shown first.</span>
      </div>
    </form>
  );
}

function bodyOf(kind: ImportKindText, files: readonly File[], form: FormData): FormData {
  const body = new FormData();
  body.set('kind', kind.kind);
  const text = (name: string) => String(form.get(name) ?? '').trim();
  const [season, source] = [text('season'), text('source')];
  const options = {
    ...(season ? { season } : {}),
    ...(source ? { source } : {}),
    ...(text('joinByPlace') ? { joinByPlace: text('joinByPlace') } : {}),
    ...(text('validFrom') ? { validFrom: text('validFrom') } : {}),
    ...(form.has('replace') ? { replace: true } : {}),
    ...(form.has('recompute') ? {} : { recompute: false }),
  };
  body.set('options', JSON.stringify(options));
  for (const file of files) body.append('file', file, file.name);
  return body;
}

function KindChoice({ kind, onChange }: { kind: ImportKindText; onChange: (kind: ImportKindText) => void }) {
  return (
    <fieldset>
      <legend className="label">What is it?</legend>
      <div className={styles.kinds}>
        {IMPORT_KINDS.map((one) => (
          <label key={one.kind} className={styles.kind}>
            <input type="radio" name="kind" value={one.kind} checked={one.kind === kind.kind} onChange={() => onChange(one)} />
            <span>
              <strong>{one.name}</strong> <span className="unit">{one.formats}</span>
            </span>
            <p>{one.says}</p>
          </label>
        ))}
      </div>
    </fieldset>
  );
}

interface FileDropProps {
  readonly kind: ImportKindText;
  readonly files: readonly File[];
  readonly onChange: (files: readonly File[]) => void;
  readonly limitMegabytes: number;
}

function FileDrop({ kind, files, onChange, limitMegabytes }: FileDropProps) {
  const [over, setOver] = useState(false);
  const input = useRef<HTMLInputElement>(null);
  const take = (added: FileList | null) => onChange([...files, ...(added ?? [])]);
  const drop = (event: DragEvent) => {
    event.preventDefault();
    setOver(false);
    take(event.dataTransfer.files);
  };
  return (
    <div className="stack">
      {/* biome-ignore lint/a11y/noStaticElementInteractions: dropping is a second way; the button inside is the first */}
      <div
        className="drop"
        data-over={over}
        onDrop={drop}
        onDragOver={(event) => {
          event.preventDefault();
          setOver(true);
        }}
        onDragLeave={() => setOver(false)}
      >
        <label htmlFor="import-files">
          Drop files here, or choose them <span className="hint">(up to 400 files, {limitMegabytes} MB together)</span>
        </label>
        <input
          ref={input}
          id="import-files"
          type="file"
          multiple
          accept={kind.accept}
          onChange={(event) => {
            take(event.target.files);
            event.target.value = '';
          }}
        />
      </div>
      <ul className={styles.taken} aria-label="Files to read">
        {files.map((file, at) => (
          <li key={`${file.name} ${file.size} ${file.lastModified}`}>
            <span>{file.name}</span>
            <span className="muted">{sizeWords(file.size)}</span>
            <button
              type="button"
              className="button quiet"
              aria-label={`Leave out ${file.name}`}
              onClick={() => onChange(files.filter((_, i) => i !== at))}
            >
              Leave out
            </button>
          </li>
        ))}
      </ul>
    </div>
  );
}

function KindOptions({ kind, seasons, sources }: ImportFormProps & { kind: ImportKindText }) {
  return (
    <div className="toolbar">
      {kind.kind === 'plantings' || kind.kind === 'parcels' ? (
        <div className="field">
          <label htmlFor="import-season">Season of plantings whose row names none</label>
          <select id="import-season" name="season">
            <option value="">as the file says</option>
            {seasons.map((season) => (
              <option key={season.code} value={season.code}>
                {season.name || season.code}
              </option>
            ))}
          </select>
        </div>
      ) : null}
      {kind.kind === 'stations' || kind.kind === 'weather' ? (
        <div className="field">
          <label htmlFor="import-source">
            {kind.kind === 'weather' ? 'Weather source (a grid’s name)' : 'Weather source of new stations'}
          </label>
          <input id="import-source" name="source" list="import-sources" maxLength={120} placeholder={sources[0] ?? 'Stations'} />
          <datalist id="import-sources">
            {sources.map((source) => (
              <option key={source} value={source} />
            ))}
          </datalist>
        </div>
      ) : null}
      {kind.kind === 'parcels' ? (
        <>
          <JoinChoice value="" />
          <div className="field">
            <label htmlFor="import-valid-from">First day these parcels stand</label>
            <input id="import-valid-from" name="validFrom" type="date" />
          </div>
        </>
      ) : null}
      {kind.kind === 'parcels' || kind.kind === 'canals' ? (
        <label className="check">
          <input type="checkbox" name="replace" />
          Remove {kind.kind === 'parcels' ? 'parcels' : 'reaches'} that these files do not have
        </label>
      ) : null}
      <label className="check">
        <input type="checkbox" name="recompute" defaultChecked />
        Compute the seasons anew after applying, with the settings of the runs in use
      </label>
    </div>
  );
}
