/** How the demand map is drawn: the district's map style, with what only the screen needs (faint classes, nought, dashes over full canals). */

import { schemeBlues, schemeOrRd, schemePurples, schemeYlOrBr } from 'd3-scale-chromatic';
import type { Feature, FeatureCollection } from 'geojson';
import type { ExpressionSpecification, LayerSpecification, SourceSpecification, StyleSpecification } from 'maplibre-gl';
import { classColours, MISSING_COLOUR, type Theme } from '../../../lib/report/colour-scale.ts';
import { mapStyle } from '../../../lib/report/map-style.ts';
import type { ScaleName } from './map-variables.ts';

/** What the map has beside its classes: land of the district, dashes over canals, fills of parcels whose value is nought, service areas. */
const GROUND: Record<Theme, { readonly land: string; readonly dash: string; readonly nought: string; readonly area: string }> = {
  light: { land: '#fbfaf6', dash: '#ffffff', nought: '#efede4', area: '#4a3f6b' },
  dark: { land: '#1b2023', dash: '#15181c', nought: '#262c30', area: '#c9bfe6' },
};

export const NO_VALUE = 255;
export const NOUGHT = 254;
/** Deepest zoom the tiles are made for; deeper views stretch them. */
const TILE_ZOOM = 16;

/** Sequential schemes that their authors mark as safe for colour-blind readers (Harrower & Brewer 2003); demand keeps the colours of the printed map. */
const SCHEMES: Record<Exclude<ScaleName, 'irrigation'>, readonly (readonly string[])[]> = {
  et: schemeYlOrBr,
  rain: schemeBlues,
  soil: schemeOrRd,
  stress: schemePurples,
};

/**
 * Colours low to high; the end nearest to the ground is left out. The low values of the stress coefficient are the stressed ones, so they stand out.
 */
export function coloursOf(scale: ScaleName, count: number, theme: Theme): string[] {
  if (count === 0) return [];
  if (scale === 'irrigation') return classColours(count, 'amount', theme);
  const steps = SCHEMES[scale][Math.min(9, Math.max(3, count + 1))];
  const colours = (theme === 'light' ? [...steps] : steps.toReversed()).slice(-count);
  return scale === 'stress' ? colours.reverse() : colours;
}

export function noughtColour(theme: Theme): string {
  return GROUND[theme].nought;
}

export interface FillLook {
  /** one per class, low to high */
  readonly colours: readonly string[];
  /** drawn faint because the legend picked others: one per class, then nought, then missing */
  readonly faint: readonly boolean[];
  readonly theme: Theme;
}

/** Opacity of the classes that the legend left out, as the last two digits of a colour. */
const FAINT = '24';

/**
 * Colour by class, faintness within the colour. One property that follows feature state, and always an expression: each further one would be
 * recomputed for every parcel at every step of the season.
 */
function fillColour({ colours, faint, theme }: FillLook): ExpressionSpecification {
  const shown = (colour: string, index: number) => (faint[index] ? colour + FAINT : colour);
  const cases = colours.flatMap((colour, index) => [index, shown(colour, index)]);
  const nought = shown(GROUND[theme].nought, colours.length);
  const missing = shown(MISSING_COLOUR[theme], colours.length + 1);
  return ['match', ['feature-state', 'class'], ...cases, NOUGHT, nought, missing] as unknown as ExpressionSpecification;
}

/** Names of the layers a reader can switch, and the style layers each holds. */
export const LAYER_GROUPS = {
  parcels: ['parcels', 'parcel-edges'],
  canals: ['canal-casing', 'canals', 'canal-over'],
  areas: ['area-casing', 'areas'],
  boundary: ['land', 'district-outline'],
} as const;

export interface StyleSources {
  /** absolute URL templates with {z}/{x}/{y} */
  readonly parcels: string;
  readonly canals: string;
  /** null where the district has no service areas */
  readonly areas: string | null;
  readonly bounds: [number, number, number, number];
  readonly boundary: unknown;
}

/**
 * The parcels once more, for their outlines: hovering and choosing change the state of one outline, a step of the season that of every fill,
 * and apart neither recomputes the other.
 */
export const OUTLINES = 'outlines';

const NOTHING: FeatureCollection = { type: 'FeatureCollection', features: [] };

/** The whole style of the screen's map. Stations are links over the map, so they are no layer. */
export function demandStyle(sources: StyleSources, look: FillLook): StyleSpecification {
  const style = mapStyle({
    parcelTiles: sources.parcels,
    canalTiles: sources.canals,
    maxZoom: TILE_ZOOM,
    bounds: sources.bounds,
    sites: NOTHING,
    outline: asFeature(sources.boundary),
    colours: look.colours,
    theme: look.theme,
  });
  const areas: Record<string, SourceSpecification> =
    sources.areas === null ? {} : { areas: { ...style.sources.canals, tiles: [sources.areas] } as SourceSpecification };
  return {
    ...style,
    sources: { ...style.sources, [OUTLINES]: style.sources.parcels, ...areas },
    layers: style.layers.flatMap((layer) => [
      ...forScreen(layer, look),
      ...(layer.id === 'parcel-edges' && sources.areas !== null ? areaLayers(look.theme) : []),
    ]),
  };
}

/** Service areas as outlines, above the parcels and below the canals; the long dash tells them from the boundary without colour. */
function areaLayers(theme: Theme): LayerSpecification[] {
  const source = { source: 'areas', 'source-layer': 'areas', layout: { 'line-join': 'round' } } as const;
  const width = (more: number): ExpressionSpecification => ['interpolate', ['linear'], ['zoom'], 9, 0.8 + more, 14, 2 + more];
  return [
    {
      id: 'area-casing',
      type: 'line',
      ...source,
      paint: { 'line-color': GROUND[theme].dash, 'line-width': width(1.6), 'line-opacity': 0.7 },
    },
    {
      id: 'areas',
      type: 'line',
      ...source,
      paint: { 'line-color': GROUND[theme].area, 'line-width': width(0), 'line-dasharray': [8, 2, 1.5, 2] },
    },
  ];
}

/** The district keeps its boundary as a geometry or as a feature. */
function asFeature(boundary: unknown): Feature | FeatureCollection {
  if (!boundary) return NOTHING;
  const given = boundary as Feature | FeatureCollection | Feature['geometry'];
  return given.type === 'Feature' || given.type === 'FeatureCollection' ? given : { type: 'Feature', properties: {}, geometry: given };
}

function forScreen(layer: LayerSpecification, look: FillLook): LayerSpecification[] {
  const ground = GROUND[look.theme];
  if (layer.id === 'sites') return [];
  if (layer.id === 'district-outline')
    return [{ id: 'land', type: 'fill', source: 'district', paint: { 'fill-color': ground.land } }, layer];
  if (layer.id === 'parcels' && layer.type === 'fill') {
    return [{ ...layer, paint: { ...layer.paint, 'fill-color': fillColour(look) } }];
  }
  if (layer.id === 'parcel-edges' && layer.type === 'line') return [{ ...layer, source: OUTLINES }];
  return layer.id === 'canals' ? [layer, overLayer(ground.dash)] : [layer];
}

/** Dashes along a canal that carries more than its capacity: seen without colour. */
function overLayer(dash: string): LayerSpecification {
  return {
    id: 'canal-over',
    type: 'line',
    source: 'canals',
    'source-layer': 'canals',
    paint: {
      'line-color': dash,
      'line-width': ['interpolate', ['linear'], ['zoom'], 9, 0.8, 14, 3],
      'line-dasharray': [3, 2],
      'line-opacity': ['case', ['>', ['coalesce', ['feature-state', 'share'], -1], 1], 1, 0],
    },
  };
}
