/** The MapLibre map of parcels and canals: shapes from tiles, numbers as feature state, so that a step of the season moves no geometry. */
import * as maplibregl from 'maplibre-gl';
import type { UnitSystem } from '../../../lib/base/units.ts';
import type { MapDescription } from '../../../lib/http/contract/run.ts';
import { PRINT_PATTERNS, patternOf } from '../../../lib/report/colour-scale.ts';
import { PATTERN_RATIO, patternImage, patternName } from './class-pattern.ts';
import { demandStyle, type FillLook, LAYER_GROUPS, NO_VALUE, NOUGHT, OUTLINES } from './map-look.ts';
import type { ReachFlow } from './reach-flows.ts';

maplibregl.setWorkerUrl(new URL('maplibre-gl/dist/maplibre-gl-worker.mjs', import.meta.url).toString());

export type LayerName = keyof typeof LAYER_GROUPS | 'stations';

export interface ParcelMapEvents {
  /** position of the parcel in the map arrays, or null for open ground */
  readonly onChoose: (position: number | null) => void;
  readonly onPoint: (position: number | null, x: number, y: number) => void;
  readonly onFault: (message: string) => void;
}

interface Options {
  readonly container: HTMLElement;
  readonly description: MapDescription;
  readonly look: FillLook;
  readonly events: ParcelMapEvents;
}

const PARCELS = { source: 'parcels', sourceLayer: 'parcels' } as const;
const EDGES = { source: OUTLINES, sourceLayer: 'parcels' } as const;
const CANALS = { source: 'canals', sourceLayer: 'canals' } as const;

export class ParcelMap {
  private readonly map: maplibregl.Map;
  private readonly description: MapDescription;
  private readonly container: HTMLElement;
  private readonly events: ParcelMapEvents;
  /** tile ordinal → position in the map arrays */
  private readonly positionOf = new Map<number, number>();
  private readonly stations: maplibregl.Marker[] = [];
  private readonly scale = new maplibregl.ScaleControl();
  private classes: Uint8Array | null = null;
  private readonly styled: Promise<void>;
  private near: number | null = null;
  private chosen: number | null = null;

  constructor(options: Options) {
    this.description = options.description;
    this.container = options.container;
    this.events = options.events;
    for (const [position, ordinal] of options.description.parcels.ordinal.entries())
      if (ordinal >= 0) this.positionOf.set(ordinal, position);
    this.map = new maplibregl.Map({
      container: options.container,
      style: demandStyle(this.sources(), options.look),
      bounds: options.description.bounds,
      fitBoundsOptions: { padding: 24, animate: false },
      attributionControl: false,
      dragRotate: false,
      pitchWithRotate: false,
      touchPitch: false,
      maxZoom: 18,
      canvasContextAttributes: { preserveDrawingBuffer: true },
      locale: { 'Map.Title': 'Demand map: parcels and canals of the district' },
    });
    this.styled = new Promise((resolve) => this.map.once('style.load', () => resolve()));
    this.map.touchZoomRotate.disableRotation();
    this.map.addControl(new maplibregl.NavigationControl({ showCompass: false }), 'top-right');
    this.map.addControl(this.scale, 'bottom-left');
    this.listen();
    this.addStations();
    if (navigator.webdriver) Object.assign(window, { __tillwaterMap: this.map });
  }

  private sources() {
    const { tiles, bounds, boundary } = this.description;
    return {
      parcels: location.origin + tiles.parcels,
      canals: location.origin + tiles.canals,
      areas: tiles.areas && location.origin + tiles.areas,
      bounds,
      boundary,
    };
  }

  private listen(): void {
    this.map.on('mousemove', (event) => this.point(event));
    this.map.on('mouseout', () => this.leave());
    this.map.on('click', (event) => this.events.onChoose(this.parcelAt(event.point)));
    this.map.on('error', (event) => this.events.onFault(`Part of the map could not be drawn: ${event.error?.message ?? 'unknown fault'}`));
  }

  private parcelAt(point: maplibregl.PointLike): number | null {
    const ordinal = this.map.queryRenderedFeatures(point, { layers: ['parcels'] })[0]?.id;
    return ordinal === undefined ? null : (this.positionOf.get(Number(ordinal)) ?? null);
  }

  private point(event: maplibregl.MapMouseEvent): void {
    const position = this.parcelAt(event.point);
    if (position !== this.near) {
      this.markParcel(this.near, { hover: false });
      this.markParcel(position, { hover: true });
      this.near = position;
      this.map.getCanvas().style.cursor = position === null ? '' : 'pointer';
    }
    this.events.onPoint(position, event.point.x, event.point.y);
  }

  private leave(): void {
    this.markParcel(this.near, { hover: false });
    this.near = null;
    this.events.onPoint(null, 0, 0);
  }

  private markParcel(position: number | null, state: Record<string, boolean>): void {
    if (position !== null) this.map.setFeatureState({ ...EDGES, id: this.description.parcels.ordinal[position] }, state);
  }

  private addStations(): void {
    for (const site of this.description.sites) {
      const element = document.createElement('a');
      element.className = 'map-station';
      element.href = `/weather/${encodeURIComponent(site.code)}`;
      element.textContent = site.name;
      element.setAttribute('aria-label', `Weather station ${site.name}`);
      this.stations.push(
        new maplibregl.Marker({ element, anchor: 'left', offset: [-5, 0] }).setLngLat([site.longitude, site.latitude]).addTo(this.map),
      );
    }
  }

  /** Resolves when the style can take feature state and paint. */
  ready(): Promise<void> {
    return this.styled;
  }

  /** Class of each parcel, in map order; only those that changed are told to the map. */
  setClasses(classes: Uint8Array): void {
    const began = performance.now();
    const { ordinal } = this.description.parcels;
    for (let position = 0; position < classes.length; position++) {
      if (ordinal[position] < 0 || this.classes?.[position] === classes[position]) continue;
      this.map.setFeatureState({ ...PARCELS, id: ordinal[position] }, { class: classes[position] });
    }
    const first = this.classes === null;
    this.classes = classes;
    this.map.once('render', () => {
      this.container.dataset.stepMs = (performance.now() - began).toFixed(1);
    });
    if (first) this.map.once('idle', () => this.tellReady());
  }

  /** How many parcels are drawn, for whoever waits for the picture. */
  private tellReady(): void {
    const drawn = new Set(this.map.queryRenderedFeatures({ layers: ['parcels'] }).map((feature) => feature.id));
    this.container.dataset.ready = String(drawn.size);
  }

  /** Repaints every layer; shapes and feature state stay. */
  setLook(look: FillLook): void {
    for (const layer of demandStyle(this.sources(), look).layers) {
      for (const [property, value] of Object.entries(layer.paint ?? {})) {
        this.map.setPaintProperty(layer.id, property as Parameters<maplibregl.Map['setPaintProperty']>[1], value);
      }
    }
  }

  /** Width by flow and colour by share of capacity, in the order of the description's reaches. */
  setReaches(flows: readonly ReachFlow[], codes: readonly string[], most: number): void {
    const ordinals = new Map(this.description.reaches.map((reach) => [reach.code, reach.ordinal]));
    for (const [index, code] of codes.entries()) {
      const id = ordinals.get(code);
      if (id === undefined || id < 0) continue;
      const { flow, share } = flows[index];
      this.map.setFeatureState({ ...CANALS, id }, { flow: most > 0 ? flow / most : 0, share: Number.isFinite(share) ? share : null });
    }
  }

  setUnits(units: UnitSystem): void {
    this.scale.setUnit(units === 'us' ? 'imperial' : 'metric');
  }

  setLayers(shown: Readonly<Record<LayerName, boolean>>): void {
    for (const [group, layers] of Object.entries(LAYER_GROUPS)) {
      const visibility = shown[group as LayerName] ? 'visible' : 'none';
      for (const layer of layers) if (this.map.getLayer(layer)) this.map.setLayoutProperty(layer, 'visibility', visibility);
    }
    for (const marker of this.stations) marker.getElement().hidden = !shown.stations;
  }

  /** Patterns over the fills for paper. They cannot follow feature state, so they carry the classes by ordinal. */
  setPatterns(on: boolean, look: FillLook): void {
    if (this.map.getLayer('parcel-pattern')) this.map.removeLayer('parcel-pattern');
    if (on && this.classes) {
      for (const pattern of PRINT_PATTERNS.keys()) {
        if (!this.map.hasImage(patternName(pattern)))
          this.map.addImage(patternName(pattern), patternImage(pattern), { pixelRatio: PATTERN_RATIO });
      }
      const names = this.patternNames(this.classes, look);
      this.map.addLayer(
        {
          id: 'parcel-pattern',
          type: 'fill',
          source: 'parcels',
          'source-layer': 'parcels',
          paint: { 'fill-pattern': ['image', ['at', ['get', 'o'], ['literal', names]]] as unknown as maplibregl.ExpressionSpecification },
        },
        'parcel-edges',
      );
    }
  }

  /** Resolves when everything asked for is on the canvas; leaves the height it was drawn at for the print sheet, so that nothing is cropped. */
  settled(): Promise<void> {
    this.container.parentElement?.style.setProperty('--drawn-height', `${this.container.clientHeight}px`);
    return new Promise((resolve) => {
      this.map.once('idle', () => resolve());
      this.map.triggerRepaint();
    });
  }

  /** Pattern of each tile ordinal; classes that the legend left faint stay blank. */
  private patternNames(classes: Uint8Array, { colours, faint }: FillLook): string[] {
    const most = this.description.parcels.ordinal.reduce((a, b) => Math.max(a, b), -1);
    const names = new Array<string>(most + 1).fill(patternName(0));
    for (const [position, ordinal] of this.description.parcels.ordinal.entries()) {
      const index = classes[position];
      const blank = ordinal < 0 || index === NO_VALUE || index === NOUGHT || faint[index];
      if (!blank) names[ordinal] = patternName(patternOf(index, colours.length));
    }
    return names;
  }

  /** Outlines a parcel as the chosen one. */
  choose(position: number | null): void {
    this.markParcel(this.chosen, { selected: false });
    this.markParcel(position, { selected: true });
    this.chosen = position;
  }

  /** Brings a place into view, unless it is in view already. */
  show(longitude: number, latitude: number): void {
    if (this.map.getBounds().contains([longitude, latitude]) && this.map.getZoom() >= 12) return;
    this.map.easeTo({ center: [longitude, latitude], zoom: Math.max(this.map.getZoom(), 13.5) });
  }

  /** The whole district again. */
  showAll(): void {
    this.map.fitBounds(this.description.bounds, { padding: 24 });
  }

  remove(): void {
    this.map.remove();
  }
}
