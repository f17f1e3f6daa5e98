import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { PlantingYieldRow } from '../../../../lib/http/contract/yields.ts';
import { type Column, DataTable } from '../../../_components/data-table.tsx';
import { dateRange } from '../../../_components/date-words.ts';
import { figure, percent, plain, unitOf } from '../../../_components/figures.ts';
import { Section } from '../../../_components/page-head.tsx';

type DeficitKey = 'initial_deficit' | 'development_deficit' | 'mid_deficit' | 'late_deficit';

const DEFICITS: readonly (readonly [DeficitKey, string])[] = [
  ['initial_deficit', 'Initial'],
  ['development_deficit', 'Development'],
  ['mid_deficit', 'Mid'],
  ['late_deficit', 'Late'],
];

/** What a shortage of water costs each crop, stage by stage; nothing for runs that kept no stages. */
export function YieldTable({ rows, units }: { rows: readonly PlantingYieldRow[]; units: UnitSystem }) {
  if (rows.length === 0) return null;
  const columns: Column<PlantingYieldRow>[] = [
    { key: 'crop', head: 'Crop', rowHead: true, cell: (row) => row.crop_name },
    { key: 'mid', head: 'Full cover', oneLine: true, cell: (row) => dateRange(row.mid_from, row.late_from) },
    { key: 'et', head: 'Crop ET', unit: unitOf('depth', units), numeric: true, cell: (row) => figure(row.crop_et_mm, 'depth', units) },
    {
      key: 'adjusted',
      head: 'of which had',
      unit: unitOf('depth', units),
      numeric: true,
      cell: (row) => figure(row.adjusted_crop_et_mm, 'depth', units),
    },
    ...DEFICITS.map(
      ([key, head]): Column<PlantingYieldRow> => ({
        key,
        head: `Short, ${head.toLowerCase()} stage`,
        numeric: true,
        cell: (row) => (row[key] === null ? '–' : percent(row[key])),
      }),
    ),
    { key: 'ky', head: 'Ky', numeric: true, cell: (row) => plain(row.yield_response, 2) },
    { key: 'yield', head: 'Relative yield, season', numeric: true, cell: (row) => shareOf(row.relative_yield) },
    { key: 'stages', head: 'Relative yield, by stage', numeric: true, cell: (row) => shareOf(row.relative_yield_by_stage) },
  ];
  return (
    <Section
      id="yield"
      title="What shortage of water costs"
      note="Share of the crop’s water that it did not get, stage by stage, and the yield that is left of a full one by the published response factors (FAO-56 Eq. 90, FAO-33). Water (and salt, where the run has it) only: nutrients, pests, frost and harvest are left out. In a run with salt the shortage holds the salt’s too; read the season’s factor then. A crop that reaches beyond the run counts with its part within it."
    >
      <DataTable caption="Relative yield" columns={columns} rows={rows} rowKey={(row) => String(row.planting)} />
    </Section>
  );
}

function shareOf(value: number | null): string {
  return value === null ? 'no factor listed' : percent(value);
}
