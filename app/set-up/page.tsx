import type { Metadata } from 'next';
import { redirect } from 'next/navigation';
import { isSetUpOpen } from '../../lib/access/tokens.ts';
import { Mark } from '../_components/mark.tsx';
import { SetUpForm } from '../_components/set-up-form.tsx';
import { knownTimeZones } from '../_components/time-zones.ts';

export const metadata: Metadata = { title: 'Set up the first district' };
export const dynamic = 'force-dynamic';

/** The first district of an empty service. Once it is there, this page leads to the way in. */
export default async function SetUpPage() {
  if (!(await isSetUpOpen())) redirect('/sign-in');
  return (
    <main id="main" className="sign-in">
      <div className="sign-in-sheet wide">
        <h1 className="sign-in-name">
          <Mark /> Set up the first district
        </h1>
        <p className="lede">
          Whose water this is, and who looks after it. Everything about the district but its code can be changed later in Settings.
        </p>
        <SetUpForm timeZones={knownTimeZones()} />
        <p className="small">
          <a href="/sign-in">Sign in instead</a>
        </p>
      </div>
    </main>
  );
}
