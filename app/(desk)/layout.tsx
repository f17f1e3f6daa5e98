import { cookies } from 'next/headers';
import Link from 'next/link';
import type { ReactNode } from 'react';
import { answerDistricts } from '../../lib/http/answers/district.ts';
import { INVENTED_CAUTION } from '../../lib/report/cautions.ts';
import { AccountMenu } from '../_components/account-menu.tsx';
import { PreferenceChoice, PreferenceSelect } from '../_components/choice.tsx';
import { moment } from '../_components/date-words.ts';
import { ROLES } from '../_components/district-words.ts';
import { callerInView, districtInView, runInView } from '../_components/in-view.ts';
import { Mark } from '../_components/mark.tsx';
import { PlaceBar, PlaceLine } from '../_components/navigation.tsx';

export const dynamic = 'force-dynamic';

const UNITS = [
  { value: 'metric', label: 'mm, ha, m³' },
  { value: 'us', label: 'in, ac, ac-ft' },
];
const THEMES = [
  { value: 'system', label: 'As the system' },
  { value: 'light', label: 'Light' },
  { value: 'dark', label: 'Dark' },
];

/** The season whose standing run the pages show: a choice when the district has several. */
async function SeasonInView() {
  const [district, run] = await Promise.all([districtInView(), runInView()]);
  if (district.seasons.length > 1) {
    const options = district.seasons.map((season) => ({ value: season.code, label: season.name || season.code }));
    const value = run?.season ?? district.seasons[0].code;
    return <PreferenceSelect cookie="tillwater_season" label="Season in view" options={options} value={value} />;
  }
  const season = district.seasons[0];
  if (!season) return <Link href="/settings#seasons">No season yet</Link>;
  return run ? (
    <Link href={`/runs/${run.id}`}>{season.name || season.code}</Link>
  ) : (
    <Link href="/runs">{season.name || season.code}: no run yet</Link>
  );
}

async function DistrictInView() {
  const caller = await callerInView();
  const districts = await answerDistricts(caller);
  if (districts.length < 2) return <span className="head-district">{caller.district.name}</span>;
  const options = districts.map((one) => ({ value: one.code, label: one.name }));
  return (
    <span className="head-district">
      <PreferenceSelect cookie="tillwater_district" label="District in view" options={options} value={caller.district.code} />
    </span>
  );
}

/** The figures on every page are of a run whose inputs have changed since. */
async function StaleNote() {
  const [caller, run] = await Promise.all([callerInView(), runInView()]);
  if (!run?.stale_since) return null;
  return (
    <p className="head-note">
      These figures are older than the district’s data: {run.stale_reason}, {moment(run.stale_since, caller.district.timeZone)}. They change
      when the season has been computed anew. <Link href="/runs">Runs</Link>
    </p>
  );
}

/** What every figure of the run in view rests on and a reader must know. */
async function RunWarnings() {
  const run = await runInView();
  if (!run || run.warnings.length === 0) return null;
  return (
    <p className="head-note">
      {run.warnings[0]}{' '}
      <Link href={`/runs/${run.id}#warnings`}>
        {run.warnings.length > 1 ? `${run.warnings.length} warnings of this run` : 'About this run'}
      </Link>
    </p>
  );
}

/** The desk: whose water, which season, where to go; the page itself comes below. */
export default async function DeskLayout({ children }: { children: ReactNode }) {
  const caller = await callerInView();
  const theme = (await cookies()).get('tillwater_theme')?.value ?? 'system';
  return (
    <>
      <a className="skip" href="#main">
        Skip to the content
      </a>
      <header>
        <div className="head">
          <div className="head-line">
            <Link className="mark" href="/" aria-label="Tillwater, demand map">
              <Mark />
              <span className="mark-name">Tillwater</span>
            </Link>
            <DistrictInView />
            <div className="head-end small">
              <SeasonInView />
              <AccountMenu
                name={caller.name}
                role={ROLES.find((one) => one.role === caller.role)?.name ?? caller.role}
                email={caller.email}
              >
                <PreferenceChoice cookie="tillwater_units" legend="Units" options={UNITS} value={caller.units} />
                <PreferenceChoice cookie="tillwater_theme" legend="Colours" options={THEMES} value={theme} />
              </AccountMenu>
            </div>
          </div>
          <PlaceLine />
        </div>
        {caller.district.invented ? <p className="head-note">{INVENTED_CAUTION}</p> : null}
        <StaleNote />
        <RunWarnings />
      </header>
      <main id="main" tabIndex={-1}>
        {children}
      </main>
      <PlaceBar />
    </>
  );
}
