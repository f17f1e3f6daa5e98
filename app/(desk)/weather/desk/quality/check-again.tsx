'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { messageOf, sendJson } from '../../../../_components/problem-text.ts';

/** Has every source checked again in the background. */
export function CheckAgain() {
  const router = useRouter();
  const [said, setSaid] = useState<string | null>(null);
  const ask = async () => {
    try {
      await sendJson('POST', '/api/v1/weather/check', {});
      setSaid('Asked for. The flags are replaced when the check is done.');
      setTimeout(() => router.refresh(), 3000);
    } catch (error) {
      setSaid(messageOf(error));
    }
  };
  return (
    <>
      <button type="button" className="button" onClick={ask}>
        Check again
      </button>
      <span role="status" className="small muted">
        {said}
      </span>
    </>
  );
}
