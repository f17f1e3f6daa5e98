'use client';

import type { UnitSystem } from '../../../lib/base/units.ts';
import { inUnits, plain, unitOf } from '../figures.ts';
import { ClassSwatch } from './class-swatch.tsx';
import styles from './demand-map.module.css';
import type { LegendRow } from './map-classes.ts';
import { type MapVariable, unitOfVariable } from './map-variables.ts';

/** Area in every class as a bar; pressing a class leaves the others faint on the map. */
export function ClassLegend(props: {
  rows: readonly LegendRow[];
  variable: MapVariable;
  units: UnitSystem;
  patterns: boolean;
  picked: ReadonlySet<number>;
  onPick: (index: number) => void;
  onClear: () => void;
}) {
  const { rows, units, picked } = props;
  const most = rows.reduce((top, row) => Math.max(top, row.area), 0);
  const unit = unitOfVariable(props.variable, units);
  return (
    <section className={styles.block} aria-label="Legend: area in each class">
      <div className={styles.legendHead}>
        <h2 className={styles.blockName}>
          {props.variable.name}
          {unit ? <span className="unit"> {unit}</span> : null}
        </h2>
        <span className="small muted">area, {unitOf('area', units)}</span>
      </div>
      <ul className={styles.legend}>
        {rows.map((row) => (
          <li key={row.index}>
            <button
              type="button"
              aria-pressed={picked.has(row.index)}
              data-faint={picked.size > 0 && !picked.has(row.index)}
              onClick={() => props.onPick(row.index)}
            >
              <ClassSwatch colour={row.colour} pattern={row.pattern} shown={props.patterns} />
              <span>{row.text}</span>
              <span className={styles.legendArea}>{areaText(row.area, units)}</span>
              <span className={styles.legendBar} style={{ width: `${most > 0 ? (row.area / most) * 100 : 0}%`, background: row.colour }} />
              <span className="visually-hidden">, {row.count} parcels</span>
            </button>
          </li>
        ))}
      </ul>
      {picked.size > 0 ? (
        <button type="button" className="button quiet no-print" onClick={props.onClear}>
          Show every class
        </button>
      ) : null}
    </section>
  );
}

/** Three digits are enough beside a bar. */
function areaText(area: number, units: UnitSystem): string {
  const shown = inUnits(area / 1e4, 'area', units);
  return plain(shown, shown >= 100 ? 0 : shown >= 10 ? 1 : 2);
}
