import type { QualitySeries } from '../../../../../../lib/http/answers/quality-series.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../../../../../lib/weather/variable.ts';
import { Caution, EmptyState } from '../../../../../_components/empty-state.tsx';
import { PageHead, Section } from '../../../../../_components/page-head.tsx';
import { CorrectionForm } from '../correction-form.tsx';
import { type ACT_WORDS, CAUTION, PATH, termOf } from '../quality-words.ts';
import { SeriesView } from '../series-view.tsx';

interface Station {
  readonly source: string;
  readonly code: string;
  readonly name: string;
}

interface CorrectViewProps {
  readonly stations: readonly Station[];
  readonly station: Station | null;
  readonly series: QualitySeries | null;
  readonly variable: WeatherVariable;
  readonly span: { readonly from: string; readonly to: string } | null;
  readonly act: keyof typeof ACT_WORDS;
  readonly amount?: number;
  readonly mayAct: boolean;
}

/** A period of a station to look at and to correct, without a flag. */
export function CorrectView(props: CorrectViewProps) {
  const { station, series, variable, span, act, mayAct } = props;
  const aridity = act === 'aridity';
  return (
    <div className="page">
      <PageHead
        title={aridity ? `Dry surroundings at ${station?.code ?? ''}` : 'Correct a period'}
        lead={
          aridity
            ? 'Temperatures are lowered and the dew point is raised, each by half of what their difference exceeds Ko (FAO-56 Annex 6).'
            : 'Choose the station, the variable and the days; see the record; then decide.'
        }
        crumbs={[
          ['/weather', 'Weather'],
          [PATH, 'Quality'],
        ]}
      />
      <Caution>{CAUTION}</Caution>
      {aridity ? null : <Choose {...props} />}
      {series && span && station ? (
        <>
          <Section id="series" title="The record">
            <SeriesView id="record" title={`${series.term} at ${station.code}`} series={series} />
          </Section>
          {mayAct ? (
            <Section id="decide" title="Decide">
              <CorrectionForm
                key={`${station.source}/${station.code}/${variable}/${span.from}/${span.to}`}
                {...{ source: station.source, site: station.code, variable, unit: series.unit, from: span.from, to: span.to }}
                act={act}
                amount={props.amount}
              />
            </Section>
          ) : null}
        </>
      ) : (
        <EmptyState title="Nothing to show">
          {station
            ? 'Choose days within the record of the station.'
            : 'There are no stations yet: bring in stations and their weather first.'}
        </EmptyState>
      )}
    </div>
  );
}

function Choose({ stations, station, variable, span }: CorrectViewProps) {
  if (!station) return null;
  return (
    <form action={`${PATH}/correct`} className="toolbar no-print" aria-label="Which record">
      <label className="field">
        <span className="label">Station</span>
        <select name="site" defaultValue={station.code}>
          {stations.map(({ source, code, name }) => (
            <option key={`${source}/${code}`} value={code}>
              {name && name !== code ? `${code} ${name}` : code}
            </option>
          ))}
        </select>
      </label>
      <label className="field">
        <span className="label">Variable</span>
        <select name="variable" defaultValue={variable}>
          {(Object.keys(WEATHER_VARIABLES) as WeatherVariable[]).map((name) => (
            <option key={name} value={name}>
              {termOf(name)}
            </option>
          ))}
        </select>
      </label>
      <label className="field">
        <span className="label">First day</span>
        <input type="date" name="from" defaultValue={span?.from} />
      </label>
      <label className="field">
        <span className="label">Last day</span>
        <input type="date" name="to" defaultValue={span?.to} />
      </label>
      <button type="submit" className="button">
        Show
      </button>
    </form>
  );
}
