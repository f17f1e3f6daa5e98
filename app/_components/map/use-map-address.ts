'use client';

import { useCallback, useEffect, useState } from 'react';
import type { WeekRange, WeekSpan } from './map-values.ts';
import type { MapVariable } from './map-variables.ts';
import { findCode } from './parcel-search.tsx';

interface Known {
  readonly variables: readonly MapVariable[];
  readonly weeks: readonly WeekSpan[];
  readonly codes: readonly string[];
}

interface Place {
  readonly variable: MapVariable;
  readonly range: WeekRange;
  readonly chosen: number | null;
}

/** Reads `show`, `from`, `to` and `parcel` of the address; whatever it does not know falls back to demand depth over the whole season. */
export function readPlace(search: string, known: Known): Place {
  const query = new URLSearchParams(search);
  const variable = known.variables.find((one) => one.id === query.get('show')) ?? known.variables[0];
  const weekOf = (date: string | null) => (date ? known.weeks.findIndex((week) => week.start <= date && date <= week.end) : -1);
  const from = weekOf(query.get('from'));
  const to = weekOf(query.get('to') ?? query.get('from'));
  const range = from >= 0 && to >= from ? { from, to } : { from: 0, to: known.weeks.length - 1 };
  const position = query.has('parcel') ? findCode(known.codes, query.get('parcel') ?? '') : -1;
  return { variable, range, chosen: position < 0 ? null : position };
}

/** The address of a place, with the defaults left out. */
export function writePlace(place: Place, known: Known): string {
  const query = new URLSearchParams();
  if (place.variable !== known.variables[0]) query.set('show', place.variable.id);
  const { from, to } = place.range;
  if (from !== 0 || to !== known.weeks.length - 1) {
    query.set('from', known.weeks[from].start);
    if (to !== from) query.set('to', known.weeks[to].start);
  }
  if (place.chosen !== null) query.set('parcel', known.codes[place.chosen]);
  const text = query.toString();
  return text ? `/?${text}` : '/';
}

/** What the map shows, kept in the address so that it can be sent to somebody. */
export function useMapAddress(known: Known) {
  const [place, setPlace] = useState(() => readPlace(location.search, known));
  useEffect(() => {
    const timer = setTimeout(() => window.history.replaceState(window.history.state, '', writePlace(place, known)), 250);
    return () => clearTimeout(timer);
  }, [place, known]);
  const setRange = useCallback((range: WeekRange) => setPlace((former) => ({ ...former, range })), []);
  const setChosen = useCallback((chosen: number | null) => setPlace((former) => ({ ...former, chosen })), []);
  const setVariable = useCallback(
    (id: string) => setPlace((former) => ({ ...former, variable: known.variables.find((one) => one.id === id) ?? former.variable })),
    [known.variables],
  );
  return { ...place, setRange, setChosen, setVariable };
}

/** True while the page is drawn dark: by the reader's choice, else by the system. */
export function useDark(): boolean {
  const [dark, setDark] = useState(isDark);
  useEffect(() => {
    const look = () => setDark(isDark());
    const system = matchMedia('(prefers-color-scheme: dark)');
    const choice = new MutationObserver(look);
    system.addEventListener('change', look);
    choice.observe(document.documentElement, { attributeFilter: ['data-theme'] });
    return () => {
      system.removeEventListener('change', look);
      choice.disconnect();
    };
  }, []);
  return dark;
}

function isDark(): boolean {
  const chosen = document.documentElement.dataset.theme;
  return chosen ? chosen === 'dark' : matchMedia('(prefers-color-scheme: dark)').matches;
}
