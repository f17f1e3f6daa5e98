import { scaleLinear, scaleSqrt } from 'd3-scale';
import type { UnitSystem } from '../../lib/base/units.ts';
import type { ReachPeriod } from '../../lib/http/contract/run.ts';
import { ChartFrame } from './chart-frame.tsx';
import { figureWithUnit, inUnits, percent, shortFlow, unitOf } from './figures.ts';
import styles from './reach-diagram.module.css';
import { type DrawnReach, drawnTree } from './reach-order.ts';
import { capacityWord } from './reach-table.tsx';

const WIDTH = 960;
const LINE = 26;
const TOP = 100;
const LEFT = 24;

type Drawn = DrawnReach<ReachPeriod>;

/** Reaches of each line but the main canal's, head to tail. */
function branchesOf(drawn: readonly Drawn[]): Drawn[][] {
  const lines = new Map<number, Drawn[]>();
  for (const reach of drawn) {
    if (reach.line === 0) continue;
    const branch = lines.get(reach.line);
    if (branch) branch.push(reach);
    else lines.set(reach.line, [reach]);
  }
  return [...lines.values()];
}

/** The canals as a line diagram: lengths true to scale, widths by mean flow, branches below the canal that feeds them. */
export function ReachDiagram({ reaches, units, period }: { reaches: readonly ReachPeriod[]; units: UnitSystem; period: string }) {
  const drawn = drawnTree(reaches);
  const longest = Math.max(...drawn.map((reach) => reach.to), 0.1);
  const x = scaleLinear()
    .domain([0, longest])
    .range([LEFT, WIDTH - 265]);
  const greatest = Math.max(...reaches.map((reach) => reach.mean_inflow_m3_s ?? 0), 1e-9);
  const width = scaleSqrt().domain([0, greatest]).range([1.25, 14]);
  const lines = Math.max(...drawn.map((reach) => reach.line)) + 1;
  const y = (line: number) => TOP + line * LINE;
  return (
    <ChartFrame
      id="diagram"
      title={`Line diagram of the canals, ${period}`}
      description={chartWords(drawn, units)}
      width={WIDTH}
      height={y(lines) + 8}
      below={<Key />}
    >
      <DistanceScale x={x} longest={longest} units={units} />
      {drawn.map((reach) => (
        <ReachLine key={reach.row.reach} reach={reach} x={x} y={y} width={width} units={units} />
      ))}
      {branchesOf(drawn).map((branch) => (
        <BranchLabel key={branch[0].row.reach} branch={branch} x={x} y={y} units={units} />
      ))}
    </ChartFrame>
  );
}

function shareWords(row: ReachPeriod): string {
  return row.capacity_share === null ? 'capacity not known' : `busiest seven days ${percent(row.capacity_share)} of capacity`;
}

interface ReachLineProps {
  readonly reach: Drawn;
  readonly x: (km: number) => number;
  readonly y: (line: number) => number;
  readonly width: (flow: number) => number;
  readonly units: UnitSystem;
}

function ReachLine({ reach, x, y, width, units }: ReachLineProps) {
  const { row, line, parentLine } = reach;
  const word = capacityWord(row.capacity_share);
  const stroke = width(row.mean_inflow_m3_s ?? 0);
  const className = word === 'over capacity' ? styles.over : word === 'tight' ? styles.tight : styles.within;
  return (
    <g>
      <title>{`${row.name}: mean ${figureWithUnit(row.mean_inflow_m3_s, 'flow', units)}, ${shareWords(row)}`}</title>
      {parentLine !== line ? (
        <path className={styles.drop} d={`M${x(reach.from)} ${y(parentLine)}V${y(line)}`} strokeWidth={Math.min(stroke, 4)} />
      ) : null}
      <line
        className={className}
        x1={x(reach.from)}
        x2={Math.max(x(reach.from) + 2, x(reach.to))}
        y1={y(line)}
        y2={y(line)}
        strokeWidth={stroke}
      />
      <line className={styles.joint} x1={x(reach.to)} x2={x(reach.to)} y1={y(line) - 6} y2={y(line) + 6} />
      {line === 0 ? <SlantedLabel reach={reach} x={x((reach.from + reach.to) / 2)} y={y(0) - 12} units={units} /> : null}
    </g>
  );
}

const SIGNS: Readonly<Record<string, string>> = { tight: '◆ ', 'over capacity': '▲ ' };

/** Label of a reach of the main canal: slanted, since its neighbours are near. */
function SlantedLabel({ reach, x, y, units }: { reach: Drawn; x: number; y: number; units: UnitSystem }) {
  const sign = SIGNS[capacityWord(reach.row.capacity_share)] ?? '';
  return (
    <text className={styles.label} transform={`translate(${x} ${y}) rotate(-38)`}>
      {sign}
      {reach.row.reach} {shortFlow(reach.row.mean_inflow_m3_s, units)}
    </text>
  );
}

/** Label of a branch, past its tail: its first reach with its inflow, and the worst state along it. */
function BranchLabel({
  branch,
  x,
  y,
  units,
}: {
  branch: readonly Drawn[];
  x: (km: number) => number;
  y: (line: number) => number;
  units: UnitSystem;
}) {
  const [first, last] = [branch[0], branch[branch.length - 1]];
  const words = branch.map((reach) => capacityWord(reach.row.capacity_share));
  const word = ['over capacity', 'tight'].find((each) => words.includes(each)) ?? '';
  return (
    <text className={styles.label} x={x(last.to) + 8} y={y(first.line) + 4}>
      {SIGNS[word] ?? ''}
      {first.row.name || first.row.reach} {shortFlow(first.row.mean_inflow_m3_s, units)}
      {word ? ` ${word}` : ''}
    </text>
  );
}

function DistanceScale({ x, longest, units }: { x: (km: number) => number; longest: number; units: UnitSystem }) {
  const one = 1 / inUnits(1, 'distance', units);
  const steps = [0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 50];
  const step = steps.find((each) => each * one * 8 >= longest) ?? 100;
  return (
    <g className={styles.scale}>
      <line x1={x(0)} x2={x(step * one)} y1={12} y2={12} />
      <line x1={x(0)} x2={x(0)} y1={8} y2={16} />
      <line x1={x(step * one)} x2={x(step * one)} y1={8} y2={16} />
      <text x={x(step * one) + 6} y={16}>
        {step} {unitOf('distance', units)} · width of a line: mean flow, {unitOf('flow', units)}
      </text>
    </g>
  );
}

function Key() {
  return (
    <p className="small muted">
      Solid: within capacity. Long dashes and ◆: tight, 90 % or more. Short dashes and ▲: over capacity. A reach is held against its
      capacity by the mean of its busiest seven days. The number beside a reach is its mean inflow.
    </p>
  );
}

function chartWords(drawn: readonly Drawn[], units: UnitSystem): string {
  const main = drawn.filter((reach) => reach.line === 0);
  const branches = drawn.filter((reach) => reach.line !== 0 && reach.parentLine !== reach.line);
  return `Main canal of ${main.length} reaches, ${figureWithUnit(main[main.length - 1]?.to, 'distance', units)} long, with ${branches.length} branches. The table has every figure.`;
}
