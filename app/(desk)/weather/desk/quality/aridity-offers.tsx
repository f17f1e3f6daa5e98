import type { CheckAnswer } from '../../../../../lib/http/contract/quality.ts';
import { type Column, DataTable } from '../../../../_components/data-table.tsx';
import { percent, plain } from '../../../../_components/figures.ts';
import { Go } from '../../../../_components/go.tsx';
import { PATH } from './quality-words.ts';

interface Row {
  readonly source: string;
  readonly offer: CheckAnswer['aridity_offers'][number];
}

/** Adjustments for dry surroundings that are offered, with what each would do to reference ET. */
export function AridityOffers({ checks, mayAct }: { checks: readonly CheckAnswer[]; mayAct: boolean }) {
  const rows = checks.flatMap(({ source, aridity_offers }) => aridity_offers.map((offer): Row => ({ source, offer })));
  if (rows.length === 0) return <p className="muted">No station shows dry surroundings, or humidity and rain are not recorded.</p>;
  return (
    <>
      <p className="notice caution" role="note">
        Only for a station that stands outside irrigated land while the parcels it serves are irrigated. A station that reads too dry for
        another reason (a worn sensor) is corrected at the sensor, not here.
      </p>
      <DataTable
        caption="Offers for dry surroundings"
        columns={columnsOf(mayAct)}
        rows={rows}
        rowKey={({ source, offer }) => `${source}/${offer.site}/${offer.from}`}
      />
    </>
  );
}

function columnsOf(mayAct: boolean): Column<Row>[] {
  return [
    { key: 'site', head: 'Site', rowHead: true, oneLine: true, cell: ({ offer }) => offer.site },
    { key: 'period', head: 'Period', oneLine: true, cell: ({ offer }) => `${offer.from} to ${offer.to}` },
    { key: 'months', head: 'Dry months', numeric: true, cell: ({ offer }) => offer.months },
    {
      key: 'difference',
      head: 'Minimum less dew point',
      unit: '°C',
      numeric: true,
      cell: ({ offer }) => plain(offer.minimum_less_dew_point_k, 1),
    },
    { key: 'index', head: 'Aridity index', numeric: true, cell: ({ offer }) => plain(offer.aridity_index, 2) },
    { key: 'ko', head: 'Ko', unit: '°C', numeric: true, cell: ({ offer }) => plain(offer.ko_c, 1) },
    { key: 'before', head: 'Reference ET now', unit: 'mm', numeric: true, cell: ({ offer }) => plain(offer.reference_et_before_mm, 0) },
    { key: 'after', head: 'Adjusted', unit: 'mm', numeric: true, cell: ({ offer }) => plain(offer.reference_et_after_mm, 0) },
    {
      key: 'change',
      head: 'Change',
      numeric: true,
      cell: ({ offer }) => percent(offer.reference_et_after_mm / offer.reference_et_before_mm - 1, 1),
    },
    {
      key: 'act',
      head: 'Offer',
      cell: ({ source, offer }) => {
        if (offer.made) return 'made';
        if (!mayAct) return 'open';
        const query = new URLSearchParams({
          source,
          site: offer.site,
          from: offer.from,
          to: offer.to,
          act: 'aridity',
          amount: String(offer.ko_c),
        });
        return <Go href={`${PATH}/correct?${query}`}>See and decide</Go>;
      },
    },
  ];
}
