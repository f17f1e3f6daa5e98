import { scaleLinear } from 'd3-scale';
import type { PreviewAnswer } from '../../../../../lib/http/contract/quality.ts';
import { type Box, ChartFrame, markClass, NamedAxis, seriesPath, ValueAxis, valueScale } from '../../../../_components/chart-frame.tsx';
import { DataTable, FactList, FiguresBelow } from '../../../../_components/data-table.tsx';
import { plain, significant } from '../../../../_components/figures.ts';
import { termOf } from './quality-words.ts';

const BOX: Box = { left: 56, right: 630, top: 34, bottom: 190 };

/** What a decision would make of the values and of reference ET. */
export function Preview({ preview }: { preview: PreviewAnswer }) {
  const { reference_et_before_mm: before, reference_et_after_mm: after } = preview;
  const change = before === null || after === null ? null : after - before;
  return (
    <div className="stack" role="status" aria-label="Preview">
      <FactList
        facts={[
          ['Days changed', `${preview.changed_days} of ${preview.day_count}`],
          [
            'Reference ET of the period',
            before === null ? 'cannot be computed from this station alone' : `${plain(before, 1)} mm now, ${plain(after, 1)} mm with it`,
          ],
          ...(change === null ? [] : [['Change', `${change > 0 ? '+' : ''}${plain(change, 1)} mm`] as const]),
        ]}
      />
      <PreviewChart preview={preview} />
    </div>
  );
}

function PreviewChart({ preview: { days, variable, unit, truncated } }: { preview: PreviewAnswer }) {
  if (days.length === 0) return null;
  const pick = (name: 'raw' | 'standing' | 'corrected') => days.map((day) => day[name] ?? Number.NaN);
  const [raw, standing, corrected] = [pick('raw'), pick('standing'), pick('corrected')];
  const x = scaleLinear().domain([0, days.length]).range([BOX.left, BOX.right]);
  const middle = (day: number) => x(day + 0.5);
  const y = valueScale([raw, standing, corrected], BOX, true);
  const step = Math.max(1, Math.ceil(days.length / 6));
  const ticks = days
    .map(({ date }, offset) => ({ offset, name: days.length > 300 ? date.slice(0, 7) : date.slice(5) }))
    .filter((_, at) => at % step === 0);
  return (
    <ChartFrame
      id="preview"
      title="Before and after"
      description={`${termOf(variable)}, ${days.length} days from ${days[0].date}: as stored, and with the decision.`}
      width={640}
      height={240}
      narrowest={360}
      legend={[
        { label: 'As stored', mark: 'first' },
        { label: 'With this decision', mark: 'third' },
      ]}
      below={
        <FiguresBelow summary={`The figures as a table (${days.length} days${truncated ? ', the first of more' : ''})`}>
          <DataTable
            caption="Before and after, day by day"
            rows={days}
            rowKey={(day) => day.date}
            columns={[
              { key: 'date', head: 'Day', rowHead: true, oneLine: true, cell: (day) => day.date },
              { key: 'raw', head: 'As stored', unit, numeric: true, cell: (day) => significant(day.raw, 4) },
              { key: 'standing', head: 'As decided now', unit, numeric: true, cell: (day) => significant(day.standing, 4) },
              { key: 'corrected', head: 'With this', unit, numeric: true, cell: (day) => significant(day.corrected, 4) },
              { key: 'before', head: 'Reference ET now', unit: 'mm', numeric: true, cell: (day) => plain(day.reference_et_before_mm, 2) },
              { key: 'after', head: 'With this', unit: 'mm', numeric: true, cell: (day) => plain(day.reference_et_after_mm, 2) },
            ]}
          />
        </FiguresBelow>
      }
    >
      <ValueAxis scale={y} box={BOX} label={`${termOf(variable)}, ${unit}`} ticks={4} />
      <path className={markClass('first')} d={seriesPath(raw, middle, y)} />
      <path className={markClass('third')} d={seriesPath(corrected, middle, y)} />
      {days.length === 1 ? <OneDay raw={raw[0]} corrected={corrected[0]} x={middle(0)} y={y} /> : null}
      <NamedAxis scale={x} box={BOX} ticks={ticks} label="Day" />
    </ChartFrame>
  );
}

function OneDay({ raw, corrected, x, y }: { raw: number; corrected: number; x: number; y: (value: number) => number }) {
  return (
    <>
      {Number.isFinite(raw) ? <circle className={markClass('first')} cx={x} cy={y(raw)} r={4} /> : null}
      {Number.isFinite(corrected) ? <circle className={markClass('third')} cx={x} cy={y(corrected)} r={4} /> : null}
    </>
  );
}
