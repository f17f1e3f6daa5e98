import type { UnitSystem } from '../../../lib/base/units.ts';
import { totalLength } from '../../../lib/crop/curve.ts';
import type { CropAnswer } from '../../../lib/http/contract/rest.ts';
import { calendarOf, numberOf } from '../../_components/crop-values.ts';
import { type Column, DataTable } from '../../_components/data-table.tsx';
import { EmptyState } from '../../_components/empty-state.tsx';
import { figure, plain, unitOf } from '../../_components/figures.ts';
import { Go } from '../../_components/go.tsx';
import { Section } from '../../_components/page-head.tsx';

/** The library, group by group. */
export function CropList({ crops, units }: { crops: readonly CropAnswer[]; units: UnitSystem }) {
  if (crops.length === 0)
    return <EmptyState title="No crops in the library">The library comes with the district; ask its manager to put it back.</EmptyState>;
  const groups = [...new Set(crops.map((crop) => crop.group))];
  return groups.map((group) => (
    <Section key={group} title={group}>
      <DataTable
        caption={`Crops: ${group}`}
        columns={columnsOf(units)}
        rows={crops.filter((crop) => crop.group === group)}
        rowKey={(crop) => crop.code}
      />
    </Section>
  ));
}

function columnsOf(units: UnitSystem): Column<CropAnswer>[] {
  const coefficient = (key: string, head: string): Column<CropAnswer> => ({
    key,
    head,
    numeric: true,
    cell: (crop) => plain(numberOf(crop, key), 2),
  });
  const length = (key: string, head: string): Column<CropAnswer> => ({
    key,
    head,
    unit: unitOf('length', units),
    numeric: true,
    cell: (crop) => figure(numberOf(crop, key), 'length', units),
  });
  return [
    { key: 'name', head: 'Crop', rowHead: true, cell: (crop) => <Go href={`/crops/${encodeURIComponent(crop.code)}`}>{crop.name}</Go> },
    { key: 'type', head: 'Kind', cell: (crop) => String(crop.definition.type ?? '') },
    coefficient('basalInitial', 'Kcb initial'),
    coefficient('basalMid', 'Kcb mid'),
    coefficient('basalEnd', 'Kcb end'),
    length('heightMax', 'Height'),
    length('rootDepthMin', 'Roots, least'),
    length('rootDepthMax', 'Roots, greatest'),
    coefficient('depletionFraction', 'p'),
    {
      key: 'calendars',
      head: 'Calendars',
      cell: (crop) =>
        crop.calendars.map((calendar) => `${calendar.name} (${totalLength(calendarOf(calendar).lengths)} d)`).join(', ') || 'none',
    },
    { key: 'plantings', head: 'Plantings', numeric: true, cell: (crop) => crop.planting_count },
  ];
}
