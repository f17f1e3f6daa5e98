/** Application methods of the district, and their changes. */
import { listComputableSeasons } from '../../../db/queries/import-context.ts';
import { findMethod, listMethods, updateMethod } from '../../../db/queries/land-read.ts';
import { markRunsStale } from '../../../db/queries/stale-runs.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { NotFound, Refused } from '../../base/errors.ts';
import type { MethodPatch } from '../contract/records.ts';
import type { MethodAnswer } from '../contract/rest.ts';
import { isStorable } from '../storable-text.ts';

export async function answerMethods(caller: Caller): Promise<MethodAnswer[]> {
  const rows = await database().inDistrict(caller.districtId, (tx) => listMethods(tx, caller.districtId));
  return rows.map(methodMembers);
}

function methodMembers(row: Awaited<ReturnType<typeof listMethods>>[number]): MethodAnswer {
  return {
    code: row.code,
    name: row.name,
    efficiency: row.efficiency,
    wetted_fraction: row.wettedFraction,
    under_canopy: row.underCanopy,
    maximum_daily_depth_mm: row.maximumDailyDepth,
    trigger_fraction: row.triggerFraction,
    minimum_depth_mm: row.system.minimumDepth ?? null,
    flow_l_s_ha: row.system.flow ?? null,
    efficiency_by_depth: (row.system.efficiencyByDepth ?? []).map(({ depth, efficiency }) => ({ depth_mm: depth, efficiency })),
    source: row.source,
  };
}

/**
 * Changes a method of the district; members that are left out stay. Standing runs become stale.
 *
 * @throws NotFound, or Refused for limits that contradict each other
 */
export async function changeMethod(caller: Caller, code: string, patch: MethodPatch): Promise<MethodAnswer> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const row = isStorable(code) ? await findMethod(tx, districtId, code) : null;
    if (!row) throw new NotFound(`no application method "${code}" in this district`);
    const points = patch.efficiency_by_depth?.map(({ depth_mm: depth, efficiency }) => ({ depth, efficiency }));
    const system = {
      minimumDepth: patch.minimum_depth_mm === undefined ? row.system.minimumDepth : (patch.minimum_depth_mm ?? undefined),
      flow: patch.flow_l_s_ha === undefined ? row.system.flow : (patch.flow_l_s_ha ?? undefined),
      efficiencyByDepth: points === undefined ? row.system.efficiencyByDepth : points.length > 0 ? points : undefined,
    };
    const values = {
      efficiency: patch.efficiency ?? row.efficiency,
      maximumDailyDepth: patch.maximum_daily_depth_mm ?? row.maximumDailyDepth,
      triggerFraction: patch.trigger_fraction ?? row.triggerFraction,
      source: patch.source ?? row.source,
      system,
    };
    requireSound(values);
    await updateMethod(tx, districtId, code, values);
    const seasons = await listComputableSeasons(tx, districtId);
    await markRunsStale(
      tx,
      districtId,
      seasons.map((season) => season.code),
      'application method changed',
    );
    return methodMembers({ ...row, ...values });
  });
}

function requireSound({
  maximumDailyDepth,
  system,
}: Pick<Awaited<ReturnType<typeof listMethods>>[number], 'maximumDailyDepth' | 'system'>): void {
  const { minimumDepth = 0, efficiencyByDepth = [] } = system;
  if (minimumDepth > maximumDailyDepth) {
    throw new Refused(
      `The least depth of an application (${minimumDepth} mm) is above the most of a day (${maximumDailyDepth} mm): no water would ever be put on.`,
    );
  }
  const turned = efficiencyByDepth.find(({ depth }, i) => i > 0 && depth <= efficiencyByDepth[i - 1].depth);
  if (turned) throw new Refused(`Efficiencies by depth must ascend by depth; ${turned.depth} mm does not follow the depth before it.`);
}
