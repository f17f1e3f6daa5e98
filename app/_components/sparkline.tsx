import { scaleLinear } from 'd3-scale';
import { markClass, seriesPath } from './chart-frame.tsx';
import { plain } from './figures.ts';

const WIDTH = 150;
const HEIGHT = 30;

/** A small line of a daily series inside a table row, with its range in words for a reader who cannot see it. */
export function Sparkline({ values, name, unit }: { values: readonly number[]; name: string; unit: string }) {
  const known = values.filter(Number.isFinite);
  if (known.length === 0) return <span className="muted">no values</span>;
  const most = known.reduce((a, b) => Math.max(a, b));
  const mean = known.reduce((a, b) => a + b, 0) / known.length;
  const x = scaleLinear()
    .domain([0, values.length - 1])
    .range([1, WIDTH - 1]);
  const y = scaleLinear()
    .domain([0, most])
    .range([HEIGHT - 2, 2]);
  return (
    <svg
      width={WIDTH}
      height={HEIGHT}
      viewBox={`0 0 ${WIDTH} ${HEIGHT}`}
      role="img"
      aria-label={`${name}: mean ${plain(mean, 1)}, greatest ${plain(most, 1)} ${unit}`}
    >
      <line className={markClass('quiet')} strokeOpacity={0.4} x1={1} x2={WIDTH - 1} y1={HEIGHT - 2} y2={HEIGHT - 2} />
      <path className={markClass('cropEt')} strokeWidth={1.25} d={seriesPath(values, x, y)} />
    </svg>
  );
}
