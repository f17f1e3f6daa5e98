import type { ParcelSeason } from '../../../../lib/http/contract/run.ts';
import { DataTable } from '../../../_components/data-table.tsx';
import { dayMonth, longDate } from '../../../_components/date-words.ts';
import { percent } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';

/** What stands on the parcel, from when to when. */
export function PlantingTable({ plantings }: { plantings: ParcelSeason['plantings'] }) {
  return (
    <DataTable
      caption="Plantings of the season"
      rows={plantings}
      rowKey={(planting) => `${planting.crop} ${planting.planting_date} ${planting.calendar}`}
      columns={[
        {
          key: 'crop',
          head: 'Crop',
          rowHead: true,
          cell: (planting) => <Go href={`/crops/${encodeURIComponent(planting.crop)}`}>{planting.crop_name}</Go>,
        },
        { key: 'calendar', head: 'Calendar', cell: (planting) => planting.calendar },
        { key: 'planted', oneLine: true, head: 'Planted', cell: (planting) => longDate(planting.planting_date) },
        {
          key: 'harvest',
          head: 'Harvest',
          cell: (planting) => (planting.harvest_date ? longDate(planting.harvest_date) : 'at the end of its calendar'),
        },
        { key: 'cuts', head: 'Cuts', cell: (planting) => planting.cut_dates.map(dayMonth).join(', ') || '–' },
        { key: 'share', head: 'Share of the area', numeric: true, cell: (planting) => percent(planting.area_share) },
      ]}
    />
  );
}
