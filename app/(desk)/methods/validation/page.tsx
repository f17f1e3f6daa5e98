import type { Metadata } from 'next';
import { EmptyState } from '../../../_components/empty-state.tsx';
import { callerInView } from '../../../_components/in-view.ts';
import { PageHead } from '../../../_components/page-head.tsx';
import { loadValidation } from './load-validation.ts';
import { ValidationView } from './validation-view.tsx';

export const metadata: Metadata = { title: 'Validation' };

export default async function ValidationPage() {
  await callerInView();
  const tables = await loadValidation();
  return (
    <div className="page">
      <PageHead
        title="Validation"
        lead="What the computation is held against outside this service: printed tables and worked examples, measured evaporation, values that agencies publish. Written by the tests; a figure that moves fails them."
        crumbs={[['/methods', 'Methods']]}
      />
      {tables.length === 0 ? (
        <EmptyState title="No checks are kept in this copy">Run the tests of the service to write them.</EmptyState>
      ) : (
        <ValidationView tables={tables} />
      )}
    </div>
  );
}
