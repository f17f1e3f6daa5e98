import type { ImageRow } from '../../../../lib/http/contract/images.ts';
import { type Column, DataTable } from '../../../_components/data-table.tsx';
import { longDate } from '../../../_components/date-words.ts';
import { percent, plain } from '../../../_components/figures.ts';
import { Section } from '../../../_components/page-head.tsx';

const COLUMNS: readonly Column<ImageRow>[] = [
  { key: 'date', head: 'Day', rowHead: true, oneLine: true, cell: (row) => longDate(row.date) },
  {
    key: 'quantity',
    head: 'What it shows',
    cell: (row) => (row.quantity === 'vegetation_index' ? 'vegetation index' : 'fraction of ground covered'),
  },
  { key: 'value', head: 'Mean over the parcel', numeric: true, cell: (row) => plain(row.value, 2) },
  { key: 'seen', head: 'Seen without cloud', numeric: true, cell: (row) => percent(row.seen_share) },
];

/** Images that saw the parcel in the season; nothing where none did. `used` says whether the run took them. */
export function ImageTable({ images, used }: { images: readonly ImageRow[]; used: boolean }) {
  if (images.length === 0) return null;
  return (
    <Section
      id="images"
      title="Seen from above"
      note={
        used
          ? 'This run takes the crop’s cover from these images, in a straight line between their days.'
          : 'This run keeps the crop curve of the calendar. Start one with “cover from images” to use them.'
      }
    >
      <DataTable caption="Images of plant cover" columns={COLUMNS} rows={images} rowKey={(row) => `${row.date} ${row.quantity}`} />
    </Section>
  );
}
