import { Go } from './go.tsx';

const PLACES = [
  { href: '/weather', name: 'Sites' },
  { href: '/weather/desk/quality', name: 'Quality' },
  { href: '/weather/desk/gaps', name: 'Gaps' },
  { href: '/weather/desk/interpolation', name: 'Interpolation' },
  { href: '/weather/desk/feeds', name: 'Feeds' },
] as const;

export type WeatherPlace = (typeof PLACES)[number]['href'];

/** The parts of the weather desk, on one line under the title. */
export function WeatherNav({ here }: { here: WeatherPlace }) {
  return (
    <nav className="parts no-print" aria-label="Weather desk">
      {PLACES.map((place) => (
        <Go key={place.href} href={place.href} aria-current={place.href === here ? 'page' : undefined}>
          {place.name}
        </Go>
      ))}
    </nav>
  );
}
