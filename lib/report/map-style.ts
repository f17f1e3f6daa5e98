/**
 * Style of the district's map: parcels by class, canals by flow and share of capacity, stations, boundary. Nothing is fetched but the tiles named.
 *
 * Feature state drives what changes with time: parcels `class` (0…, absent without value), `hover`, `selected`; canals `flow` (0–1 of the flow at
 * the headworks) and `share` (of capacity, absent when not known). Features are known by their ordinal, property `o`.
 */
import type { Feature, FeatureCollection } from 'geojson';
import type { ExpressionSpecification, LayerSpecification, StyleSpecification } from 'maplibre-gl';
import { TIGHT_SHARE } from '../canal/reach-period.ts';
import { CAPACITY_COLOURS, MISSING_COLOUR, type Theme } from './colour-scale.ts';

interface MapStyleRequest {
  /** tile addresses with {z}/{x}/{y} */
  readonly parcelTiles: string;
  readonly canalTiles: string;
  readonly maxZoom: number;
  /** west, south, east, north: no tile is asked for outside */
  readonly bounds?: readonly [number, number, number, number];
  readonly sites: FeatureCollection;
  readonly outline: Feature | FeatureCollection;
  /** colour of each class, low to high */
  readonly colours: readonly string[];
  readonly theme: Theme;
}

interface Ink {
  readonly ground: string;
  readonly edge: string;
  readonly focus: string;
  readonly outline: string;
  readonly casing: string;
  readonly site: string;
}

const INK: Record<Theme, Ink> = {
  light: { ground: '#f4f2ec', edge: '#ffffff', focus: '#111111', outline: '#8a8577', casing: '#ffffff', site: '#a50f15' },
  dark: { ground: '#15181c', edge: '#15181c', focus: '#ffffff', outline: '#767b83', casing: '#15181c', site: '#fcae91' },
};

/** The whole style. Layers from below: ground, outline, parcels, parcel edges, canal casing, canals, sites. */
export function mapStyle(request: MapStyleRequest): StyleSpecification {
  const ink = INK[request.theme];
  const bounds = request.bounds ? { bounds: [...request.bounds] as [number, number, number, number] } : {};
  const tiles = (url: string) => ({
    type: 'vector' as const,
    tiles: [url],
    minzoom: 0,
    maxzoom: request.maxZoom,
    promoteId: 'o',
    ...bounds,
  });
  return {
    version: 8,
    name: `district-${request.theme}`,
    sources: {
      parcels: tiles(request.parcelTiles),
      canals: tiles(request.canalTiles),
      sites: { type: 'geojson', data: request.sites },
      district: { type: 'geojson', data: request.outline },
    },
    layers: [
      { id: 'ground', type: 'background', paint: { 'background-color': ink.ground } },
      {
        id: 'district-outline',
        type: 'line',
        source: 'district',
        paint: { 'line-color': ink.outline, 'line-width': 1.2, 'line-dasharray': [4, 2] },
      },
      ...parcelLayers(request, ink),
      ...canalLayers(request.theme, ink),
      siteLayer(ink),
    ],
  };
}

function parcelLayers({ colours, theme }: MapStyleRequest, ink: Ink): LayerSpecification[] {
  const source = { source: 'parcels', 'source-layer': 'parcels' };
  return [
    { id: 'parcels', type: 'fill', ...source, paint: { 'fill-color': parcelColour(colours, theme), 'fill-antialias': true } },
    {
      id: 'parcel-edges',
      type: 'line',
      ...source,
      paint: {
        'line-color': ['case', ['any', state('selected', false), state('hover', false)], ink.focus, ink.edge],
        'line-width': ['interpolate', ['linear'], ['zoom'], 9, edgeWidth(1.4, 0.15), 14, edgeWidth(3, 1)],
      },
    },
  ];
}

/** Colour by class from feature state; also for repainting one map with other classes. */
function parcelColour(colours: readonly string[], theme: Theme): ExpressionSpecification | string {
  if (colours.length === 0) return MISSING_COLOUR[theme];
  const pairs = colours.flatMap((colour, i) => [i, colour]);
  return ['match', state('class', -1), ...pairs, MISSING_COLOUR[theme]] as unknown as ExpressionSpecification;
}

function edgeWidth(focused: number, plain: number): ExpressionSpecification {
  return ['case', ['any', state('selected', false), state('hover', false)], focused, plain];
}

function state(name: string, otherwise: number | boolean): ExpressionSpecification {
  return ['coalesce', ['feature-state', name], otherwise];
}

function canalLayers(theme: Theme, ink: Ink): LayerSpecification[] {
  const source = { source: 'canals', 'source-layer': 'canals', layout: { 'line-cap': 'round', 'line-join': 'round' } } as const;
  return [
    { id: 'canal-casing', type: 'line', ...source, paint: { 'line-color': ink.casing, 'line-width': canalWidth(1.6) } },
    { id: 'canals', type: 'line', ...source, paint: { 'line-color': canalColour(theme), 'line-width': canalWidth(0) } },
  ];
}

/** Width grows with the square root of flow, so that laterals stay visible beside the main canal. */
function canalWidth(more: number): ExpressionSpecification {
  const width = (least: number, most: number): ExpressionSpecification => [
    '+',
    least + more,
    ['*', most - least, ['sqrt', ['max', 0, state('flow', 0)]]],
  ];
  return ['interpolate', ['linear'], ['zoom'], 9, width(0.6, 4.5), 14, width(1.4, 11)];
}

function canalColour(theme: Theme): ExpressionSpecification {
  const { within, tight, over, unknown } = CAPACITY_COLOURS[theme];
  return ['step', state('share', -1), unknown, 0, within, TIGHT_SHARE, tight, JUST_OVER, over];
}

/** A step holds its limit from below; over begins past exactly 1. */
const JUST_OVER = 1 + 1e-9;

function siteLayer(ink: Ink): LayerSpecification {
  return {
    id: 'sites',
    type: 'circle',
    source: 'sites',
    paint: {
      'circle-radius': ['interpolate', ['linear'], ['zoom'], 9, 3.5, 14, 7],
      'circle-color': ink.site,
      'circle-stroke-color': ink.casing,
      'circle-stroke-width': 1.5,
    },
  };
}
