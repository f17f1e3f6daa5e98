import type { UnitSystem } from '../../../lib/base/units.ts';
import type { DistrictAnswer } from '../../../lib/http/contract/rest.ts';
import { DataTable, FactList } from '../../_components/data-table.tsx';
import { longDate } from '../../_components/date-words.ts';
import { DistrictForm } from '../../_components/district-form.tsx';
import { MONTH_NAMES, UNIT_NAMES, WEEKDAYS } from '../../_components/district-words.ts';
import { figureWithUnit, plain } from '../../_components/figures.ts';
import { nextSeason } from '../../_components/next-season.ts';
import { Section } from '../../_components/page-head.tsx';
import { SeasonForm } from '../../_components/season-form.tsx';
import { knownTimeZones } from '../../_components/time-zones.ts';

interface DistrictFactsProps {
  readonly district: DistrictAnswer;
  readonly units: UnitSystem;
  readonly scope: 'read' | 'write' | 'administer';
}

/** The district as it is set, and for its manager the form to change it. */
export function DistrictFacts({ district, units, scope }: DistrictFactsProps) {
  return (
    <>
      <Section id="district" title="District">
        <FactList facts={factsOf(district, units)} />
        {scope === 'administer' ? (
          <details className="stack">
            <summary>Change</summary>
            <DistrictForm district={district} timeZones={knownTimeZones()} />
          </details>
        ) : null}
      </Section>
      <Seasons district={district} mayAdd={scope !== 'read'} />
    </>
  );
}

function Seasons({ district, mayAdd }: { district: DistrictAnswer; mayAdd: boolean }) {
  const today = new Intl.DateTimeFormat('en-CA', { timeZone: district.time_zone }).format(new Date());
  const lastDays = district.seasons.map((season) => season.end_date);
  return (
    <Section id="seasons" title="Seasons" note="The spans of days that are computed, most often a water year each.">
      {district.seasons.length === 0 ? (
        <p>No season yet. {mayAdd ? 'Add the first one here; plantings and runs belong to a season.' : null}</p>
      ) : (
        <DataTable
          caption="Seasons of the district"
          rows={district.seasons}
          rowKey={(season) => season.code}
          columns={[
            { key: 'code', head: 'Season', rowHead: true, oneLine: true, cell: (season) => season.code },
            { key: 'name', oneLine: true, head: 'Name', cell: (season) => season.name },
            { key: 'start', oneLine: true, head: 'First day', cell: (season) => longDate(season.start_date) },
            { key: 'end', oneLine: true, head: 'Last day', cell: (season) => longDate(season.end_date) },
          ]}
        />
      )}
      {mayAdd ? <SeasonForm suggestion={nextSeason({ startMonth: district.water_year_start_month, lastDays, today })} /> : null}
    </Section>
  );
}

function factsOf(district: DistrictAnswer, units: UnitSystem): [string, string | undefined][] {
  const { counts } = district;
  return [
    ['Name', district.invented ? `${district.name} (invented)` : district.name],
    ['Code', district.code],
    ['Time zone', district.time_zone],
    ['Units', UNIT_NAMES.find(([code]) => code === district.units)?.[1]],
    ['Delivery week begins on', WEEKDAYS[district.week_start - 1]],
    ['Water year begins in', MONTH_NAMES[district.water_year_start_month - 1]],
    ['Elevation where none is known', figureWithUnit(district.default_elevation_m, 'elevation', units)],
    ['Radiation coefficient kRs', `${plain(district.radiation_coefficient, 2)} (FAO-56 Eq. 50: 0.16 inland, 0.19 at a coast)`],
    [
      'Holds',
      `${plain(counts.parcels, 0)} parcels, ${plain(counts.reaches, 0)} reaches, ${plain(counts.sites, 0)} weather sites, ${plain(counts.plantings, 0)} plantings`,
    ],
  ];
}
