/**
 * Service areas: the land that a turnout, a reach or a company serves, as polygons of any vector format.
 */
import { counted } from '../base/counted.ts';
import { findOverlaps } from '../geo/overlap.ts';
import { type AreaPolygon, boxAround, takeAreaPolygons } from './area-polygons.ts';
import { AREA_ROLES } from './area-roles.ts';
import { attributesOf, bindWithCode, textOf } from './feature-properties.ts';
import { FindingList, shown } from './finding-list.ts';
import { readLayerFeatures } from './layer-features.ts';
import type { ImportContext, ImportFile, ImportOptions, ImportReading, Progress, StagedArea } from './reading.ts';
import { NOTHING_UNDERSTOOD } from './reading.ts';
import type { BoundTable } from './table-columns.ts';

/** Overlap of two service areas that is told, as a share of the smaller one. */
const OVERLAP_LIMIT = 0.01;
const OVERLAPS_REPORTED = 200;
const LISTED = 15;

/** Reads service areas from one or more vector files. */
export async function readServiceAreas(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const findings = new FindingList();
  const { features, understood } = await readLayerFeatures(files, ['Polygon', 'MultiPolygon'], options, findings, (part) =>
    progress(0.6 * part),
  );
  const properties = bindWithCode(
    features,
    { roles: AREA_ROLES, options, chosen: { code: options.codeColumn } },
    { thing: 'service area', numbered: 'A001, A002' },
    findings,
  );
  const links = linksOf(context);
  const areas: StagedArea[] = [];
  const preview = takeAreaPolygons({
    features,
    properties,
    findings,
    thing: 'Service area',
    numbered: (row) => `A${String(row).padStart(3, '0')}`,
    take: (polygon) => {
      const link = links.of(polygon, properties.bound);
      const { feature, ...place } = polygon;
      const name = textOf(feature, properties.bound, 'name') ?? polygon.code;
      areas.push({ ...place, ...link, name, attributes: attributesOf(feature, properties) });
      return { says: saysOf(link) };
    },
  });
  links.finish(findings);
  warnOverlaps(areas, findings);
  if (options.replace === true) warnRemoved(areas, context, findings);
  await progress(1);
  return {
    understood: {
      ...NOTHING_UNDERSTOOD,
      ...understood,
      columns: properties.columns,
      usableRows: areas.length,
      boundingBox: boxAround(areas),
    },
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: preview.preview(),
    staged: { kind: 'areas', areas: findings.fatal ? [] : areas },
  };
}

type Link = Pick<StagedArea, 'reachCode' | 'turnoutCode'>;

function saysOf({ reachCode, turnoutCode }: Link): string {
  if (turnoutCode !== null) return `Served by turnout ${turnoutCode}${reachCode === null ? '' : ` on reach ${reachCode}`}.`;
  return reachCode === null ? 'Names neither turnout nor reach.' : `Served by reach ${reachCode}.`;
}

/** The turnout and reach that each area names. Reaches are taken on trust while the district has none. */
function linksOf({ knownReaches, knownTurnouts }: ImportContext) {
  const reaches = new Set(knownReaches.map(({ code }) => code));
  const turnouts = new Map(knownTurnouts.map(({ code, reachCode }) => [code, reachCode]));
  const unknown = { reach: new Set<string>(), turnout: new Set<string>() };
  const bare: string[] = [];
  const known = (role: 'reach' | 'turnout', code: string | null, has: boolean): string | null => {
    if (code === null || has) return code;
    unknown[role].add(code);
    return null;
  };
  const of = ({ feature, code }: AreaPolygon, bound: BoundTable['bound']): Link => {
    const turnoutText = textOf(feature, bound, 'turnout');
    const reachText = textOf(feature, bound, 'reach');
    const turnoutCode = known('turnout', turnoutText, turnoutText !== null && turnouts.has(turnoutText));
    const named = known('reach', reachText, reachText !== null && (reaches.size === 0 || reaches.has(reachText)));
    const reachCode = (turnoutCode === null ? null : turnouts.get(turnoutCode)) ?? named;
    if (turnoutCode === null && reachCode === null) bare.push(code);
    return { turnoutCode, reachCode };
  };
  const finish = (findings: FindingList) => {
    for (const role of ['reach', 'turnout'] as const) {
      if (unknown[role].size === 0) continue;
      findings.warn({
        code: `unknown-${role}`,
        message: `${counted(unknown[role].size, `${role} code is`, `${role} codes are`)} not known: ${listed([...unknown[role]])}. Their service areas come without.`,
        column: role,
        advice: `Import the ${role === 'reach' ? 'canals' : 'turnouts'} first, or correct the codes.`,
      });
    }
    if (bare.length > 0)
      findings.note({
        code: 'area-without-canal',
        message: `${counted(bare.length, 'service area names', 'service areas name')} neither a turnout nor a reach that is known: ${listed(bare)}. Parcels cannot be joined to a canal by them.`,
      });
  };
  return { of, finish };
}

function warnOverlaps(areas: readonly StagedArea[], findings: FindingList): void {
  const shapes = areas.map(({ geometry }) => geometry);
  const sizes = areas.map(({ area }) => area);
  for (const { first, second, share } of findOverlaps(shapes, sizes, { threshold: OVERLAP_LIMIT, limit: OVERLAPS_REPORTED })) {
    findings.warn({
      code: 'areas-overlap',
      message: `Service areas ${shown(areas[first].code)} and ${shown(areas[second].code)} overlap by ${Number((share * 100).toPrecision(2))} % of the smaller one.`,
      value: shown(areas[second].code),
      limit: `${OVERLAP_LIMIT * 100} % of the smaller area`,
      advice: 'A parcel on both is joined to the one with the larger share of it. Correct the outlines where that is wrong.',
    });
  }
}

function warnRemoved(areas: readonly StagedArea[], { serviceAreas = [] }: ImportContext, findings: FindingList): void {
  const kept = new Set(areas.map(({ code }) => code));
  const removed = areas.length === 0 ? [] : serviceAreas.map(({ code }) => code).filter((code) => !kept.has(code));
  if (removed.length === 0) return;
  findings.warn({
    code: 'areas-removed',
    message: `Replacing the service areas removes ${counted(removed.length, 'area', 'areas')}: ${listed(removed)}.`,
    advice: 'Import without replacing to keep them.',
  });
}

function listed(codes: readonly string[]): string {
  return `${codes.slice(0, LISTED).map(shown).join(', ')}${codes.length > LISTED ? ' …' : ''}`;
}
