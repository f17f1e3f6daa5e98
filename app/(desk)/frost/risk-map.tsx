import type { UnitSystem } from '../../../lib/base/units.ts';
import type { FrostAnswer } from '../../../lib/http/contract/frost.ts';
import { ChartFrame } from '../../_components/chart-frame.tsx';
import { mapFrame } from '../weather/desk/interpolation/map-frame.ts';
import styles from './frost.module.css';
import { degree, RISKS, temperature } from './frost-words.ts';

const WIDTH = 760;

interface RiskMapProps {
  readonly night: FrostAnswer;
  readonly shapes: ReadonlyMap<string, unknown>;
  readonly boundary: unknown;
  readonly units: UnitSystem;
}

/** Plantings by risk, told apart by pattern as well as by shade, and the minimum expected at the stations. */
export function RiskMap({ night, shapes, boundary, units }: RiskMapProps) {
  const drawn = night.items.flatMap((row) => {
    const rings = ringsOf(shapes.get(row.parcel));
    return rings.length > 0 ? [{ row, rings }] : [];
  });
  const corners = drawn.map(({ rings }) => ({ longitude: rings[0][0][0], latitude: rings[0][0][1] }));
  const frame = mapFrame([...night.stations, ...corners], boundary, WIDTH);
  const path = (rings: readonly (readonly number[][])[]) =>
    rings.map((ring) => `M${ring.map(([longitude, latitude]) => frame.point(longitude, latitude).join(' ')).join('L')}Z`).join('');
  return (
    <>
      <ChartFrame
        id="frost-map"
        title={`Risk of frost on the plantings, and minimum expected at the stations, ${degree(units)}`}
        description="The table below has the plantings at risk with their figures."
        width={WIDTH}
        height={frame.height}
        narrowest={560}
      >
        <Patterns />
        {frame.outline.map((d) => (
          <path key={d} className={styles.outline} d={d} />
        ))}
        {drawn.map(({ row, rings }) => (
          <path key={`${row.parcel}/${row.planting}`} className={styles[row.risk ?? 'unknown']} d={path(rings)} fillRule="evenodd" />
        ))}
        {night.stations.map((station) => {
          const [x, y] = frame.point(station.longitude, station.latitude);
          return (
            <g key={station.site} transform={`translate(${x} ${y})`}>
              <circle className={styles.station} r={4} />
              <text className={styles.label} x={8} dy="0.35em">
                {station.site} {temperature(station.minimum_c, units)}
              </text>
            </g>
          );
        })}
      </ChartFrame>
      <ul className={styles.legend} aria-label="Risk">
        {[...RISKS, { risk: 'unknown' as const, name: 'Dormant or not known', says: '' }].map(({ risk, name, says }) => (
          <li key={risk}>
            <svg width="26" height="14" aria-hidden="true">
              <rect x="1" y="1" width="24" height="12" className={styles[risk]} />
            </svg>
            <span>
              {name}
              {says ? <span className="small muted">: {says}</span> : null}
            </span>
          </li>
        ))}
      </ul>
    </>
  );
}

function Patterns() {
  return (
    <defs>
      <pattern id="frost-slant" width="5" height="5" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
        <rect width="5" height="5" className={styles.slantBack} />
        <line x1="0" y1="0" x2="0" y2="5" className={styles.slantStroke} />
      </pattern>
      <pattern id="frost-dots" width="4" height="4" patternUnits="userSpaceOnUse">
        <rect width="4" height="4" className={styles.dotBack} />
        <circle cx="1.5" cy="1.5" r="0.8" className={styles.dot} />
      </pattern>
    </defs>
  );
}

function ringsOf(geometry: unknown): number[][][] {
  const { type, coordinates } = (geometry ?? {}) as { type?: string; coordinates?: unknown };
  if (type === 'Polygon') return coordinates as number[][][];
  return type === 'MultiPolygon' ? (coordinates as number[][][][]).flat() : [];
}
