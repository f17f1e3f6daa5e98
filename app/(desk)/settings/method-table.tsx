import type { UnitSystem } from '../../../lib/base/units.ts';
import type { MethodAnswer } from '../../../lib/http/contract/rest.ts';
import { type Column, DataTable } from '../../_components/data-table.tsx';
import { figure, inUnits, percent, plain, unitOf } from '../../_components/figures.ts';
import { MethodForm } from '../../_components/method-form.tsx';
import { Section } from '../../_components/page-head.tsx';

interface PublishedRange {
  readonly of: string;
  readonly attainable: string;
  readonly range: string;
}

/** Field application efficiency: attainable, and range [%]. Source: Howell 2003, Encyclopedia of Water Science, Irrigation efficiency (recalled, not re-read). */
const PUBLISHED: readonly PublishedRange[] = [
  { of: 'Graded furrow', attainable: '75', range: '50–80' },
  { of: 'Level furrow', attainable: '85', range: '65–95' },
  { of: 'Graded border', attainable: '80', range: '50–80' },
  { of: 'Level basin', attainable: '90', range: '80–95' },
  { of: 'Periodic move, side roll', attainable: '80', range: '60–85' },
  { of: 'Big gun', attainable: '75', range: '55–75' },
  { of: 'Pivot with impact heads', attainable: '85', range: '75–90' },
  { of: 'Pivot with spray heads', attainable: '95', range: '75–95' },
  { of: 'Low-pressure drops in the furrow', attainable: '98', range: '80–98' },
  { of: 'Drip, micro-irrigation', attainable: '95', range: '70–95' },
];

/** How water is put on the fields, and for a manager the form to change each. */
export function MethodTable({ methods, units, manages }: { methods: readonly MethodAnswer[]; units: UnitSystem; manages: boolean }) {
  return (
    <Section
      id="methods"
      title="Application methods"
      note="How water is put on the fields: efficiency turns what the crops need into what is taken at the turnout. The values a district starts with are indicative; enter your own where they were measured."
    >
      <DataTable
        caption="Application methods of the district"
        columns={columnsIn(units)}
        rows={methods}
        rowKey={(method) => method.code}
        unitsBelow
      />
      {manages ? (
        <details className="stack no-print">
          <summary>Change</summary>
          {methods.map((method) => (
            <details key={method.code} className="stack">
              <summary>{method.name}</summary>
              <MethodForm method={method} />
            </details>
          ))}
        </details>
      ) : null}
      <details className="stack">
        <summary>What efficiencies are usual?</summary>
        <DataTable
          caption="Published field application efficiencies"
          rows={PUBLISHED}
          rowKey={(row) => row.of}
          columns={[
            { key: 'of', head: 'Method', rowHead: true, cell: (row) => row.of },
            { key: 'attainable', head: 'Attainable', unit: '%', numeric: true, cell: (row) => row.attainable },
            { key: 'range', head: 'Range', unit: '%', numeric: true, cell: (row) => row.range },
          ]}
        />
        <p className="source">
          Howell (2003), Irrigation efficiency, Encyclopedia of Water Science (recalled, not re-read). FAO Irrigation Water Management
          Training Manual 4 (recalled): surface 60 %, sprinkler 75 %, drip 90 %.
        </p>
      </details>
    </Section>
  );
}

function columnsIn(units: UnitSystem): Column<MethodAnswer>[] {
  const depth = unitOf('depth', units);
  return [
    { key: 'name', head: 'Method', rowHead: true, wide: true, cell: (method) => method.name },
    { key: 'efficiency', head: 'Efficiency', numeric: true, cell: (method) => efficiencyText(method, units) },
    {
      key: 'least',
      head: 'Least depth',
      unit: depth,
      numeric: true,
      cell: (method) => (method.minimum_depth_mm === null ? '–' : figure(method.minimum_depth_mm, 'depth', units)),
    },
    {
      key: 'most',
      head: 'Most in a day',
      unit: depth,
      numeric: true,
      cell: (method) => figure(method.maximum_daily_depth_mm, 'depth', units),
    },
    {
      key: 'flow',
      head: 'Flow',
      unit: 'L/s per ha',
      numeric: true,
      cell: (method) => (method.flow_l_s_ha === null ? '–' : plain(method.flow_l_s_ha, 2)),
    },
    { key: 'trigger', head: 'Starts at', unit: 'of RAW', numeric: true, cell: (method) => percent(method.trigger_fraction) },
    { key: 'source', head: 'Source', wide: true, cell: (method) => <span className="small">{method.source}</span> },
  ];
}

function efficiencyText({ efficiency, efficiency_by_depth: points }: MethodAnswer, units: UnitSystem): string {
  if (points.length === 0) return percent(efficiency);
  const decimals = units === 'us' ? 1 : 0;
  return points
    .map((point) => `${percent(point.efficiency)} at ${plain(inUnits(point.depth_mm, 'depth', units), decimals)} ${unitOf('depth', units)}`)
    .join(', ');
}
