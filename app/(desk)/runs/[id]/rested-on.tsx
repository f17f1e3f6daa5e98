import type { IsoDate } from '../../../../lib/base/civil-date.ts';
import { counted } from '../../../../lib/base/counted.ts';
import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { RecordsTold } from '../../../../lib/http/contract/records.ts';
import type { RunAnswer } from '../../../../lib/http/contract/run.ts';
import { FactList } from '../../../_components/data-table.tsx';
import { dateRange, longDate } from '../../../_components/date-words.ts';
import { figureWithUnit } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { Section } from '../../../_components/page-head.tsx';
import { settingText } from '../../../_components/run-words.ts';

type Fact = [string, React.ReactNode];

/** What of the district's records a run rested on; nothing for runs made before that was told. */
export function RestedOn({ run, units }: { run: RunAnswer; units: UnitSystem }) {
  const records = run.manifest.records as RecordsTold | undefined;
  if (!records) return null;
  return (
    <Section id="records" title="What it rested on" note="Records of the district that this run took, beside land, libraries and weather.">
      <FactList facts={[...startFacts(records, run), ...deliveryFacts(records, units), ...measuredFacts(records)]} />
    </Section>
  );
}

function startFacts({ initial_state: start }: RecordsTold, run: RunAnswer): Fact[] {
  const facts: Fact[] = [['Soil water at the start', settingText(start.rule)]];
  const share = `${Math.round(run.settings.initial_depletion * 100)} % of its water missing`;
  if (start.rule === 'measured') {
    facts.push([
      'Parcels',
      `${counted(start.parcels_with_own, 'begins', 'begin')} as measured; ${counted(start.parcels_by_fraction, 'was', 'were')} not measured and ${start.parcels_by_fraction === 1 ? 'begins' : 'begin'} with ${share}`,
    ]);
  }
  const from = start.carried_from;
  if (from) {
    facts.push([
      'Carried over from',
      <>
        <Go href={`/runs/${from.run}`}>the run of season {from.season}</Go>, which ended on {longDate(from.end_date as IsoDate)}
        {from.stale ? '; its inputs had changed since it was made' : ''}
      </>,
    ]);
    if (start.parcels_by_fraction > 0)
      facts.push(['Parcels it did not have', `${counted(start.parcels_by_fraction, 'begins', 'begin')} with ${share}`]);
  }
  if (start.lead_days_asked > 0) {
    const short =
      start.lead_days < start.lead_days_asked ? `; ${start.lead_days_asked} were asked for, weather is missing before them` : '';
    facts.push(['Days stepped before the season', `${counted(start.lead_days, 'day', 'days')}${short}`]);
  }
  return facts;
}

function deliveryFacts({ deliveries }: RecordsTold, units: UnitSystem): Fact[] {
  if (!deliveries) return [];
  const { days, parcels, volume_m3, first_day, last_day, rule_from } = deliveries;
  if (!first_day || !last_day) return [['Deliveries', 'none recorded; the rules of the plantings hold throughout']];
  const span = dateRange(first_day as IsoDate, last_day as IsoDate);
  return [
    [
      'Deliveries recorded',
      `${figureWithUnit(volume_m3, 'volume', units)} on ${counted(parcels, 'parcel', 'parcels')}, ${counted(days, 'day', 'days')}, ${span}`,
    ],
    ['Rules hold from', rule_from ? longDate(rule_from as IsoDate) : 'no day: every day is as recorded'],
  ];
}

function measuredFacts({ measured }: RecordsTold): Fact[] {
  const of = (name: string, count: number): Fact[] => (count > 0 ? [[name, counted(count, 'parcel', 'parcels')]] : []);
  return [
    ...of('Efficiency of their own', measured.efficiency),
    ...of('Water table measured', measured.water_table),
    ...of('Soil salinity measured', measured.soil_salinity),
    ...of('Cover from images', measured.images),
  ];
}
