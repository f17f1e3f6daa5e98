import { scaleLinear } from 'd3-scale';
import type { UnitSystem } from '../../../../../lib/base/units.ts';
import type { Semivariogram } from '../../../../../lib/http/contract/interpolation.ts';
import { semivariance } from '../../../../../lib/weather/variogram.ts';
import { type Box, ChartFrame, markClass, NamedAxis, seriesPath, ValueAxis, valueScale } from '../../../../_components/chart-frame.tsx';
import { DataTable, FiguresBelow } from '../../../../_components/data-table.tsx';
import { figure, inUnits, plain, significant, unitOf } from '../../../../_components/figures.ts';
import { type ErrorUnit, squareOf } from './error-units.ts';
import styles from './interpolation.module.css';

const WIDTH = 760;
const HEIGHT = 300;
const BOX: Box = { left: 58, right: 740, top: 34, bottom: 240 };
/** Points of the drawn curve. */
const STEPS = 120;

const TREND_WORDS: Readonly<Record<string, string>> = {
  none: 'as measured',
  'lapse-rate': 'with the lapse rate taken off',
  fitted: 'with the fitted elevation trend taken off',
};

interface VariogramChartProps {
  readonly variogram: Semivariogram;
  readonly unit: ErrorUnit;
  readonly units: UnitSystem;
}

/** Classes as points, the number of pairs beside them, and the fitted model as a line. */
export function VariogramChart({ variogram, unit, units }: VariogramChartProps) {
  const square = unit.factor ** 2;
  const title = `Semivariogram ${TREND_WORDS[variogram.trend]}`;
  const furthest = variogram.classes.reduce((most, { distance_km }) => Math.max(most, distance_km), 0) * 1.05;
  const along = scaleLinear()
    .domain([0, inUnits(furthest, 'distance', units)])
    .nice(5)
    .range([BOX.left, BOX.right]);
  const model = {
    kind: variogram.model,
    nugget: variogram.nugget,
    partialSill: variogram.partial_sill,
    range: variogram.range_km ?? Number.NaN,
  };
  // the nugget stands at distance 0 too, as the value the curve comes from
  const curve = Array.from({ length: STEPS + 1 }, (_, i) => square * semivariance(model, Math.max(1e-9, (furthest * i) / STEPS)));
  const y = valueScale([variogram.classes.map((each) => square * each.semivariance), curve], BOX);
  const x = (km: number) => along(inUnits(km, 'distance', units));
  return (
    <ChartFrame
      id={`semivariogram-${variogram.trend}`}
      title={title}
      description={modelWords(variogram, unit, units)}
      width={WIDTH}
      height={HEIGHT}
      narrowest={520}
      below={<ClassFigures variogram={variogram} unit={unit} units={units} title={title} />}
    >
      <ValueAxis scale={y} box={BOX} label={`Semivariance, ${squareOf(unit.unit)}`} />
      <NamedAxis
        scale={along}
        box={BOX}
        ticks={along.ticks(6).map((offset) => ({ offset, name: String(offset) }))}
        label={`Distance between two stations, ${unitOf('distance', units)}`}
      />
      <path className={markClass('first')} d={seriesPath(curve, (i) => x((furthest * i) / STEPS), y)} />
      {variogram.classes.map(({ distance_km, semivariance: value, pair_count }) => (
        <g key={distance_km} transform={`translate(${x(distance_km)} ${y(square * value)})`}>
          <circle className={styles.point} r={4} />
          <text className={styles.count} x={7} y={-5}>
            {pair_count}
          </text>
        </g>
      ))}
    </ChartFrame>
  );
}

function modelWords({ model, nugget, partial_sill, range_km }: Semivariogram, unit: ErrorUnit, units: UnitSystem): string {
  const square = unit.factor ** 2;
  const value = (metric: number) => `${significant(square * metric, 4)} ${squareOf(unit.unit)}`;
  const start = `Fitted model: ${model}, nugget ${value(nugget)}`;
  if (model === 'nugget') return `${start}: distance tells nothing.`;
  const distance = `${figure(range_km, 'distance', units)} ${unitOf('distance', units)}`;
  if (model === 'linear') return `${start}, rising by ${value(partial_sill)} over ${distance}.`;
  return `${start}, partial sill ${value(partial_sill)}, range parameter ${distance}.`;
}

function ClassFigures({ variogram, unit, units, title }: VariogramChartProps & { title: string }) {
  return (
    <>
      <p className="small">{modelWords(variogram, unit, units)} The number at a point counts its pairs of stations.</p>
      <FiguresBelow summary="The classes as a table">
        <DataTable
          caption={title}
          rows={variogram.classes}
          rowKey={({ distance_km }) => String(distance_km)}
          columns={[
            {
              key: 'distance',
              head: 'Distance',
              unit: unitOf('distance', units),
              numeric: true,
              rowHead: true,
              cell: (row) => figure(row.distance_km, 'distance', units),
            },
            { key: 'pairs', head: 'Pairs', numeric: true, cell: (row) => plain(row.pair_count, 0) },
            {
              key: 'semivariance',
              head: 'Semivariance',
              unit: squareOf(unit.unit),
              numeric: true,
              cell: (row) => significant(unit.factor ** 2 * row.semivariance, 4),
            },
          ]}
        />
      </FiguresBelow>
    </>
  );
}
