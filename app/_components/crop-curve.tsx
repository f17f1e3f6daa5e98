import { scaleLinear } from 'd3-scale';
import { type StageCoefficients, type StageLengths, stageCoefficient, totalLength } from '../../lib/crop/curve.ts';
import { type Box, ChartFrame, markClass, NamedAxis, seriesPath, ValueAxis, valueScale } from './chart-frame.tsx';
import { plain } from './figures.ts';

const BOX: Box = { left: 48, right: 720, top: 30, bottom: 190 };
const STAGES = ['initial', 'development', 'mid', 'late'] as const;
const NAMES = { initial: 'initial', development: 'development', mid: 'mid-season', late: 'late' } as const;

/** Basal crop coefficient through a calendar, as the run's own curve gives it before the climate adjustment. */
export function CropCurve({
  id,
  title,
  lengths,
  coefficients,
}: {
  id: string;
  title: string;
  lengths: StageLengths;
  coefficients: StageCoefficients;
}) {
  const total = totalLength(lengths);
  const values = Array.from({ length: total }, (_, at) => stageCoefficient(lengths, coefficients, at + 1));
  const x = scaleLinear().domain([0, total]).range([BOX.left, BOX.right]);
  const y = valueScale([values, [1]], BOX);
  const edges = stageEdges(lengths);
  return (
    <ChartFrame id={id} title={title} description={chartWords(lengths, coefficients)} width={740} height={230} narrowest={420}>
      <ValueAxis scale={y} box={BOX} label="Basal crop coefficient Kcb" />
      {edges.map((edge) => (
        <g key={edge.stage}>
          {edge.from > 0 ? (
            <line className={markClass('limit')} x1={x(edge.from)} x2={x(edge.from)} y1={BOX.top} y2={BOX.bottom} strokeOpacity={0.5} />
          ) : null}
          <text x={x((edge.from + edge.to) / 2)} y={BOX.bottom - 6} textAnchor="middle">
            {edge.to - edge.from >= total * 0.08 ? NAMES[edge.stage] : ''}
          </text>
        </g>
      ))}
      <path className={markClass('first')} d={seriesPath(values, (index) => x(index + 0.5), y)} />
      <NamedAxis scale={x} box={BOX} ticks={x.ticks(8).map((offset) => ({ offset, name: plain(offset, 0) }))} label="days from planting" />
    </ChartFrame>
  );
}

/** Where each stage begins and ends [days from planting]. */
export function stageEdges(lengths: StageLengths): { stage: (typeof STAGES)[number]; from: number; to: number }[] {
  let from = 0;
  return STAGES.map((stage) => {
    const edge = { stage, from, to: from + lengths[stage] };
    from = edge.to;
    return edge;
  });
}

function chartWords(lengths: StageLengths, coefficients: StageCoefficients): string {
  return [
    `${plain(coefficients.initial, 2)} for ${lengths.initial} days, rising over ${lengths.development} days to ${plain(coefficients.mid, 2)}`,
    `held for ${lengths.mid} days, then to ${plain(coefficients.end, 2)} over ${lengths.late} days.`,
  ].join(', ');
}
