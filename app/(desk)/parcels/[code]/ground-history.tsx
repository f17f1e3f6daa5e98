import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { HistoryItem, ParcelHistoryAnswer } from '../../../../lib/http/contract/land-places.ts';
import { type Column, DataTable } from '../../../_components/data-table.tsx';
import { longDate } from '../../../_components/date-words.ts';
import { figure, percent, unitOf } from '../../../_components/figures.ts';
import { Section } from '../../../_components/page-head.tsx';

const CHANGE_WORDS: Readonly<Record<HistoryItem['change'], string>> = {
  reshaped: 'given another outline',
  recoded: 'given another code',
  split: 'cut into several',
  merged: 'joined with others',
  vanished: 'ended',
};

/** How the ground of a parcel was divided before imports changed it; nothing where it never was. */
export function GroundHistory({ history, units }: { history: ParcelHistoryAnswer; units: UnitSystem }) {
  if (history.items.length === 0) return null;
  const columns: readonly Column<HistoryItem>[] = [
    {
      key: 'until',
      head: 'Until',
      oneLine: true,
      cell: (item) => (item.valid_to ? longDate(item.valid_to) : `import of ${longDate(item.recorded_at.slice(0, 10))}`),
    },
    { key: 'parcel', head: 'Parcel', rowHead: true, cell: (item) => item.parcel },
    { key: 'area', head: 'Area', unit: unitOf('area', units), numeric: true, cell: (item) => figure(item.area_ha, 'area', units) },
    { key: 'change', head: 'What became of it', cell: (item) => CHANGE_WORDS[item.change] },
    {
      key: 'successors',
      head: 'Its ground since, with the share of its area',
      wide: true,
      cell: (item) => item.successors.map(({ parcel, share }) => `${parcel} (${percent(share)})`).join(', ') || '–',
    },
  ];
  return (
    <Section
      id="history"
      title="History of this ground"
      note="Parcels that stood here before an import changed them, the latest first. Runs made while they stood are drawn with them."
    >
      <DataTable
        caption="Parcels that stood on this ground"
        columns={columns}
        rows={history.items}
        rowKey={(item) => `${item.geometry_version} ${item.parcel}`}
      />
    </Section>
  );
}
