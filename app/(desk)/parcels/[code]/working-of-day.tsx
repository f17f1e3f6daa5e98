'use client';

import { useRouter } from 'next/navigation';
import { useId } from 'react';

/** Opens the working of any day of the run. */
export function WorkingOfDay({
  parcel,
  run,
  date,
}: {
  parcel: string;
  run: { id: string; start_date: string; end_date: string; standing: boolean };
  date: string;
}) {
  const router = useRouter();
  const id = useId();
  return (
    <form
      className="row"
      onSubmit={(event) => {
        event.preventDefault();
        const day = String(new FormData(event.currentTarget).get('day'));
        router.push(`/parcels/${encodeURIComponent(parcel)}/working/${day}${run.standing ? '' : `?run=${run.id}`}`);
      }}
    >
      <label htmlFor={id} className="small">
        Working of
      </label>
      <input id={id} key={date} type="date" name="day" required min={run.start_date} max={run.end_date} defaultValue={date} />
      <button type="submit" className="button">
        Open
      </button>
    </form>
  );
}
