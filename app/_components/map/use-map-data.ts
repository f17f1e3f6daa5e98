'use client';

import { useEffect, useRef, useState } from 'react';
import { fetchWeekValues, refusalText, type WeekValues } from './map-values.ts';

interface Loaded<T> {
  readonly data: T | null;
  readonly fault: string | null;
}

/** Week values of a variable, kept for as long as the map is open. The former variable's values stay in `data` until the new ones are there. */
export function useWeekValues(
  run: string,
  variable: string,
  shape: { weeks: number; parcels: number },
): Loaded<WeekValues> & { variable: string | null } {
  const kept = useRef(new Map<string, WeekValues>());
  const [state, setState] = useState<{ data: WeekValues | null; variable: string | null; fault: string | null }>({
    data: null,
    variable: null,
    fault: null,
  });
  const { weeks, parcels } = shape;
  useEffect(() => {
    const known = kept.current.get(variable);
    if (known) {
      setState({ data: known, variable, fault: null });
      return;
    }
    const abort = new AbortController();
    fetchWeekValues(run, variable, { weeks, parcels }, abort.signal)
      .then((data) => {
        kept.current.set(variable, data);
        setState({ data, variable, fault: null });
      })
      .catch((error: Error) => {
        if (!abort.signal.aborted) setState((former) => ({ ...former, fault: error.message }));
      });
    return () => abort.abort();
  }, [run, variable, weeks, parcels]);
  return state;
}

/** One JSON answer; null address asks for nothing. */
export function useAnswer<T>(address: string | null): Loaded<T> {
  const [state, setState] = useState<Loaded<T> & { address: string | null }>({ data: null, fault: null, address: null });
  useEffect(() => {
    if (!address) return;
    const abort = new AbortController();
    fetch(address, { signal: abort.signal, headers: { accept: 'application/json' } })
      .then(async (response) => {
        if (!response.ok) throw new Error(await refusalText(response));
        setState({ data: (await response.json()) as T, fault: null, address });
      })
      .catch((error: Error) => {
        if (!abort.signal.aborted) setState({ data: null, fault: error.message, address });
      });
    return () => abort.abort();
  }, [address]);
  return state.address === address ? state : { data: null, fault: null };
}
