'use client';

import Link from 'next/link';
import { usePathname } from 'next/navigation';
import { useEffect, useRef } from 'react';

const PLACES = [
  { href: '/', name: 'Demand map', short: 'Map' },
  { href: '/parcels', name: 'Parcels', short: 'Parcels' },
  { href: '/canals', name: 'Canals', short: 'Canals' },
  { href: '/weather', name: 'Weather', short: 'Weather' },
  { href: '/frost', name: 'Frost', short: 'Frost' },
  { href: '/crops', name: 'Crops', short: 'Crops' },
  { href: '/imports', name: 'Imports', short: 'Imports' },
  { href: '/runs', name: 'Runs', short: 'Runs' },
  { href: '/reports', name: 'Reports', short: 'Reports' },
  { href: '/methods', name: 'Methods', short: 'Methods' },
  { href: '/settings', name: 'Settings', short: 'Settings' },
] as const;
const ON_THE_BAR = 4;

function isHere(path: string, href: string): boolean {
  return href === '/' ? path === '/' : path === href || path.startsWith(`${href}/`);
}

function Place({ href, children }: { href: string; children: string }) {
  const path = usePathname();
  return (
    <Link href={href} prefetch={false} aria-current={isHere(path, href) ? 'page' : undefined}>
      {children}
    </Link>
  );
}

/** Wide screens: every place on one line of text. */
export function PlaceLine() {
  return (
    <nav className="place-line no-print" aria-label="Main">
      {PLACES.map((place) => (
        <Place key={place.href} href={place.href}>
          {place.name}
        </Place>
      ))}
    </nav>
  );
}

/** Phones: a bar at the thumb with the four daily places, the rest behind “More”. */
export function PlaceBar() {
  const path = usePathname();
  const more = useRef<HTMLDetailsElement>(null);
  // biome-ignore lint/correctness/useExhaustiveDependencies: the sheet closes whenever the path changes
  useEffect(() => {
    if (more.current) more.current.open = false;
  }, [path]);
  const rest = PLACES.slice(ON_THE_BAR);
  return (
    <nav className="place-bar no-print" aria-label="Main, short">
      {PLACES.slice(0, ON_THE_BAR).map((place) => (
        <Place key={place.href} href={place.href}>
          {place.short}
        </Place>
      ))}
      <details ref={more}>
        <summary data-here={rest.some((place) => isHere(path, place.href))}>More</summary>
        <div className="place-sheet">
          {rest.map((place) => (
            <Place key={place.href} href={place.href}>
              {place.name}
            </Place>
          ))}
        </div>
      </details>
    </nav>
  );
}
