/**
 * Polygons that are not parcels (service areas, soil polygons): coded, repaired, measured, and shown on the preview map.
 */
import type { MultiPolygon, Polygon } from 'geojson';
import { boxOf } from '../geo/point-inside.ts';
import { type RepairNote, repairPolygon } from '../geo/polygon-repair.ts';
import { codeFault } from './code-text.ts';
import { type BoundProperties, textOf } from './feature-properties.ts';
import { type FindingList, shown } from './finding-list.ts';
import { MapPreviewFeatures } from './map-preview.ts';
import { NOTE_TEXT, reportCrossing, reportFault } from './parcel-outline.ts';
import type { RawFeature } from './raw-feature.ts';

/** A sound polygon with its code. */
export interface AreaPolygon {
  readonly feature: RawFeature;
  readonly code: string;
  readonly geometry: Polygon | MultiPolygon;
  /** m², on the WGS 84 ellipsoid */
  readonly area: number;
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
}

interface AreaRequest {
  readonly features: readonly RawFeature[];
  readonly properties: BoundProperties;
  readonly findings: FindingList;
  /** what the polygons are, with a capital */
  readonly thing: string;
  /** code of a feature without one, from its number in the file; null refuses it */
  readonly numbered: (row: number) => string | null;
  /** takes a sound polygon; answers why it is left out, if it is, and what the map says of it */
  readonly take: (polygon: AreaPolygon) => { readonly refused?: string; readonly says?: string | null };
}

/** Goes through the features; what is at fault becomes a finding, and everything a feature of the preview. */
export function takeAreaPolygons(request: AreaRequest): MapPreviewFeatures {
  const { features, findings, thing } = request;
  const preview = new MapPreviewFeatures();
  const rows = new Map<string, number>();
  const repairs = new Map<RepairNote, number>();
  for (const feature of features) {
    const { row } = feature;
    const code = codeOf(feature, request);
    const refuse = (reason: string) => preview.add({ row, code, status: 'refused', reason }, feature.geometry);
    if (!feature.geometry) {
      refuse(feature.problem ?? 'no geometry');
      continue;
    }
    const fault = code === null ? { code: 'missing-code', message: `The ${thing.toLowerCase()} has no code.` } : faultOf(thing, code, rows);
    if (code === null || fault) {
      refuse(fault?.message ?? '');
      const header = request.properties.bound.get('code')?.header;
      findings.error({
        advice: 'Give it a code of its own.',
        ...fault,
        code: fault?.code ?? '',
        message: fault?.message ?? '',
        ...at(feature, header, code),
      });
      continue;
    }
    const repaired = repairPolygon(feature.geometry as Polygon | MultiPolygon);
    if (repaired.geometry === null) {
      refuse(reportFault(feature, code, repaired, findings, thing));
      continue;
    }
    for (const note of repaired.notes) repairs.set(note, (repairs.get(note) ?? 0) + 1);
    const change = reportCrossing(feature, code, repaired, findings, thing);
    const [west, south, east, north] = boxOf(repaired.geometry);
    const area = Math.round(repaired.area * 1000) / 1000;
    const { refused, says } = request.take({ feature, code, geometry: repaired.geometry, area, west, south, east, north });
    if (refused !== undefined) {
      refuse(refused);
      continue;
    }
    rows.set(code, row);
    const reason = [change, says].filter((part) => part).join(' ') || null;
    preview.add({ row, code, status: change ? 'repaired' : 'ok', reason }, repaired.geometry);
  }
  for (const [note, count] of repairs)
    findings.note({ code: `polygon-${note}`, message: `${count} ${count === 1 ? 'polygon' : 'polygons'} ${NOTE_TEXT[note]}.` });
  return preview;
}

function codeOf(feature: RawFeature, { properties, numbered }: AreaRequest): string | null {
  return properties.bound.has('code') ? textOf(feature, properties.bound, 'code') : numbered(feature.row);
}

function faultOf(thing: string, code: string, rows: ReadonlyMap<string, number>) {
  const earlier = rows.get(code);
  if (earlier === undefined) return codeFault(thing, code);
  return {
    code: 'duplicate-code',
    message: `${thing} ${shown(code)} stands in feature ${earlier} already; the first is kept.`,
    limit: 'one feature per code',
    advice: 'Make one multipolygon of both, or give another code.',
  };
}

function at({ file, row }: RawFeature, column: string | undefined, code: string | null) {
  return { file, row, column, ...(code === null ? {} : { value: shown(code) }) };
}

/** Box around some polygons; null when there are none. */
export function boxAround(
  list: readonly { readonly west: number; readonly south: number; readonly east: number; readonly north: number }[],
): [number, number, number, number] | null {
  if (list.length === 0) return null;
  return list.reduce<[number, number, number, number]>(
    ([west, south, east, north], one) => [
      Math.min(west, one.west),
      Math.min(south, one.south),
      Math.max(east, one.east),
      Math.max(north, one.north),
    ],
    [180, 90, -180, -90],
  );
}
