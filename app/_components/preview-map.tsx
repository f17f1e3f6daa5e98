'use client';

import * as maplibregl from 'maplibre-gl';
import 'maplibre-gl/dist/maplibre-gl.css';
import { useEffect, useRef, useState } from 'react';
import type { MapPreview } from '../../lib/files/reading.ts';
import styles from './import.module.css';

maplibregl.setWorkerUrl(new URL('maplibre-gl/dist/maplibre-gl-worker.mjs', import.meta.url).toString());

type Collection = MapPreview['collection'];
type Properties = Collection['features'][number]['properties'];

interface PreviewMapProps {
  readonly collection: Collection;
  readonly onChoose: (properties: Properties | null) => void;
}

/** Token of each status and the dash that tells it without colour. */
const LOOKS = [
  { status: 'ok', token: '--good', dash: null },
  { status: 'repaired', token: '--caution', dash: [4, 2] },
  { status: 'refused', token: '--bad', dash: [0.8, 1.6] },
] as const;
const LAYERS = LOOKS.flatMap(({ status }) => [`${status}-fill`, `${status}-line`]);

/** Features of a file on a plain ground, by status. */
export function PreviewMap({ collection, onChoose }: PreviewMapProps) {
  const container = useRef<HTMLDivElement>(null);
  const choose = useRef(onChoose);
  choose.current = onChoose;
  const [fault, setFault] = useState<string | null>(null);
  useEffect(() => {
    if (!container.current) return;
    try {
      const map = drawMap(container.current, collection, (properties) => choose.current(properties));
      return () => map.remove();
    } catch (error) {
      setFault(
        `The map could not be drawn (${error instanceof Error ? error.message : 'no WebGL'}). The list below has every feature at fault.`,
      );
    }
  }, [collection]);
  if (fault) return <p className="notice caution">{fault}</p>;
  return <div ref={container} className={styles.map} />;
}

function drawMap(container: HTMLElement, collection: Collection, choose: (properties: Properties | null) => void): maplibregl.Map {
  const token = (name: string) => getComputedStyle(container).getPropertyValue(name).trim();
  const features = collection.features.filter((feature) => feature.geometry !== null);
  const map = new maplibregl.Map({
    container,
    attributionControl: false,
    dragRotate: false,
    bounds: boundsOf(features),
    fitBoundsOptions: { padding: 24, animate: false },
    locale: { 'Map.Title': 'Map of the features in the file' },
    style: {
      version: 8,
      sources: { sample: { type: 'geojson', data: { type: 'FeatureCollection', features } as GeoJSON.FeatureCollection } },
      layers: [
        { id: 'ground', type: 'background', paint: { 'background-color': token('--well') } },
        ...LOOKS.flatMap(({ status, token: name, dash }) => layersOf(status, token(name), dash)),
      ],
    },
  });
  map.touchZoomRotate.disableRotation();
  map.addControl(new maplibregl.NavigationControl({ showCompass: false }), 'top-right');
  map.addControl(new maplibregl.ScaleControl(), 'bottom-left');
  map.on('click', (event) => {
    const box: [maplibregl.PointLike, maplibregl.PointLike] = [
      [event.point.x - 3, event.point.y - 3],
      [event.point.x + 3, event.point.y + 3],
    ];
    choose((map.queryRenderedFeatures(box, { layers: LAYERS })[0]?.properties as Properties | undefined) ?? null);
  });
  return map;
}

function layersOf(status: string, colour: string, dash: readonly number[] | null): maplibregl.LayerSpecification[] {
  const own: maplibregl.FilterSpecification = ['==', ['get', 'status'], status];
  const polygon: maplibregl.FilterSpecification = ['==', ['geometry-type'], 'Polygon'];
  return [
    {
      id: `${status}-fill`,
      type: 'fill',
      source: 'sample',
      filter: ['all', own, polygon],
      paint: { 'fill-color': colour, 'fill-opacity': 0.25 },
    },
    {
      id: `${status}-line`,
      type: 'line',
      source: 'sample',
      filter: own,
      paint: { 'line-color': colour, 'line-width': 2, ...(dash ? { 'line-dasharray': [...dash] } : {}) },
    },
  ];
}

function boundsOf(features: Collection['features']): maplibregl.LngLatBoundsLike | undefined {
  const bounds = new maplibregl.LngLatBounds();
  const extend = (part: unknown): void => {
    if (!Array.isArray(part)) return;
    if (typeof part[0] === 'number') bounds.extend([part[0], Math.max(-89, Math.min(89, part[1] as number))]);
    else for (const inner of part) extend(inner);
  };
  for (const { geometry } of features) if (geometry && 'coordinates' in geometry) extend(geometry.coordinates);
  return bounds.isEmpty() ? undefined : bounds;
}
