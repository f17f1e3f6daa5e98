import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { ParcelDay, ParcelSeason } from '../../../../lib/http/contract/run.ts';
import { dayKindWord } from '../../../_components/ahead-shade.tsx';
import { type Column, DataTable, FiguresBelow } from '../../../_components/data-table.tsx';
import { fallbackText } from '../../../_components/fallback-words.tsx';
import { figure, plain, sumOf, unitOf } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { hrefWith } from '../../../_components/query.ts';

type DepthKey = Extract<keyof ParcelDay, `${string}_mm`>;

const SUMS: readonly (readonly [DepthKey, string])[] = [
  ['reference_et_mm', 'Reference ET'],
  ['crop_et_mm', 'Crop ET'],
  ['adjusted_crop_et_mm', 'Adjusted crop ET'],
  ['evaporation_mm', 'Soil evaporation'],
  ['precipitation_mm', 'Rain'],
  ['surface_runoff_mm', 'Runoff'],
  ['effective_precipitation_mm', 'Effective rain'],
  ['net_requirement_mm', 'Net requirement'],
  ['gross_requirement_mm', 'Gross requirement'],
  ['deep_percolation_mm', 'Deep percolation of rain'],
  ['irrigation_percolation_mm', 'Irrigation lost below the roots'],
  ['capillary_rise_mm', 'Capillary rise'],
];
const STATES: readonly (readonly [DepthKey, string])[] = [
  ['root_zone_depletion_mm', 'Root-zone depletion'],
  ['readily_available_water_mm', 'RAW'],
  ['total_available_water_mm', 'TAW'],
  ['soil_water_depletion_mm', 'Depletion of all soil'],
  ['snow_water_mm', 'Snow, as water'],
  ['ponded_water_mm', 'Water above field capacity'],
];

/** Most days that are worth the paper. */
const PRINTED_DAYS = 45;

/** Every variable of every day, with the sums of those that add up. */
export function DayTable({ season, units, run }: { season: ParcelSeason; units: UnitSystem; run: string | null }) {
  const printed = season.days.length <= PRINTED_DAYS;
  return (
    <>
      <FiguresBelow summary={`Every day as a table (${season.days.length} days)`} printed={printed}>
        <DataTable
          caption={`Parcel ${season.parcel}, day by day`}
          rows={season.days}
          rowKey={(day) => day.date}
          columns={columnsOf(season, units, run)}
          foot
        />
      </FiguresBelow>
      {printed ? null : (
        <p className="only-print small">
          The {season.days.length} days behind this chart are not printed. “Daily CSV” on the screen of parcel {season.parcel} has every
          figure of every day.
        </p>
      )}
    </>
  );
}

function columnsOf(season: ParcelSeason, units: UnitSystem, run: string | null): Column<ParcelDay>[] {
  const path = `/parcels/${encodeURIComponent(season.parcel)}/working`;
  const depth = ([key, head]: readonly [DepthKey, string], sums: boolean): Column<ParcelDay> => ({
    key,
    head,
    unit: unitOf('depth', units),
    numeric: true,
    cell: (day) => figure(day[key], 'depth', units),
    total: sums
      ? figure(
          sumOf(season.days, (day) => day[key]),
          'depth',
          units,
        )
      : undefined,
  });
  const volume = sumOf(season.days, (day) => day.gross_volume_m3);
  return [
    {
      key: 'date',
      head: 'Day',
      rowHead: true,
      oneLine: true,
      cell: (day) => <Go href={hrefWith(`${path}/${day.date}`, {}, { run })}>{day.date}</Go>,
      total: 'Season',
    },
    { key: 'kind', head: 'Rests on', oneLine: true, cell: (day) => dayKindWord(day.day_kind) },
    ...SUMS.map((each) => depth(each, true)),
    {
      key: 'volume',
      head: 'Gross volume',
      unit: unitOf('volume', units),
      numeric: true,
      cell: (day) => figure(day.gross_volume_m3, 'volume', units),
      total: figure(volume, 'volume', units),
    },
    ...STATES.map((each) => depth(each, false)),
    { key: 'kcb', head: 'Kcb', numeric: true, cell: (day) => plain(day.basal_crop_coefficient, 3) },
    { key: 'ks', head: 'Ks', numeric: true, cell: (day) => plain(day.stress_coefficient, 3) },
    {
      key: 'estimated',
      head: 'Estimated in the weather',
      cell: (day) =>
        day.fallbacks
          .filter((name) => name !== 'humidityFromDewPoint')
          .map(fallbackText)
          .join('; '),
    },
  ];
}
