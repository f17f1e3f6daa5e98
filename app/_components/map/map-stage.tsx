'use client';

import 'maplibre-gl/dist/maplibre-gl.css';
import { type RefObject, useEffect, useImperativeHandle, useRef, useState } from 'react';
import type { UnitSystem } from '../../../lib/base/units.ts';
import type { MapDescription } from '../../../lib/http/contract/run.ts';
import styles from './demand-map.module.css';
import type { Layers } from './layer-switches.tsx';
import type { FillLook } from './map-look.ts';
import { ParcelMap } from './parcel-map.ts';
import type { ReachFlow } from './reach-flows.ts';

export interface StageHandle {
  show(longitude: number, latitude: number): void;
  showAll(): void;
  /** resolves when all that was asked for is on the canvas */
  settled(): Promise<void>;
}

interface StageProps {
  readonly description: MapDescription;
  readonly classes: Uint8Array | null;
  readonly look: FillLook;
  readonly reaches: { readonly flows: readonly ReachFlow[]; readonly codes: readonly string[]; readonly most: number } | null;
  readonly layers: Layers;
  readonly patterns: boolean;
  readonly units: UnitSystem;
  readonly chosen: number | null;
  readonly label: string;
  readonly tip: (position: number) => string;
  readonly onChoose: (position: number | null) => void;
  readonly handle: RefObject<StageHandle | null>;
}

interface Tip {
  readonly text: string;
  readonly x: number;
  readonly y: number;
}

/** Holds the map in the page: React owns what is shown, the map owns how it is drawn. */
export function MapStage(props: StageProps) {
  const container = useRef<HTMLDivElement>(null);
  const [map, setMap] = useState<ParcelMap | null>(null);
  const [tip, setTip] = useState<Tip | null>(null);
  const [fault, setFault] = useState<string | null>(null);
  const now = useRef(props);
  now.current = props;
  useEffect(() => {
    if (!container.current) return;
    const { description, look } = now.current;
    const events = {
      onChoose: (position: number | null) => now.current.onChoose(position),
      onPoint: (position: number | null, x: number, y: number) =>
        setTip(position === null ? null : { text: now.current.tip(position), x, y }),
      onFault: setFault,
    };
    let gone = false;
    let made: ParcelMap;
    try {
      made = new ParcelMap({ container: container.current, description, look, events });
    } catch (error) {
      setFault(
        `The map needs WebGL 2, which this browser does not offer here (${(error as Error).message}). The table below has the same figures.`,
      );
      return;
    }
    made.ready().then(() => {
      if (!gone) setMap(made);
    });
    return () => {
      gone = true;
      setMap(null);
      made.remove();
    };
  }, []);
  useMapState(map, props);
  return (
    <div className={styles.stage}>
      <section ref={container} className={styles.canvas} aria-label={props.label} data-testid="demand-map" />
      {tip ? (
        <p className={styles.tip} style={{ left: tip.x, top: tip.y }} aria-hidden="true">
          {tip.text}
        </p>
      ) : null}
      {fault ? (
        <p className={`${styles.stageFault} notice bad`} role="alert">
          {fault}
        </p>
      ) : null}
    </div>
  );
}

/** Tells the map what changed, each part on its own so that a step of the season touches nothing but classes and canals. */
function useMapState(map: ParcelMap | null, props: StageProps): void {
  const { classes, look, reaches, layers, patterns, chosen, units } = props;
  useEffect(() => map?.setLook(look), [map, look]);
  useEffect(() => {
    if (classes) map?.setClasses(classes);
  }, [map, classes]);
  useEffect(() => {
    if (reaches) map?.setReaches(reaches.flows, reaches.codes, reaches.most);
  }, [map, reaches]);
  useEffect(() => map?.setUnits(units), [map, units]);
  useEffect(() => map?.setLayers(layers), [map, layers]);
  useEffect(() => map?.choose(chosen), [map, chosen]);
  // biome-ignore lint/correctness/useExhaustiveDependencies: patterns carry the classes, so they are redrawn with them
  useEffect(() => map?.setPatterns(patterns, look), [map, patterns, look, classes]);
  useImperativeHandle(
    props.handle,
    () => ({
      show: (longitude, latitude) => map?.show(longitude, latitude),
      showAll: () => map?.showAll(),
      settled: async () => map?.settled(),
    }),
    [map],
  );
}
