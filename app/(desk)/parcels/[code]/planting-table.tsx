import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { ParcelSeason } from '../../../../lib/http/contract/run.ts';
import { DataTable } from '../../../_components/data-table.tsx';
import { dayMonth, longDate } from '../../../_components/date-words.ts';
import { percent } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { practiceWords } from '../../../_components/practice-words.ts';

/** What stands on the parcel, from when to when. */
export function PlantingTable({ plantings, units }: { plantings: ParcelSeason['plantings']; units: UnitSystem }) {
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
          cell: (planting) => harvestWords(planting),
        },
        { key: 'cuts', head: 'Cuts', cell: (planting) => planting.cut_dates.map(dayMonth).join(', ') || '–' },
        {
          key: 'practice',
          head: 'Watering and cover',
          wide: true,
          cell: (planting) => practiceWords(planting.practice, units).join('; ') || 'as the method waters',
        },
        { key: 'share', head: 'Share of the area', numeric: true, cell: (planting) => percent(planting.area_share) },
      ]}
    />
  );
}

function harvestWords({ harvest_date: given, stages }: ParcelSeason['plantings'][number]): string {
  if (given) return longDate(given);
  const last = stages[stages.length - 1];
  return last ? `at the end of its calendar, ${longDate(last.end)}` : 'never started in this run';
}
