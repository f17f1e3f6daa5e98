/** What a printed report says of how sure the district's figures are. */
import type { Caller } from '../../access/caller.ts';
import { nanFromNull } from '../../base/missing.ts';
import type { UnitSystem } from '../../base/units.ts';
import { formatVolume } from '../../report/quantity-text.ts';
import type { BandRow } from '../contract/band.ts';
import { answerBand } from './band.ts';

interface Ends {
  readonly low: number;
  readonly high: number;
}

/** Ends of the weekly gross volumes [m³] by first day, and a paragraph on the diversion; nothing where the run has no band, and for growers. */
export async function reportBand(
  caller: Caller,
  runId: string,
  units: UnitSystem,
): Promise<{ weeks: ReadonlyMap<string, Ends>; paragraphs: string[] }> {
  const asked = { level: 'district', limit: 1000 } as const;
  const weeks = await answerBand(caller, runId, { ...asked, variable: 'gross_volume', period: 'week' });
  const season = await answerBand(caller, runId, { ...asked, variable: 'head_inflow', period: 'season' });
  return {
    weeks: new Map(weeks.items.map((row) => [row.start, endsOf(row)])),
    paragraphs: season.items.map((row) => paragraphOf(endsOf(row), units)),
  };
}

function endsOf({ p10_m3, p90_m3 }: BandRow): Ends {
  return { low: nanFromNull(p10_m3), high: nanFromNull(p90_m3) };
}

function paragraphOf({ low, high }: Ends, units: UnitSystem): string {
  return `In 8 of 10 cases the inflow at the headworks over the season lies between ${formatVolume(low, units)} and ${formatVolume(high, units)}; the lines on the weekly bars tell the same of each week. Errors of weather, crop coefficients, application efficiency and soil are carried through by stratified sampling; rain and losses are taken as known.`;
}
