/**
 * What replacing the canals by those of a file would remove.
 */
import { counted } from '../base/counted.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { ImportContext, StagedReach } from './reading.ts';

const LISTED = 12;

/**
 * Warns of the stored reaches that the file does not have. Refused when one of them stands in the file but could not be read, or when a
 * turnout or parcel names one.
 */
export function reachesRemoved(
  reaches: readonly StagedReach[],
  leftOut: ReadonlyMap<string, string>,
  context: ImportContext,
  findings: FindingList,
): void {
  const kept = new Set(reaches.map(({ code }) => code));
  const removed = context.knownReaches.map(({ code }) => code).filter((code) => !kept.has(code));
  if (removed.length === 0) return;
  for (const code of removed.filter((one) => leftOut.has(one)))
    findings.refuse({
      code: 'replaced-reach-unread',
      message: `Replacing the canals would remove reach ${shown(code)}, which stands in the file but was left out.`,
      value: shown(code),
      advice: 'Correct that reach, or import without replacing.',
    });
  refuseUsed(removed, context, findings);
  findings.warn({
    code: 'reaches-removed',
    message: `Replacing the canals removes ${counted(removed.length, 'reach', 'reaches')} that the file does not have: ${listed(removed)}.`,
    advice: 'Import without replacing to keep them.',
  });
}

function refuseUsed(removed: readonly string[], { knownTurnouts, parcelCounts }: ImportContext, findings: FindingList): void {
  const gone = new Set(removed);
  const turnouts = knownTurnouts.filter(({ reachCode }) => gone.has(reachCode));
  const parcels = removed.filter((code) => (parcelCounts?.[code] ?? 0) > 0);
  if (turnouts.length > 0)
    findings.refuse({
      code: 'removed-reach-in-use',
      message: `${counted(turnouts.length, 'turnout stands', 'turnouts stand')} on reaches that would be removed: ${listed(turnouts.map(({ code, reachCode }) => `${code} on ${reachCode}`))}.`,
      advice: 'Move them to reaches of the file first, or add those reaches to the file.',
    });
  if (parcels.length > 0)
    findings.refuse({
      code: 'removed-reach-in-use',
      message: `Parcels name reaches that would be removed: ${listed(parcels.map((code) => `${counted(parcelCounts?.[code] ?? 0, 'parcel', 'parcels')} on ${code}`))}.`,
      advice: 'Move them to reaches of the file first, or add those reaches to the file.',
    });
}

function listed(texts: readonly string[]): string {
  return `${texts.slice(0, LISTED).map(shown).join(', ')}${texts.length > LISTED ? ' …' : ''}`;
}
