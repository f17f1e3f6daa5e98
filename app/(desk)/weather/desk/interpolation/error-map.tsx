import type { UnitSystem } from '../../../../../lib/base/units.ts';
import type { CarriedVariableAnswer, InterpolationAnswer } from '../../../../../lib/http/contract/interpolation.ts';
import { ChartFrame } from '../../../../_components/chart-frame.tsx';
import { inUnits, plain, unitOf } from '../../../../_components/figures.ts';
import { type ErrorUnit, inSentence } from './error-units.ts';
import styles from './interpolation.module.css';
import { labelPlaces } from './label-places.ts';
import { type MapFrame, mapFrame } from './map-frame.ts';

const WIDTH = 760;
/** Radius of the largest error and of none [px]. */
const [LARGEST, LEAST] = [22, 3];

interface ErrorMapProps {
  readonly check: InterpolationAnswer;
  readonly shown: CarriedVariableAnswer;
  readonly boundary: unknown;
  readonly unit: ErrorUnit;
  readonly units: UnitSystem;
}

/** Stations on the district's outline: circle area by RMSE, sign and shade by bias, with the numbers beside. */
export function ErrorMap({ check, shown, boundary, unit, units }: ErrorMapProps) {
  const frame = mapFrame(check.sites, boundary, WIDTH);
  const most = shown.site_errors.reduce((high, { rmse }) => Math.max(high, rmse ?? 0), 0);
  const errors = new Map(shown.site_errors.map((each) => [each.site, each]));
  const marks = check.sites.map((site) => markOf(site, errors.get(site.code), { frame, most, unit }));
  const places = labelPlaces(marks, WIDTH);
  return (
    <ChartFrame
      id="error-map"
      title={`Error of ${inSentence(shown.term)} at the stations, ${unit.unit}`}
      description={`${check.sites.length} stations; the table below has the same figures.`}
      width={WIDTH}
      height={frame.height}
      narrowest={560}
    >
      {frame.outline.map((d) => (
        <path key={d} className={styles.outline} d={d} />
      ))}
      {marks.map((mark) => (
        <g key={mark.code} transform={`translate(${mark.x} ${mark.y})`}>
          <circle className={styles[mark.tone]} r={mark.radius} />
          <text className={styles.sign} textAnchor="middle" dy="0.35em">
            {{ high: '+', low: '−', unknown: '' }[mark.tone]}
          </text>
        </g>
      ))}
      {marks.map((mark, at) => (
        <text key={mark.code} className={styles.label} transform={`translate(${mark.x + places[at].dx} ${mark.y + places[at].dy})`}>
          <tspan x={0} y={0}>
            {mark.code}
          </tspan>
          <tspan x={0} y={14}>
            {mark.words}
          </tspan>
        </text>
      ))}
      <ScaleBar frame={frame} units={units} />
      <text className={styles.label} x={WIDTH - 8} y={frame.height - 10} textAnchor="end">
        bias; RMSE
      </text>
    </ChartFrame>
  );
}

interface Mark {
  readonly code: string;
  readonly x: number;
  readonly y: number;
  readonly radius: number;
  readonly tone: 'high' | 'low' | 'unknown';
  readonly words: string;
}

/** A station as a circle: its area grows with the RMSE. */
function markOf(
  { code, longitude, latitude }: InterpolationAnswer['sites'][number],
  error: CarriedVariableAnswer['site_errors'][number] | undefined,
  { frame, most, unit }: { frame: MapFrame; most: number; unit: ErrorUnit },
): Mark {
  const [x, y] = frame.point(longitude, latitude);
  if (!error || error.bias === null || error.rmse === null)
    return { code, x, y, radius: LEAST, tone: 'unknown', words: 'nothing measured' };
  const words = `${signed(error.bias * unit.factor, unit)}; ${plain(error.rmse * unit.factor, unit.decimals)}`;
  const radius = LEAST + (LARGEST - LEAST) * Math.sqrt(most > 0 ? error.rmse / most : 0);
  return { code, x, y, radius, tone: error.bias < 0 ? 'low' : 'high', words };
}

/** @example signed(-0.123, { unit: 'mm', factor: 1, decimals: 2 }) // '−0.12' */
function signed(value: number, { decimals }: ErrorUnit): string {
  return `${value < 0 ? '−' : '+'}${plain(Math.abs(value), decimals)}`;
}

function ScaleBar({ frame, units }: { frame: MapFrame; units: UnitSystem }) {
  const perUnit = frame.pixelsPerKm / inUnits(1, 'distance', units);
  const wanted = 140 / perUnit;
  const power = 10 ** Math.floor(Math.log10(wanted));
  const length = power * ([5, 2, 1].find((step) => step * power <= wanted) ?? 1);
  return (
    <g transform={`translate(8 ${frame.height - 12})`}>
      <path className={styles.scale} d={`M0 -5V0H${length * perUnit}V-5`} />
      <text className={styles.label} x={length * perUnit + 6} y={0}>
        {length} {unitOf('distance', units)}
      </text>
    </g>
  );
}
