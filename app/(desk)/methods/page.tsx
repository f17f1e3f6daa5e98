import type { Metadata } from 'next';
import { answerSoils } from '../../../lib/http/answers/land.ts';
import { answerMethods } from '../../../lib/http/answers/methods.ts';
import { Go } from '../../_components/go.tsx';
import { callerInView, runInView } from '../../_components/in-view.ts';
import { PageHead } from '../../_components/page-head.tsx';
import { CodeDocs } from './code-docs-view.tsx';
import { EquationList } from './equation-list.tsx';
import { loadEquations } from './load-equations.ts';
import { readCodeDocs } from './read-code-docs.ts';
import { Rules } from './rules.tsx';
import { Tables } from './tables.tsx';

export const metadata: Metadata = { title: 'Methods' };

export default async function MethodsPage() {
  const [caller, run] = await Promise.all([callerInView(), runInView()]);
  return (
    <div className="page">
      <PageHead title="Methods" lead="Every equation, table and constant in use with its source, read from the code that computes.">
        <Go className="button" href="/methods/validation">
          Validation
        </Go>
      </PageHead>
      <EquationList worked={run ? await loadEquations(caller, run) : null} />
      <Rules run={run} />
      <Tables soils={await answerSoils(caller)} methods={await answerMethods(caller)} />
      <CodeDocs rooms={await readCodeDocs()} />
    </div>
  );
}
