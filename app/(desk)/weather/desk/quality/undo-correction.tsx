'use client';

import { useRouter } from 'next/navigation';
import { ConfirmButton } from '../../../../_components/dialog.tsx';
import { sendJson } from '../../../../_components/problem-text.ts';

/** Undoes a decision after asking once more. */
export function UndoCorrection({ id }: { id: string }) {
  const router = useRouter();
  const undo = async () => {
    await sendJson('POST', `/api/v1/weather/corrections/${id}/undo`);
    router.refresh();
  };
  return (
    <ConfirmButton
      label="Undo"
      title="Undo this correction?"
      says="The values are again what they would be without it, the flags it settled are open, and the seasons it touches are computed anew. The decision stays in the list as undone."
      act="Undo it"
      onAct={undo}
    />
  );
}
