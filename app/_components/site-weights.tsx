import type { UnitSystem } from '../../lib/base/units.ts';
import type { ParcelSeason } from '../../lib/http/contract/run.ts';
import { DataTable } from './data-table.tsx';
import { figure, percent, unitOf } from './figures.ts';
import { Go } from './go.tsx';

type Row = ParcelSeason['weights'][number];

const SERIES_HEADS: Readonly<Record<string, string>> = {
  air_temperature_max: 'Maximum temperature',
  air_temperature_min: 'Minimum temperature',
  vapour_pressure: 'Vapour pressure',
  solar_radiation: 'Solar radiation',
  wind_speed: 'Wind',
  precipitation: 'Rain',
  reference_et: 'Reference ET',
};

/** Which sites the parcel’s weather comes from, and how much of it; a column for each series that has weights of its own. */
export function SiteWeights({
  weights,
  elevation,
  units,
}: {
  weights: ParcelSeason['weights'];
  elevation: number | null;
  units: UnitSystem;
}) {
  const own = [...new Set(weights.flatMap((weight) => Object.keys(weight.series_weights)))];
  const allOwn = own.filter((name) => name !== 'reference_et').length === Object.keys(SERIES_HEADS).length - 1;
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
        ...(allOwn ? [] : [{ key: 'weight', head: 'Weight', numeric: true, cell: (weight: Row) => percent(weight.weight, 1) }]),
        ...own.map((name) => ({
          key: name,
          head: SERIES_HEADS[name] ?? name,
          numeric: true,
          cell: (weight: Row) => percent(weight.series_weights[name], 1),
        })),
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
