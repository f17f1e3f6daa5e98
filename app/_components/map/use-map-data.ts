'use client';

import { useEffect, useMemo, useState } from 'react';
import { fetchWeekValues, refusalText, type WeekValues } from './map-values.ts';

interface Loaded<T> {
  readonly data: T | null;
  readonly fault: string | null;
}

export interface ValueStore {
  readonly load: (variable: string) => Promise<WeekValues>;
}

/** Fetches the arrays of a run, each at most once for as long as the map is open; a refusal is asked again the next time. */
export function useValueStore(run: string, weeks: number, parcels: number): ValueStore {
  return useMemo(() => {
    const asked = new Map<string, Promise<WeekValues>>();
    const load = (variable: string) => {
      const known = asked.get(variable);
      if (known) return known;
      const fresh = fetchWeekValues(run, variable, { weeks, parcels });
      asked.set(variable, fresh);
      fresh.catch(() => asked.delete(variable));
      return fresh;
    };
    return { load };
  }, [run, weeks, parcels]);
}

/** Week values of a variable; null until they are there. */
export function useWeekValues(store: ValueStore, variable: string): Loaded<WeekValues> {
  const [state, setState] = useState<Loaded<WeekValues> & { variable: string | null }>({ data: null, variable: null, fault: null });
  useEffect(() => {
    let wanted = true;
    store.load(variable).then(
      (data) => wanted && setState({ data, variable, fault: null }),
      (error: Error) => wanted && setState({ data: null, variable, fault: error.message }),
    );
    return () => {
      wanted = false;
    };
  }, [store, variable]);
  return state.variable === variable ? state : { data: null, fault: null };
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
