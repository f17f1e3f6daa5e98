'use client';

import { Fault, type FaultProps } from './_components/fault.tsx';

/** A page outside the desk failed. */
export default function OuterFault(props: FaultProps) {
  return (
    <main id="main" className="page narrow">
      <Fault {...props} />
    </main>
  );
}
