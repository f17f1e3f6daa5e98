import type { CropAnswer } from '../../../../lib/http/contract/rest.ts';
import { CropCurve } from '../../../_components/crop-curve.tsx';
import { calendarOf, coefficientsOf, curvesOf } from '../../../_components/crop-values.ts';
import { DataTable } from '../../../_components/data-table.tsx';
import { plain } from '../../../_components/figures.ts';
import { Section } from '../../../_components/page-head.tsx';

type Calendar = CropAnswer['calendars'][number];

/** Calendars of a crop: lengths, what the weather decides of them, coefficients of single cycles, and the curves. */
export function Calendars({ crop }: { crop: CropAnswer }) {
  if (crop.calendars.length === 0) return <Section title="Calendars">No calendar: a planting of this crop needs one.</Section>;
  const byWeather = crop.calendars.filter((calendar) => calendarOf(calendar).words.length > 0);
  return (
    <Section id="calendars" title="Calendars" note="Curves before the adjustment to the climate of the season (FAO-56 Eq. 70).">
      <CalendarTable crop={crop} />
      {byWeather.length > 0 ? <ByWeather calendars={byWeather} /> : null}
      {crop.calendars.map((calendar) => (
        <CycleTable key={calendar.code} calendar={calendar} />
      ))}
      <div className="columns">
        {crop.calendars.map((calendar) => (
          <div key={calendar.code} className="stack">
            {curvesOf(calendar, coefficientsOf(crop)).map((curve) => (
              <CropCurve key={curve.id} id={curve.id} title={curve.title} lengths={curve.lengths} coefficients={curve.coefficients} />
            ))}
          </div>
        ))}
      </div>
    </Section>
  );
}

function CalendarTable({ crop }: { crop: CropAnswer }) {
  const stage = (key: 'initial' | 'development' | 'mid' | 'late', head: string) => ({
    key,
    head,
    unit: 'd',
    numeric: true,
    cell: (calendar: Calendar) => {
      const { lengths, later } = calendarOf(calendar);
      return later ? `${lengths[key]}, then ${later[key]}` : lengths[key];
    },
  });
  return (
    <DataTable
      caption={`Calendars of ${crop.name}`}
      rows={crop.calendars}
      rowKey={(calendar) => calendar.code}
      columns={[
        { key: 'name', head: 'Calendar', rowHead: true, cell: (calendar) => calendar.name },
        { key: 'kind', head: 'Kind', cell: (calendar) => calendarOf(calendar).kind },
        { key: 'planting', head: 'Usual planting', cell: (calendar) => calendar.planting_day ?? 'as recorded' },
        stage('initial', 'Initial'),
        stage('development', 'Development'),
        stage('mid', 'Mid-season'),
        stage('late', 'Late'),
        { key: 'source', head: 'Source', wide: true, cell: (calendar) => calendar.source },
      ]}
    />
  );
}

function ByWeather({ calendars }: { calendars: readonly Calendar[] }) {
  return (
    <div className="stack">
      <h3>What the weather decides</h3>
      <dl>
        {calendars.map((calendar) => (
          <div key={calendar.code}>
            <dt>{calendar.name}</dt>
            {calendarOf(calendar).words.map((sentence) => (
              <dd key={sentence}>{sentence}</dd>
            ))}
          </div>
        ))}
      </dl>
      <p className="small muted">
        Each parcel’s own weather decides. Degree days are counted from both extremes of the day, each held between base and upper
        temperature. The days of the table above go on where the run has no weather. Dates are for the northern hemisphere; the planting
        date of a planting is the earliest day.
      </p>
    </div>
  );
}

function CycleTable({ calendar }: { calendar: Calendar }) {
  const { cycles } = calendarOf(calendar);
  if (cycles.length === 0) return null;
  return (
    <DataTable
      caption={`Coefficients of the cycles of ${calendar.name}`}
      showCaption
      rows={cycles.map((coefficients, k) => ({ coefficients, cycle: k + 1 }))}
      rowKey={({ cycle }) => String(cycle)}
      columns={[
        { key: 'cycle', head: 'Cycle', rowHead: true, cell: ({ cycle }) => (cycle === cycles.length ? `${cycle} and later` : cycle) },
        { key: 'initial', head: 'Kcb initial', numeric: true, cell: ({ coefficients }) => plain(coefficients.initial, 2) },
        { key: 'mid', head: 'Kcb mid', numeric: true, cell: ({ coefficients }) => plain(coefficients.mid, 2) },
        { key: 'end', head: 'Kcb end', numeric: true, cell: ({ coefficients }) => plain(coefficients.end, 2) },
      ]}
    />
  );
}
