import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { ParcelSeason, RunAnswer } from '../../../../lib/http/contract/run.ts';
import { FactList } from '../../../_components/data-table.tsx';
import { figureWithUnit, percent, plain } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { PageHead } from '../../../_components/page-head.tsx';
import { WorkingOfDay } from './working-of-day.tsx';

/** Which parcel this is, and what it was computed with. */
export function ParcelHead({ run, season, date, units }: { run: RunAnswer; season: ParcelSeason; date: string; units: UnitSystem }) {
  const reports = `/api/v1/runs/${run.id}/parcels/${encodeURIComponent(season.parcel)}/daily`;
  return (
    <>
      <PageHead
        title={season.name ? `${season.parcel}, ${season.name}` : `Parcel ${season.parcel}`}
        lead={leadOf(season, run)}
        crumbs={[['/parcels', 'Parcels']]}
      >
        <WorkingOfDay parcel={season.parcel} run={run} date={date} />
        <a className="button" href={`${reports}.csv?units=${units}`} download>
          Daily CSV
        </a>
        <a className="button" href={`${reports}?units=${units}`}>
          JSON
        </a>
      </PageHead>
      <FactList facts={factsOf(season, units)} />
    </>
  );
}

function leadOf(season: ParcelSeason, run: RunAnswer): string {
  const crops = [...new Set(season.plantings.map((planting) => planting.crop_name))];
  return `${crops.length ? crops.join(' + ') : 'Nothing planted'}. Season ${season.season}${run.standing ? '' : ', from a run that is not the one in use'}.`;
}

function factsOf(season: ParcelSeason, units: UnitSystem): [string, React.ReactNode][] {
  const { soil, method } = season;
  return [
    ['Area', figureWithUnit(season.area_ha, 'area', units)],
    [
      'Soil',
      `${soil.name}: field capacity ${plain(soil.field_capacity_m3_m3, 2)}, wilting point ${plain(soil.wilting_point_m3_m3, 2)} m³ m⁻³`,
    ],
    ['Application', `${method.name}, efficiency ${percent(method.efficiency)}`],
    ['Turnout', season.turnout ?? 'none given'],
    ['Reach', reachLink(season.reach)],
    ['Elevation', season.elevation_m === null ? 'not known' : figureWithUnit(season.elevation_m, 'elevation', units)],
    ['Place', `${plain(season.latitude, 4)}°, ${plain(season.longitude, 4)}°`],
  ];
}

function reachLink(reach: string | null): React.ReactNode {
  if (!reach) return 'none: its demand reaches no canal';
  return <Go href={`/canals#${encodeURIComponent(reach)}`}>{reach}</Go>;
}
