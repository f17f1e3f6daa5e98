/**
 * The sample of a vector file shown on a map: refused and repaired features first, at most two thousand.
 */
import type { Geometry } from 'geojson';
import { thinGeometry } from '../geo/thin-geometry.ts';
import type { MapPreview } from './reading.ts';

/** Most features of a preview. */
const PREVIEW_FEATURES = 2000;

type PreviewFeature = MapPreview['collection']['features'][number];
type Status = PreviewFeature['properties']['status'];

export class MapPreviewFeatures {
  private readonly kept: Record<Status, PreviewFeature[]> = { refused: [], repaired: [], ok: [] };

  add(properties: PreviewFeature['properties'], geometry: Geometry | null): void {
    const list = this.kept[properties.status];
    if (list.length < PREVIEW_FEATURES) list.push({ type: 'Feature', properties, geometry: geometry && thinGeometry(geometry) });
  }

  preview(): MapPreview {
    const { refused, repaired, ok } = this.kept;
    const features = [...refused, ...repaired, ...ok].slice(0, PREVIEW_FEATURES).sort((a, b) => a.properties.row - b.properties.row);
    return { kind: 'map', collection: { type: 'FeatureCollection', features } };
  }
}
