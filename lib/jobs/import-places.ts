/** Which weather source an import goes to, and where each of its stations lives. */
import type { Tx } from '../../db/connect.ts';
import type { ImportKey } from '../../db/queries/import-before.ts';
import { type listSourceSites, listSources } from '../../db/queries/import-context.ts';
import { Conflict } from '../base/errors.ts';

export interface Place {
  readonly sourceId: number;
  readonly ordinal: number;
}

export type SourceRole = 'observed' | 'forecast';

/** The source that an import names, and what it says of it; null where it says nothing. */
export interface SourceTarget {
  readonly source: string | null;
  readonly role: SourceRole | null;
}

/**
 * Where each station lives: in the named source when it is there, else in the first source of observations that has it. A forecast never lies in a source of
 * observations, nor the other way round.
 */
export class SitePlaces {
  private readonly known = new Map<string, Place>();

  constructor(sites: Awaited<ReturnType<typeof listSourceSites>>, preferred: string | null, role: SourceRole) {
    for (const site of sites) {
      const isNamed = site.source === preferred;
      if (!isNamed && (role === 'forecast' || site.role === 'forecast' || site.kind === 'grid')) continue;
      if (!this.known.has(site.code) || isNamed) this.known.set(site.code, { sourceId: site.sourceId, ordinal: site.ordinal });
    }
  }

  find(code: string): Place | null {
    return this.known.get(code) ?? null;
  }
}

export const DEFAULT_SOURCE = 'Stations';
const DEFAULT_FORECAST = 'Forecast';

/**
 * The source an import goes to by name, and its role. A forecast without a name goes to the district's only forecast of stations, or to "Forecast".
 *
 * @throws Conflict when the source is there in the other role
 */
export async function settledTarget(
  tx: Tx,
  own: ImportKey,
  { source, role }: SourceTarget,
): Promise<{ source: string | null; role: SourceRole }> {
  const all = await listSources(tx, own.districtId);
  const found = all.find(({ name }) => name === source);
  refuseOtherRole(found, role);
  if (role !== 'forecast') return { source, role: found?.role ?? 'observed' };
  const forecasts = all.filter((one) => one.role === 'forecast' && one.kind === 'stations');
  return { source: source ?? (forecasts.length === 1 ? forecasts[0].name : DEFAULT_FORECAST), role };
}

export function refuseOtherRole(found: { readonly name: string; readonly role: SourceRole } | undefined, role: SourceRole | null): void {
  if (!found || role === null || found.role === role) return;
  const [is, not] = found.role === 'forecast' ? ['a forecast', 'observations'] : ['a source of observations', 'forecast'];
  throw new Conflict(
    `"${found.name}" is ${is}: it takes no ${not}. Give another source in the options, so that forecast and observed values stay apart.`,
  );
}
