import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { DeliveryAnswer, MeasurementAnswer } from '../../../../lib/http/contract/records.ts';
import type { ParcelSeason, RunAnswer } from '../../../../lib/http/contract/run.ts';
import { type Column, DataTable } from '../../../_components/data-table.tsx';
import { longDate } from '../../../_components/date-words.ts';
import { figure, figureWithUnit, plain, sumOf, unitOf } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { Section } from '../../../_components/page-head.tsx';
import { DeliveryForm, MeasurementForm, RemoveRecord } from '../../../_components/record-forms.tsx';
import { QUANTITIES } from '../../../_components/record-words.ts';
import { settingText } from '../../../_components/run-words.ts';

interface FieldRecordsProps {
  readonly run: RunAnswer;
  readonly season: ParcelSeason;
  /** of the season */
  readonly deliveries: readonly DeliveryAnswer[];
  /** up to the end of the season */
  readonly measurements: readonly MeasurementAnswer[];
  readonly units: UnitSystem;
  readonly mayWrite: boolean;
}

/** What the district has recorded of one parcel: water delivered, and what was measured; with the layers of its soil. */
export function FieldRecords({ run, season, deliveries, measurements, units, mayWrite }: FieldRecordsProps) {
  if (!mayWrite && deliveries.length + measurements.length + season.soil.layers.length === 0) return null;
  const total = sumOf(deliveries, (row) => row.volume_m3);
  return (
    <Section id="records" title="Records of this field" note={`This run takes its water ${settingText(run.settings.water)}.`}>
      <h3>Deliveries</h3>
      {deliveries.length > 0 ? (
        <DataTable
          caption="Water delivered in the season"
          columns={deliveryColumns(units, mayWrite, figureWithUnit(total, 'volume', units))}
          rows={deliveries}
          rowKey={(row) => row.date}
          foot
        />
      ) : (
        <p className="muted">
          None recorded this season.{' '}
          {mayWrite ? (
            <>
              Record them here, or <Go href="/imports?kind=deliveries">bring a table</Go>.
            </>
          ) : null}
        </p>
      )}
      {mayWrite ? <DeliveryForm parcel={season.parcel} date={run.start_date} units={units} /> : null}
      <h3>Measured</h3>
      {measurements.length > 0 ? (
        <DataTable
          caption="Measured at the parcel"
          columns={measurementColumns(mayWrite)}
          rows={measurements}
          rowKey={(row) => `${row.date} ${row.quantity} ${row.soil_depth_m}`}
        />
      ) : (
        <p className="muted">
          Nothing measured. Water contents within 14 days before the season can set its first morning; water tables, salinity and efficiency
          are taken where the run asks for them.{' '}
          {mayWrite ? <Go href="/imports?kind=measurements">Bring a table of measurements</Go> : null}
        </p>
      )}
      {mayWrite ? <MeasurementForm parcel={season.parcel} date={run.start_date} /> : null}
      <SoilLayers soil={season.soil} units={units} />
    </Section>
  );
}

function deliveryColumns(units: UnitSystem, mayWrite: boolean, total: string): Column<DeliveryAnswer>[] {
  return [
    { key: 'date', head: 'Day', rowHead: true, oneLine: true, cell: (row) => longDate(row.date), total: 'Season' },
    {
      key: 'volume',
      head: 'Volume',
      unit: unitOf('volume', units),
      numeric: true,
      cell: (row) => figure(row.volume_m3, 'volume', units),
      total,
    },
    {
      key: 'depth',
      head: 'Over the parcel',
      unit: unitOf('depth', units),
      numeric: true,
      cell: (row) => figure(row.gross_depth_mm, 'depth', units),
    },
    ...(mayWrite ? [removal((row: DeliveryAnswer) => [`/api/v1/deliveries/${pathOf(row)}`, `the delivery of ${longDate(row.date)}`])] : []),
  ];
}

function measurementColumns(mayWrite: boolean): Column<MeasurementAnswer>[] {
  return [
    { key: 'date', head: 'Day', rowHead: true, oneLine: true, cell: (row) => longDate(row.date) },
    { key: 'quantity', head: 'What', cell: (row) => QUANTITIES[row.quantity].name },
    { key: 'depth', head: 'Down to', unit: 'm', numeric: true, cell: (row) => (row.soil_depth_m > 0 ? plain(row.soil_depth_m, 2) : '–') },
    {
      key: 'value',
      head: 'Value',
      numeric: true,
      oneLine: true,
      cell: (row) => `${plain(row.value, QUANTITIES[row.quantity].decimals)} ${QUANTITIES[row.quantity].unit}`,
    },
    ...(mayWrite
      ? [
          removal((row: MeasurementAnswer) => [
            `/api/v1/measurements/${pathOf(row)}/${row.quantity}?soil_depth_m=${row.soil_depth_m}`,
            `${QUANTITIES[row.quantity].name} of ${longDate(row.date)}`,
          ]),
        ]
      : []),
  ];
}

function pathOf({ parcel, date }: { parcel: string; date: string }): string {
  return `${encodeURIComponent(parcel)}/${date}`;
}

function removal<Row>(of: (row: Row) => [string, string]): Column<Row> {
  return {
    key: 'remove',
    head: '',
    cell: (row) => {
      const [path, what] = of(row);
      return <RemoveRecord path={path} what={what} />;
    },
  };
}

type Layer = ParcelSeason['soil']['layers'][number];

/** Layers of the parcel's soil; nothing for a soil that is the same all the way down. */
function SoilLayers({ soil, units }: { soil: ParcelSeason['soil']; units: UnitSystem }) {
  if (soil.layers.length === 0) return null;
  const columns: Column<Layer>[] = [
    {
      key: 'depth',
      head: 'From – to',
      unit: unitOf('length', units),
      rowHead: true,
      oneLine: true,
      cell: (layer) => `${figure(layer.top_m, 'length', units)} – ${figure(layer.bottom_m, 'length', units)}`,
    },
    { key: 'fc', head: 'Field capacity', unit: 'm³/m³', numeric: true, cell: (layer) => plain(layer.field_capacity_m3_m3, 3) },
    { key: 'wp', head: 'Wilting point', unit: 'm³/m³', numeric: true, cell: (layer) => plain(layer.wilting_point_m3_m3, 3) },
    {
      key: 'held',
      head: 'Holds for crops',
      unit: unitOf('depth', units),
      numeric: true,
      cell: (layer) =>
        figure(1000 * (layer.field_capacity_m3_m3 - layer.wilting_point_m3_m3) * (layer.bottom_m - layer.top_m), 'depth', units),
    },
  ];
  return (
    <>
      <h3>Layers of the soil</h3>
      <DataTable caption={`Layers of ${soil.name}`} columns={columns} rows={soil.layers} rowKey={(layer) => String(layer.bottom_m)} />
      <p className="hint">Below the last layer its values go on.</p>
    </>
  );
}
