'use client';

import { useCallback, useEffect, useMemo, useRef, useState } from 'react';
import { flushSync } from 'react-dom';
import type { UnitSystem } from '../../../lib/base/units.ts';
import type { BandAnswer } from '../../../lib/http/contract/band.ts';
import type { MapDescription } from '../../../lib/http/contract/run.ts';
import { CAUTIONS } from '../../../lib/report/cautions.ts';
import type { Theme } from '../../../lib/report/colour-scale.ts';
import { figureWithUnit } from '../figures.ts';
import { aheadInRange } from './ahead-weeks.ts';
import { ClassControls } from './class-controls.tsx';
import { ClassLegend } from './class-legend.tsx';
import styles from './demand-map.module.css';
import { CanalLegend, LayerSwitches, type Layers } from './layer-switches.tsx';
import { type ClassChoice, classIndexes, legendRows, limitsOf } from './map-classes.ts';
import { coloursOf, NO_VALUE, NOUGHT } from './map-look.ts';
import { MapStage, type StageHandle } from './map-stage.tsx';
import { dayCounts, valuesOver, type WeekRange, weekVolumes } from './map-values.ts';
import { type MapVariable, offeredVariables, unitOfVariable, writeValue } from './map-variables.ts';
import { ParcelCard } from './parcel-card.tsx';
import { ParcelSearch } from './parcel-search.tsx';
import { flowsOver, greatestFlow, type ReachWeeks } from './reach-flows.ts';
import { rangeWords, SeasonStrip } from './season-strip.tsx';
import { useDark, useMapAddress } from './use-map-address.ts';
import { useAnswer, useValueStore, useWeekValues, type ValueStore } from './use-map-data.ts';
import { weekEnds } from './week-band.ts';

export interface DemandMapProps {
  readonly description: MapDescription;
  readonly units: UnitSystem;
}

const START_CLASSES: ClassChoice = { method: 'quantile', count: 6, own: [], hold: true };
const START_LAYERS: Layers = { parcels: true, canals: true, areas: false, stations: true, boundary: true };

/** Everything the map shows for one variable and one range of weeks. */
function useChoropleth(given: {
  description: MapDescription;
  store: ValueStore;
  variable: MapVariable;
  range: WeekRange;
  choice: ClassChoice;
}) {
  const { description, store, variable, range, choice } = given;
  const { area_m2: area } = description.parcels;
  const weeks = description.periods.week;
  const { data: stored, fault } = useWeekValues(store, variable.source);
  const days = useMemo(() => dayCounts(weeks), [weeks]);
  const values = useMemo(
    () => (stored ? valuesOver(stored, variable, range, { days, area }) : null),
    [stored, variable, range, days, area],
  );
  const single = range.from === range.to;
  const held = useMemo(
    () => (stored && choice.hold && single ? limitsOf({ variable, choice, area, stored }) : null),
    [stored, choice, single, variable, area],
  );
  const own = useMemo(
    () => (values && !held ? limitsOf({ variable, choice, area, values }) : null),
    [values, held, variable, choice, area],
  );
  const breaks = held ?? own;
  const classes = useMemo(() => (values && breaks ? classIndexes(values, breaks, variable) : null), [values, breaks, variable]);
  return { values, classes, breaks, days, fault };
}

/** The home screen: the season strip above, the map, its legend at one side and the chosen parcel at the other. */
export function DemandMap({ description, units }: DemandMapProps) {
  const variables = useMemo(() => offeredVariables(description), [description]);
  const weeks = description.periods.week;
  const { area_m2: area, code: codes } = description.parcels;
  const known = useMemo(() => ({ variables, weeks, codes }), [variables, weeks, codes]);
  const address = useMapAddress(known);
  const { variable, range, chosen } = address;
  const [choice, setChoice] = useState(START_CLASSES);
  const [layers, setLayers] = useState(START_LAYERS);
  const [patterns, setPatterns] = useState(false);
  const [picked, setPicked] = useState<ReadonlySet<number>>(new Set());
  const [paper, setPaper] = useState(false);
  const dark = useDark();
  const theme: Theme = dark && !paper ? 'dark' : 'light';
  const patterned = patterns || paper;
  const stage = useRef<StageHandle | null>(null);
  const store = useValueStore(description.run, weeks.length, area.length);

  const { values, classes, breaks, days, fault } = useChoropleth({ description, store, variable, range, choice });
  const gross = useWeekValues(store, 'gross_requirement');
  const volumes = useMemo(() => (gross.data ? weekVolumes(gross.data, area) : null), [gross.data, area]);
  const reachWeeks = useAnswer<ReachWeeks>(`/api/v1/runs/${description.run}/reach-values/weeks`);
  const band = useAnswer<BandAnswer>(`/api/v1/runs/${description.run}/band?level=district&variable=gross_volume&period=week`);
  const ends = useMemo(() => weekEnds(band.data, weeks), [band.data, weeks]);
  const reaches = useMemo(() => {
    if (!reachWeeks.data) return null;
    return { flows: flowsOver(reachWeeks.data, range, days), codes: reachWeeks.data.reaches, most: greatestFlow(reachWeeks.data) };
  }, [reachWeeks.data, range, days]);

  const classCount = breaks ? Math.max(0, breaks.length - 1) : choice.count;
  const look = useMemo(() => {
    const faint = [...Array(classCount).keys(), NOUGHT, NO_VALUE].map((id) => picked.size > 0 && !picked.has(id));
    return { colours: coloursOf(variable.scale, classCount, theme), faint, theme };
  }, [variable.scale, classCount, picked, theme]);
  const rows = useMemo(
    () => (classes && breaks ? legendRows({ classes, breaks, area, variable, units, theme }) : []),
    [classes, breaks, area, variable, units, theme],
  );
  // a picked class means something else once the limits or the variable change
  // biome-ignore lint/correctness/useExhaustiveDependencies: forgets the picks with the variable and the choice of classes
  useEffect(() => setPicked(new Set()), [variable, choice]);

  const notObserved = aheadInRange(weeks, range, description.ahead);
  const words = rangeWords(weeks, range);
  const unit = unitOfVariable(variable, units);
  const tip = (position: number) => `${codes[position]}: ${values ? writeValue(values[position], variable, units) : '…'} ${unit}`.trim();
  const show = useCallback((longitude: number, latitude: number) => stage.current?.show(longitude, latitude), []);
  const span = { start: weeks[range.from].start, end: weeks[range.to].end };
  return (
    <div className={styles.desk} data-card={chosen !== null}>
      <h1 className="visually-hidden">Demand map</h1>
      <SeasonStrip
        weeks={weeks}
        volumes={volumes}
        ends={ends}
        range={range}
        ahead={description.ahead}
        units={units}
        onRange={address.setRange}
      />
      <div className={styles.body}>
        <div className={styles.side}>
          <ParcelSearch codes={codes} onChoose={address.setChosen} />
          <VariableSelect variables={variables} variable={variable} onVariable={address.setVariable} />
          <Faults faults={[fault, gross.fault, reachWeeks.fault]} />
          <ClassLegend
            rows={rows}
            variable={variable}
            units={units}
            patterns={patterned}
            picked={picked}
            onPick={(index) => setPicked(toggled(picked, index))}
            onClear={() => setPicked(new Set())}
          />
          <ClassControls choice={choice} breaks={breaks ?? []} variable={variable} units={units} onChoice={setChoice} />
          <CanalLegend most={reaches?.most ?? 0} units={units} theme={theme} />
          <LayerSwitches
            layers={layers}
            hasAreas={description.tiles.areas !== null}
            patterns={patterns}
            onLayers={setLayers}
            onPatterns={setPatterns}
          />
          <Ways stage={stage} onPaper={setPaper} span={span} whole={range.from === 0 && range.to === weeks.length - 1} />
        </div>
        <MapStage
          description={description}
          classes={classes}
          look={look}
          reaches={reaches}
          layers={layers}
          patterns={patterned}
          units={units}
          chosen={chosen}
          label={`Map of ${variable.name.toLowerCase()} by parcel, ${words}. The search box opens a parcel without the pointer.`}
          tip={tip}
          onChoose={address.setChosen}
          handle={stage}
        />
        {chosen === null ? null : (
          <ParcelCard
            run={description.run}
            code={codes[chosen]}
            span={span}
            words={words}
            whole={range.from === 0 && range.to === weeks.length - 1}
            units={units}
            onClose={() => address.setChosen(null)}
            onPlace={show}
          />
        )}
      </div>
      <Foot values={values} area={area} variable={variable} words={notObserved ? `${words} (${notObserved})` : words} units={units} />
    </div>
  );
}

function toggled(picked: ReadonlySet<number>, index: number): ReadonlySet<number> {
  const next = new Set(picked);
  if (!next.delete(index)) next.add(index);
  return next;
}

function Faults({ faults }: { faults: readonly (string | null)[] }) {
  return [...new Set(faults)].map((fault) =>
    fault ? (
      <p key={fault} className="notice bad" role="alert">
        {fault}
      </p>
    ) : null,
  );
}

function VariableSelect(props: { variables: readonly MapVariable[]; variable: MapVariable; onVariable: (id: string) => void }) {
  return (
    <label className="field">
      <span className="label">Shown on the map</span>
      <select value={props.variable.id} onChange={(event) => props.onVariable(event.target.value)}>
        {props.variables.map((variable) => (
          <option key={variable.id} value={variable.id}>
            {variable.name}
          </option>
        ))}
      </select>
    </label>
  );
}

/**
 * Prints once the map is drawn for paper; the keys that print do the same. A browser's own menu cannot be held up: where it announces the
 * print medium ahead of time, the map follows.
 */
function usePrint(stage: React.RefObject<StageHandle | null>, onPaper: (on: boolean) => void): () => Promise<void> {
  const print = useCallback(async () => {
    flushSync(() => onPaper(true));
    await stage.current?.settled();
    window.print();
    onPaper(false);
  }, [stage, onPaper]);
  useEffect(() => {
    const key = (event: KeyboardEvent) => {
      if (!(event.ctrlKey || event.metaKey) || event.shiftKey || event.altKey || event.key.toLowerCase() !== 'p') return;
      event.preventDefault();
      print();
    };
    const medium = matchMedia('print');
    const change = () => onPaper(medium.matches);
    window.addEventListener('keydown', key);
    medium.addEventListener('change', change);
    return () => {
      window.removeEventListener('keydown', key);
      medium.removeEventListener('change', change);
    };
  }, [print, onPaper]);
  return print;
}

/** The same figures as a table, the whole district again, and paper: light, with patterns, once that is drawn. */
function Ways(props: {
  stage: React.RefObject<StageHandle | null>;
  onPaper: (on: boolean) => void;
  span: { start: string };
  whole: boolean;
}) {
  const { stage, onPaper, span, whole } = props;
  const print = usePrint(stage, onPaper);
  return (
    <p className={`${styles.ways} no-print`}>
      <a href={whole ? '/parcels?period=season' : `/parcels?period=week&date=${span.start}`}>The same figures as a table</a>
      <button type="button" className="button" onClick={() => stage.current?.showAll()}>
        Whole district
      </button>
      <button type="button" className="button" onClick={print}>
        Print
      </button>
    </p>
  );
}

function Foot(props: { values: Float32Array | null; area: readonly number[]; variable: MapVariable; words: string; units: UnitSystem }) {
  const { values, area, variable, words, units } = props;
  const known = useMemo(
    () => (values ? area.reduce((sum, one, index) => (Number.isFinite(values[index]) ? sum + one : sum), 0) : 0),
    [values, area],
  );
  return (
    <p className={styles.foot}>
      <span className="only-print">
        {variable.name}, {words}.{' '}
      </span>
      {values ? `${figureWithUnit(known / 1e4, 'area', units)} of parcels with a value. ` : null}
      {CAUTIONS.decisions}
    </p>
  );
}
