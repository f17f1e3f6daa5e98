'use client';

import { Fault, type FaultProps } from '../_components/fault.tsx';

/** A page of the desk failed; the desk around it stands. */
export default function DeskFault(props: FaultProps) {
  return (
    <div className="page narrow">
      <Fault {...props} />
    </div>
  );
}
