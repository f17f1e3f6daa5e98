import { countsAsEstimated, FALLBACK_TEXT, type Fallback } from '../../lib/weather/variable.ts';
import { percent } from './figures.ts';

/** A fallback in words; a name this version does not know is shown as it came. */
export function fallbackText(name: string): string {
  return FALLBACK_TEXT[name as Fallback] ?? name;
}

/** What was estimated in the weather behind a figure, plainly. Dew point is a measurement and is not shown. */
export function FallbackWords({ names }: { names: readonly string[] }) {
  const shown = names.filter((name) => name !== 'humidityFromDewPoint');
  if (shown.length === 0) return null;
  return (
    <ul className="notice caution" aria-label="Estimated in the weather behind these figures">
      {shown.map((name) => (
        <li key={name}>{fallbackText(name)}</li>
      ))}
    </ul>
  );
}

/** The same, with how much of the record rests on each. */
export function FallbackShares({ shares, of }: { shares: Readonly<Record<string, number>>; of: string }) {
  const shown = Object.entries(shares)
    .filter(([, share]) => share > 0)
    .sort((a, b) => b[1] - a[1]);
  if (shown.length === 0) return <p className="muted">Nothing in the weather was estimated.</p>;
  return (
    <ul className="small">
      {shown.map(([name, share]) => (
        <li key={name}>
          {share < 0.005 ? 'under 1\u00a0%' : percent(share)} of {of}: {fallbackText(name)}
        </li>
      ))}
    </ul>
  );
}

/** How often each fallback occurs in a list of days, as a share of the days. */
export function fallbackSharesOf(days: readonly { readonly fallbacks: readonly string[] }[]): Record<string, number> {
  const shares: Record<string, number> = {};
  for (const day of days) for (const name of day.fallbacks) shares[name] = (shares[name] ?? 0) + 1 / days.length;
  return shares;
}

/** Share of days on which a value of the weather was filled or estimated; assumptions about a site do not count. */
export function estimatedShare(days: readonly { readonly fallbacks: readonly string[] }[]): number {
  if (days.length === 0) return Number.NaN;
  return days.filter((day) => day.fallbacks.some(countsAsEstimated)).length / days.length;
}

/** How much of a figure rests on weather that was not measured, in words. */
export function EstimatedShare({ share, of }: { share: number | null | undefined; of: string }) {
  if (share === null || share === undefined || !Number.isFinite(share)) return null;
  if (share === 0) return <p className="small muted">No weather behind these figures was filled or estimated.</p>;
  const said = share < 0.005 ? 'under 1\u00a0%' : percent(share);
  return (
    <p className="small">
      {said} of {of} rest on weather that was filled or estimated.
    </p>
  );
}
