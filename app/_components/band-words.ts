/** Words for a band: plain sentences about how sure a figure is. */
import type { UnitSystem } from '../../lib/base/units.ts';
import type { BandRow, BandStateAnswer } from '../../lib/http/contract/band.ts';
import { figureWithUnit, percent } from './figures.ts';

/** "between 20 mm and 30 mm", in the reader's units. */
export function betweenText(row: BandRow | undefined, quantity: 'depth' | 'volume', units: UnitSystem): string | null {
  const [low, high] = quantity === 'depth' ? [row?.p10_mm, row?.p90_mm] : [row?.p10_m3, row?.p90_m3];
  if (low === null || low === undefined || high === null || high === undefined) return null;
  return `between ${figureWithUnit(low, quantity, units)} and ${figureWithUnit(high, quantity, units)}`;
}

/** What stands in place of a band that is not there. */
export function bandMissing(band: BandStateAnswer | null): string {
  if (!band)
    return 'This run was not asked how sure its figures are. A run with members for the band (Runs, Settings) tells a low and a high figure beside each.';
  if (band.state === 'failed') return `How sure the figures are could not be computed: ${band.error}`;
  if (band.state === 'done')
    return 'How sure the canals and the whole district are is shown to the district only; each parcel has it on its own page.';
  if (band.state === 'cancelled') return 'Computing how sure the figures are was called off.';
  return `How sure the figures are is being computed: ${percent(band.progress)} done. Look again in a while.`;
}

/** What a band rests on, a sentence each. */
export function bandBasis(band: BandStateAnswer): string[] {
  const { weather_error: weather, field_errors: field, members, seed } = band;
  const basis = [
    `The season was computed ${members} times, each time with other errors that could be there; seed ${seed} gives the same again.`,
  ];
  if (weather) basis.push(`Daily reference ET may be off by ${percent(weather.observed.deviation, 1)} (${weather.observed.from}).`);
  if (weather?.ahead)
    basis.push(
      `On the ${weather.ahead.days} days to come the normal misses by ${percent(weather.ahead.deviation)} (${weather.ahead.from}).`,
    );
  basis.push(
    `Crop coefficients may be off by ${offText(field.coefficient)}, application efficiencies by ${offText(field.efficiency)}, the water a soil holds by ${offText(field.available)}: stated values, common practice.`,
  );
  basis.push('Rain, areas, planting dates and canal losses are taken as known, so the truth can lie further out than the band.');
  return basis;
}

/** Shared and own part together. */
function offText({ shared, own }: BandStateAnswer['field_errors']['coefficient']): string {
  return percent(Math.hypot(shared, own));
}
