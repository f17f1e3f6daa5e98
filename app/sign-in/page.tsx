import type { Metadata } from 'next';
import { demoSignIns } from '../../lib/access/demo-sign-ins.ts';
import { isSetUpOpen } from '../../lib/access/tokens.ts';
import { Go } from '../_components/go.tsx';
import { Mark } from '../_components/mark.tsx';
import { SignInForm } from '../_components/sign-in-form.tsx';

export const metadata: Metadata = { title: 'Sign in' };
export const dynamic = 'force-dynamic';

const REASONS: Record<string, string> = {
  'no-district': 'You are signed in, but belong to no district. Ask a manager of your district to add you, or sign in as somebody else.',
};

/** The way in. A demo says who may sign in; every other district keeps that to itself. */
export default async function SignInPage({ searchParams }: { searchParams: Promise<{ reason?: string }> }) {
  const [demo, empty, { reason }] = await Promise.all([demoSignIns(), isSetUpOpen(), searchParams]);
  return (
    <main id="main" className="sign-in">
      <div className="sign-in-sheet">
        <h1 className="sign-in-name">
          <Mark /> Tillwater
        </h1>
        <p className="lede">What every parcel needs, and what every canal must carry to meet it.</p>
        {reason && REASONS[reason] ? (
          <p className="notice caution" role="status">
            {REASONS[reason]}
          </p>
        ) : null}
        {empty ? <FirstVisit /> : null}
        <SignInForm demo={demo} />
      </div>
    </main>
  );
}

/** Nobody can sign in yet: the service has no district. */
function FirstVisit() {
  return (
    <section className="notice stack" aria-label="First visit">
      <p>This service has no district yet. You need the set-up token that was printed where it was started.</p>
      <p>
        <Go className="button primary" href="/set-up">
          Set up the first district
        </Go>
      </p>
    </section>
  );
}
