import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { CropAnswer } from '../../../../lib/http/contract/rest.ts';
import type { ParcelPeriod } from '../../../../lib/http/contract/run.ts';
import { numberOf } from '../../../_components/crop-values.ts';
import { DataTable } from '../../../_components/data-table.tsx';
import { figure, plain, unitOf } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { PageHead, Section } from '../../../_components/page-head.tsx';
import { Calendars } from './crop-calendars.tsx';
import { partRows } from './crop-parts.ts';

const VALUES: readonly (readonly [string, string, string])[] = [
  ['basalInitial', 'Basal coefficient Kcb, initial stage', '1'],
  ['basalMid', 'Basal coefficient Kcb, mid-season', '1'],
  ['basalEnd', 'Basal coefficient Kcb, end of the season', '1'],
  ['heightMax', 'Greatest height', 'm'],
  ['rootDepthMin', 'Root depth at the start', 'm'],
  ['rootDepthMax', 'Greatest root depth', 'm'],
  ['depletionFraction', 'Depletion fraction p, for a crop ET of 5 mm per day', '1'],
  ['yieldResponse', 'Yield response factor Ky of the season', '1'],
  ['lastIrrigation', 'Last irrigation, as a fraction of the late stage', '1'],
];

interface Grown {
  readonly items: readonly ParcelPeriod[];
  readonly total: number;
}

interface CropViewProps {
  readonly crop: CropAnswer;
  readonly grown: Grown | null;
  readonly season: string | null;
  readonly units: UnitSystem;
}

/** One crop of the library: values with their sources, curves, calendars, and where it grows. */
export function CropView({ crop, grown, season, units }: CropViewProps) {
  return (
    <div className="page">
      <PageHead
        title={crop.name}
        lead={`${crop.group}; ${String(crop.definition.type ?? '')}, on the ${String(crop.definition.surface ?? 'short')} reference surface.`}
        crumbs={[['/crops', 'Crops']]}
      />
      {crop.notes ? <p className="notice">{crop.notes}</p> : null}
      <Section id="values" title="Values and their sources">
        <DataTable
          caption={`Values of ${crop.name}`}
          rows={VALUES}
          rowKey={([key]) => key}
          columns={[
            { key: 'term', head: 'Value', rowHead: true, cell: ([, term]) => term },
            { key: 'value', head: 'Number', numeric: true, cell: ([key]) => plain(numberOf(crop, key), 2) },
            { key: 'unit', head: 'Unit', cell: ([, , unit]) => (unit === '1' ? '' : unit) },
            { key: 'source', head: 'Source', cell: ([key]) => sourceOf(crop, key) },
          ]}
        />
      </Section>
      <Parts crop={crop} />
      <Calendars crop={crop} />
      <GrownOn crop={crop} grown={grown} season={season} units={units} />
    </div>
  );
}

function Parts({ crop }: { crop: CropAnswer }) {
  const rows = partRows(crop);
  if (rows.length === 0) return null;
  return (
    <Section
      id="parts"
      title="Single coefficients, response, salt and stand"
      note="Used where a run or a planting asks for them: single coefficients, yield by stage, salinity, canopies, ponding. Values marked recalled have not been re-read in their source."
    >
      <DataTable
        caption={`Further values of ${crop.name}`}
        rows={rows}
        rowKey={({ key }) => key}
        columns={[
          { key: 'term', head: 'Value', rowHead: true, cell: ({ term }) => term },
          { key: 'value', head: 'Number', numeric: true, cell: ({ value }) => plain(value, 2) },
          { key: 'unit', head: 'Unit', cell: ({ unit }) => unit },
          { key: 'source', head: 'Source', wide: true, cell: ({ source }) => source },
        ]}
      />
    </Section>
  );
}

function sourceOf(crop: CropAnswer, key: string): string {
  return crop.sources[key] ?? (Number.isNaN(numberOf(crop, key)) ? 'not listed' : 'not stated');
}

function GrownOn({ crop, grown, season, units }: CropViewProps) {
  if (!grown || grown.items.length === 0) {
    return (
      <Section id="grown" title="Where it grows">
        <p>{season ? `No parcel grows it in season ${season}.` : 'No season has been run yet.'}</p>
      </Section>
    );
  }
  const more = grown.total > grown.items.length;
  return (
    <Section
      id="grown"
      title={`Where it grows in season ${season}`}
      note={more ? `The first ${grown.items.length} of ${grown.total} parcels.` : `${grown.total} parcels.`}
    >
      <DataTable
        caption={`Parcels that grow ${crop.name}`}
        rows={grown.items}
        rowKey={(row) => `${row.parcel} ${row.start}`}
        columns={[
          {
            key: 'parcel',
            head: 'Parcel',
            rowHead: true,
            cell: (row) => <Go href={`/parcels/${encodeURIComponent(row.parcel)}`}>{row.parcel}</Go>,
          },
          { key: 'crops', head: 'Crops', cell: (row) => row.crops },
          { key: 'area', head: 'Area', unit: unitOf('area', units), numeric: true, cell: (row) => figure(row.area_ha, 'area', units) },
          {
            key: 'et',
            head: 'Crop ET',
            unit: unitOf('depth', units),
            numeric: true,
            cell: (row) => figure(row.crop_et_mm, 'depth', units),
          },
          {
            key: 'gross',
            head: 'Gross',
            unit: unitOf('depth', units),
            numeric: true,
            cell: (row) => figure(row.gross_requirement_mm, 'depth', units),
          },
          {
            key: 'volume',
            head: 'Volume',
            unit: unitOf('volume', units),
            numeric: true,
            cell: (row) => figure(row.gross_volume_m3, 'volume', units),
          },
        ]}
      />
    </Section>
  );
}
