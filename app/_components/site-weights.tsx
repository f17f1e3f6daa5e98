import type { UnitSystem } from '../../lib/base/units.ts';
import type { ParcelSeason } from '../../lib/http/contract/run.ts';
import { DataTable } from './data-table.tsx';
import { figure, percent, unitOf } from './figures.ts';
import { Go } from './go.tsx';

/** Which sites the parcel's weather comes from, and how much of it. */
export function SiteWeights({
  weights,
  elevation,
  units,
}: {
  weights: ParcelSeason['weights'];
  elevation: number | null;
  units: UnitSystem;
}) {
  return (
    <DataTable
      caption="Weather sites behind this parcel"
      rows={[...weights].sort((a, b) => b.weight - a.weight)}
      rowKey={(weight) => weight.site}
      columns={[
        {
          key: 'name',
          head: 'Site',
          rowHead: true,
          cell: (weight) => <Go href={`/weather/${encodeURIComponent(weight.site)}`}>{weight.name}</Go>,
        },
        { key: 'weight', head: 'Weight', numeric: true, cell: (weight) => percent(weight.weight, 1) },
        {
          key: 'distance',
          head: 'Distance',
          unit: unitOf('distance', units),
          numeric: true,
          cell: (weight) => figure(weight.distance_km, 'distance', units),
        },
        {
          key: 'elevation',
          head: 'Elevation',
          unit: unitOf('elevation', units),
          numeric: true,
          cell: (weight) => figure(weight.elevation_m, 'elevation', units),
        },
        {
          key: 'difference',
          head: 'Parcel above site',
          unit: unitOf('elevation', units),
          numeric: true,
          cell: (weight) =>
            figure(elevation === null || weight.elevation_m === null ? null : elevation - weight.elevation_m, 'elevation', units),
        },
      ]}
    />
  );
}
