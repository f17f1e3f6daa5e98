import type { UnitSystem } from '../../../lib/base/units.ts';
import type { DistrictAnswer } from '../../../lib/http/contract/rest.ts';
import { DataTable, FactList } from '../../_components/data-table.tsx';
import { longDate } from '../../_components/date-words.ts';
import { DistrictForm } from '../../_components/district-form.tsx';
import { MONTH_NAMES, WEEKDAYS } from '../../_components/district-words.ts';
import { figureWithUnit, plain } from '../../_components/figures.ts';
import { Go } from '../../_components/go.tsx';
import { Section } from '../../_components/page-head.tsx';

/** The district as it is set, and for its manager the form to change it. */
export function DistrictFacts({ district, units, manages }: { district: DistrictAnswer; units: UnitSystem; manages: boolean }) {
  return (
    <>
      <Section id="district" title="District">
        <FactList facts={factsOf(district, units)} />
        {manages ? (
          <details className="stack">
            <summary>Change</summary>
            <DistrictForm district={district} />
          </details>
        ) : null}
      </Section>
      <Section id="seasons" title="Seasons">
        {district.seasons.length === 0 ? (
          <p>
            No season yet. It comes with its plantings: <Go href="/imports">bring them in</Go>.
          </p>
        ) : (
          <DataTable
            caption="Seasons of the district"
            rows={district.seasons}
            rowKey={(season) => season.code}
            columns={[
              { key: 'code', head: 'Season', rowHead: true, oneLine: true, cell: (season) => season.code },
              { key: 'name', head: 'Name', cell: (season) => season.name },
              { key: 'start', oneLine: true, head: 'First day', cell: (season) => longDate(season.start_date) },
              { key: 'end', oneLine: true, head: 'Last day', cell: (season) => longDate(season.end_date) },
            ]}
          />
        )}
      </Section>
    </>
  );
}

function factsOf(district: DistrictAnswer, units: UnitSystem): [string, string][] {
  const { counts } = district;
  return [
    ['Name', district.invented ? `${district.name} (invented)` : district.name],
    ['Code', district.code],
    ['Time zone', district.time_zone],
    ['Units', district.units === 'us' ? 'in, ac, ac-ft, cfs' : 'mm, ha, m³, m³/s'],
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
