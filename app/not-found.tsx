import type { Metadata } from 'next';
import Link from 'next/link';

export const metadata: Metadata = { title: 'Not found' };

/** An address that leads nowhere, or to what another district owns: the two look the same. */
export default function NotFound() {
  return (
    <main id="main" className="page narrow">
      <h1>Nothing at this address</h1>
      <p>Either it never was, or it belongs to another district. A code may have been typed with a letter missing.</p>
      <p className="row">
        <Link className="button primary" href="/">
          Demand map
        </Link>
        <Link className="button" href="/parcels">
          Parcels
        </Link>
      </p>
    </main>
  );
}
