import type { UnitSystem } from '../../lib/base/units.ts';
import type { BandAnswer, BandRow } from '../../lib/http/contract/band.ts';
import { bandBasis, bandMissing } from './band-words.ts';
import { type Column, DataTable } from './data-table.tsx';
import { figure, unitOf } from './figures.ts';
import { Go } from './go.tsx';
import { Section } from './page-head.tsx';

/** Season volumes of the district, each with its band. */
export interface DistrictBandFigures {
  readonly band: BandAnswer['band'];
  readonly rows: readonly { readonly name: string; readonly row: BandRow }[];
}

/** How sure the season's volumes are, and what that rests on. */
export function DistrictBand({ band, rows, units }: DistrictBandFigures & { units: UnitSystem }) {
  if (!band || rows.length === 0) {
    return (
      <Section id="band" title="How sure are the figures?">
        <p className="muted">{bandMissing(band)}</p>
      </Section>
    );
  }
  const volume = (key: 'p10_m3' | 'p50_m3' | 'p90_m3', head: string): Column<DistrictBandFigures['rows'][number]> => ({
    key,
    head,
    unit: unitOf('volume', units),
    numeric: true,
    cell: ({ row }) => figure(row[key], 'volume', units),
  });
  return (
    <Section
      id="band"
      title="How sure are the figures?"
      note="In 8 of 10 cases the volume of the season lies between the low and the high figure."
      actions={<Go href="/methods#band">How this is computed</Go>}
    >
      <DataTable
        caption="Volumes of the season: low, middle and high"
        rows={rows}
        rowKey={({ name }) => name}
        columns={[
          { key: 'name', head: 'Season volume', rowHead: true, cell: ({ name }) => name },
          volume('p10_m3', 'Low (P10)'),
          volume('p50_m3', 'Middle (P50)'),
          volume('p90_m3', 'High (P90)'),
        ]}
      />
      <ul>
        {bandBasis(band).map((sentence) => (
          <li key={sentence}>{sentence}</li>
        ))}
      </ul>
    </Section>
  );
}
