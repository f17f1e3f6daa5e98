'use client';

import type { UnitSystem } from '../../../lib/base/units.ts';
import { CAPACITY_COLOURS, type Theme } from '../../../lib/report/colour-scale.ts';
import { formatFlow } from '../../../lib/report/quantity-text.ts';
import styles from './demand-map.module.css';
import type { LayerName } from './parcel-map.ts';
import { SHARE_WORDS } from './reach-flows.ts';

export type Layers = Readonly<Record<LayerName, boolean>>;

const NAMES: readonly { id: LayerName; name: string }[] = [
  { id: 'parcels', name: 'Parcels' },
  { id: 'canals', name: 'Canals' },
  { id: 'areas', name: 'Service areas' },
  { id: 'stations', name: 'Weather stations' },
  { id: 'boundary', name: 'District boundary' },
];

export function LayerSwitches(props: {
  layers: Layers;
  /** false in a district without service areas, which are then not offered */
  hasAreas: boolean;
  patterns: boolean;
  onLayers: (layers: Layers) => void;
  onPatterns: (on: boolean) => void;
}) {
  return (
    <fieldset className={`${styles.block} no-print`}>
      <legend className={styles.blockName}>Layers</legend>
      <div className={styles.switches}>
        {NAMES.filter(({ id }) => id !== 'areas' || props.hasAreas).map((layer) => (
          <label key={layer.id} className="check small">
            <input
              type="checkbox"
              checked={props.layers[layer.id]}
              onChange={(event) => props.onLayers({ ...props.layers, [layer.id]: event.target.checked })}
            />
            {layer.name}
          </label>
        ))}
        <label className="check small">
          <input type="checkbox" checked={props.patterns} onChange={(event) => props.onPatterns(event.target.checked)} />
          Patterns
        </label>
      </div>
    </fieldset>
  );
}

/** Width in the legend of a share of the greatest flow: the map's own width when the whole of a district is in view. */
function sampleWidth(part: number): number {
  return 1 + 6.75 * Math.sqrt(part);
}

/** Canals: colour and dash by the share of capacity that the busiest week shown asks for, width by flow. */
export function CanalLegend({ most, units, theme }: { most: number; units: UnitSystem; theme: Theme }) {
  return (
    <section className={styles.block} aria-label="Legend of the canals">
      <h2 className={styles.blockName}>Canals: busiest week ÷ capacity</h2>
      <ul className={styles.canals}>
        {SHARE_WORDS.map(({ kind, words }) => (
          <li key={kind}>
            <svg width="30" height="10" aria-hidden="true">
              <line x1="0" x2="30" y1="5" y2="5" stroke={CAPACITY_COLOURS[theme][kind]} strokeWidth="6" />
              {kind === 'over' ? <line x1="0" x2="30" y1="5" y2="5" stroke="var(--sheet)" strokeWidth="2.5" strokeDasharray="6 4" /> : null}
            </svg>
            {words}
          </li>
        ))}
      </ul>
      {most > 0 ? (
        <ul className={styles.canals}>
          {[1, 0.25, 0.04].map((part) => (
            <li key={part}>
              <svg width="30" height="12" aria-hidden="true">
                <line x1="0" x2="30" y1="6" y2="6" stroke="var(--ink-2)" strokeWidth={sampleWidth(part)} />
              </svg>
              {formatFlow(part * most, units)}
            </li>
          ))}
        </ul>
      ) : null}
    </section>
  );
}
