import type { DistrictAnswer } from '../../lib/http/contract/rest.ts';
import type { RunAnswer } from '../../lib/http/contract/run.ts';
import { plain } from './figures.ts';
import styles from './getting-started.module.css';
import { Go } from './go.tsx';
import { RunProgress } from './run-progress.tsx';
import { STATES } from './run-words.ts';

interface GettingStartedProps {
  readonly district: DistrictAnswer;
  /** stations that have any weather */
  readonly sitesWithWeather: number;
  /** newest first */
  readonly runs: readonly RunAnswer[];
  readonly mayChange: boolean;
}

interface Step {
  readonly name: string;
  readonly says: string;
  readonly href: string;
  readonly done: boolean;
  /** what is there so far */
  readonly have: string;
}

const counted = (count: number, one: string, many: string) => `${plain(count, 0)} ${count === 1 ? one : many}`;

/** What a district needs before its map can be drawn, in the order that works. */
function stepsOf({ district, sitesWithWeather, runs }: GettingStartedProps): Step[] {
  const { counts, seasons } = district;
  const bring = (kind: string) => `/imports?kind=${kind}`;
  const newest = runs[0];
  return [
    {
      name: 'Add a season',
      says: 'the first and the last day to compute, most often a water year',
      href: '/settings#seasons',
      done: seasons.length > 0,
      have: counted(seasons.length, 'season', 'seasons'),
    },
    {
      name: 'Bring weather stations',
      says: 'where each one stands and how high',
      href: bring('stations'),
      done: counts.sites > 0,
      have: counted(counts.sites, 'station', 'stations'),
    },
    {
      name: 'Bring their weather',
      says: 'temperature at least; humidity, wind, sunshine and rain where they were measured',
      href: bring('weather'),
      done: sitesWithWeather > 0,
      have: counted(sitesWithWeather, 'station with weather', 'stations with weather'),
    },
    {
      name: 'Bring canals',
      says: 'a line for each stretch of canal, with how much it can carry',
      href: bring('canals'),
      done: counts.reaches > 0,
      have: counted(counts.reaches, 'reach', 'reaches'),
    },
    {
      name: 'Bring parcels',
      says: 'the outline of each, and the canal it takes water from',
      href: bring('parcels'),
      done: counts.parcels > 0,
      have: counted(counts.parcels, 'parcel', 'parcels'),
    },
    {
      name: 'Bring plantings',
      says: 'which crop grows on which parcel, and from when',
      href: bring('plantings'),
      done: counts.plantings > 0,
      have: counted(counts.plantings, 'planting', 'plantings'),
    },
    {
      name: 'Run the season',
      says: 'the map, the canals and the reports fill as soon as it is done',
      href: '/runs',
      done: runs.some((run) => run.state === 'done'),
      have: newest ? `the last run: ${STATES[newest.state]}` : 'no run yet',
    },
  ];
}

/** The way from an empty district to its first map: what is done, what comes next. */
export function GettingStarted(props: GettingStartedProps) {
  const steps = stepsOf(props);
  const next = steps.find((step) => !step.done);
  const going = props.runs.find((run) => run.state === 'queued' || run.state === 'running');
  return (
    <div className="page narrow">
      <div className="page-head">
        <h1>Getting started</h1>
        <p className="lede">
          The demand map appears here once a season has been computed. {steps.filter((step) => step.done).length} of {steps.length} steps
          are done.
        </p>
      </div>
      {going ? (
        <RunProgress
          id={going.id}
          season={going.season}
          state={going.state}
          stage={going.stage}
          progress={going.progress}
          mayCancel={props.mayChange}
        />
      ) : null}
      <ol className={styles.steps}>
        {steps.map((step) => (
          <StepLine key={step.name} step={step} next={step === next} linked={props.mayChange} />
        ))}
      </ol>
      {props.mayChange ? (
        <p className="small muted">
          Soils of your own can be brought too: <Go href="/imports?kind=soils">bring soils</Go> before the parcels that name them. Each kind
          has a template to start from.
        </p>
      ) : (
        <p className="small muted">Operators and managers bring these in.</p>
      )}
    </div>
  );
}

function StepLine({ step, next, linked }: { step: Step; next: boolean; linked: boolean }) {
  return (
    <li data-done={step.done} aria-current={next ? 'step' : undefined}>
      <span className={styles.text}>
        {linked ? <Go href={step.href}>{step.name}</Go> : <strong>{step.name}</strong>}
        <span className="small muted">{step.says}</span>
      </span>
      <span className={styles.state}>
        <span className={`tag ${step.done ? 'good' : next ? 'caution' : ''}`}>{step.done ? 'done' : next ? 'next' : 'to do'}</span>
        <span className="small muted">{step.have}</span>
      </span>
    </li>
  );
}
