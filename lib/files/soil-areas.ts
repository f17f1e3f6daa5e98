/**
 * A soil map: polygons of any vector format, each of a soil class of the district.
 */
import { counted } from '../base/counted.ts';
import { geodesicArea } from '../geo/geodesic.ts';
import { findOverlaps } from '../geo/overlap.ts';
import { boxAround, takeAreaPolygons } from './area-polygons.ts';
import { SOIL_AREA_ROLES } from './area-roles.ts';
import { attributesOf, bindWithCode, textOf } from './feature-properties.ts';
import { FindingList, shown } from './finding-list.ts';
import { readLayerFeatures } from './layer-features.ts';
import { propertyNames, type RawFeature } from './raw-feature.ts';
import type { ImportContext, ImportFile, ImportOptions, ImportReading, Progress, SoilClassCount, StagedSoilArea } from './reading.ts';
import { NOTHING_UNDERSTOOD } from './reading.ts';
import { type TableRole, tableRoleOf } from './table-columns.ts';

/** Roles in a map that holds nothing but the class: its code or name is then that of the soil. */
const CLASS_ONLY_ROLES: readonly TableRole[] = [
  { role: 'code', names: ['polygon', 'polygon code', 'polygon id', 'id', 'fid'] },
  { role: 'soil', names: ['code', 'name'] },
];

function rolesOf(features: readonly RawFeature[], { plan }: ImportOptions): readonly TableRole[] {
  const planned = Object.values(plan?.columns ?? {}).some(({ role }) => role === 'soil');
  const names = propertyNames(features, 500);
  return planned || names.some((name) => tableRoleOf(name, SOIL_AREA_ROLES)?.role.role === 'soil') ? SOIL_AREA_ROLES : CLASS_ONLY_ROLES;
}

const OVERLAP_LIMIT = 0.01;
const OVERLAPS_REPORTED = 100;
const LISTED = 15;

/** Reads soil polygons from one or more vector files. */
export async function readSoilAreas(
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
    { roles: rolesOf(features, options), options, chosen: { code: options.codeColumn } },
    { thing: 'soil polygon', numbered: 'S00001, S00002' },
    findings,
  );
  if (features.length > 0 && !properties.bound.has('soil'))
    findings.refuse({
      code: 'missing-column',
      message: 'No property holds the soil class of the polygons.',
      column: 'soil',
      limit: properties.names.slice(0, 20).join(', '),
      advice: 'Choose the property with the soil class in the column plan.',
    });
  const classes = classesOf(features, (feature) => textOf(feature, properties.bound, 'soil'), options, context);
  const soilAreas: StagedSoilArea[] = [];
  const unnamed: string[] = [];
  const preview = takeAreaPolygons({
    features: properties.bound.has('soil') ? features : [],
    properties,
    findings,
    thing: 'Soil polygon',
    numbered: (row) => `S${String(row).padStart(5, '0')}`,
    take: ({ feature, area: _area, ...place }) => {
      const text = textOf(feature, properties.bound, 'soil');
      if (text === null) unnamed.push(place.code);
      const soilCode = text === null ? null : (classes.get(text)?.soilCode ?? null);
      if (soilCode === null)
        return { refused: text === null ? 'The polygon names no soil class.' : `Soil class ${shown(text)} is not known.` };
      soilAreas.push({ ...place, soilCode, attributes: attributesOf(feature, properties) });
      return { says: `Soil ${soilCode}.` };
    },
  });
  tellClasses([...classes.values()], unnamed, findings);
  warnOverlaps(soilAreas, findings);
  await progress(1);
  return {
    understood: {
      ...NOTHING_UNDERSTOOD,
      ...understood,
      columns: properties.columns,
      usableRows: soilAreas.length,
      boundingBox: boxAround(soilAreas),
      soilClasses: [...classes.values()],
    },
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: preview.preview(),
    staged: { kind: 'soil-areas', soilAreas: findings.fatal ? [] : soilAreas },
  };
}

/** The classes of the map with the soil each stands for: as the options say, else by code, else by name, in any case. */
function classesOf(
  features: readonly RawFeature[],
  classOf: (feature: RawFeature) => string | null,
  { soilMappings = {} }: ImportOptions,
  { soils, soilNames = {} }: ImportContext,
): Map<string, SoilClassCount> {
  const byCode = new Map(soils.map((code) => [code.toLowerCase(), code]));
  const byName = new Map(Object.entries(soilNames).map(([code, name]) => [name.toLowerCase(), code]));
  const meaning = (text: string): Pick<SoilClassCount, 'soilCode' | 'by'> => {
    if (Object.hasOwn(soilMappings, text)) {
      const mapped = soilMappings[text];
      return { soilCode: mapped === null ? null : (byCode.get(mapped.toLowerCase()) ?? null), by: 'option' };
    }
    const code = byCode.get(text.toLowerCase());
    if (code !== undefined) return { soilCode: code, by: 'code' };
    const named = byName.get(text.toLowerCase());
    return named === undefined ? { soilCode: null, by: null } : { soilCode: named, by: 'name' };
  };
  const classes = new Map<string, SoilClassCount>();
  for (const feature of features) {
    const text = classOf(feature);
    if (text === null) continue;
    const known = classes.get(text) ?? { foreignCode: text, count: 0, ...meaning(text) };
    classes.set(text, { ...known, count: known.count + 1 });
  }
  return classes;
}

function tellClasses(classes: readonly SoilClassCount[], unnamed: readonly string[], findings: FindingList): void {
  const unknown = classes.filter(({ soilCode, by }) => soilCode === null && by === null);
  if (unknown.length > 0)
    findings.warn({
      code: 'unknown-soil',
      message: `${counted(unknown.length, 'soil class is', 'soil classes are')} not known to the district; the polygons are left out: ${listed(unknown.map(({ foreignCode, count }) => `${shown(foreignCode)} (${count})`))}.`,
      column: 'soil',
      advice: 'Map the classes to soils of the district below, or import a table of soils with these codes first.',
    });
  const wrong = classes.filter(({ soilCode, by }) => soilCode === null && by === 'option');
  if (wrong.length > 0)
    findings.note({
      code: 'soil-left-out',
      message: `The polygons of ${listed(wrong.map(({ foreignCode }) => shown(foreignCode)))} are left out, as the options say.`,
    });
  if (unnamed.length > 0)
    findings.warn({
      code: 'no-soil',
      message: `${counted(unnamed.length, 'polygon names', 'polygons name')} no soil class and ${unnamed.length === 1 ? 'is' : 'are'} left out: ${listed(unnamed)}.`,
      advice: 'Give them a class, or delete them.',
    });
}

function warnOverlaps(areas: readonly StagedSoilArea[], findings: FindingList): void {
  const shapes = areas.map(({ geometry }) => geometry);
  const sizes = shapes.map(geodesicArea);
  const overlaps = findOverlaps(shapes, sizes, { threshold: OVERLAP_LIMIT, limit: OVERLAPS_REPORTED });
  if (overlaps.length === 0) return;
  const pairs = overlaps.map(({ first, second }) => `${shown(areas[first].code)} and ${shown(areas[second].code)}`);
  findings.warn({
    code: 'soil-polygons-overlap',
    message: `${overlaps.length >= OVERLAPS_REPORTED ? 'At least ' : ''}${counted(overlaps.length, 'pair of soil polygons overlaps', 'pairs of soil polygons overlap')}: ${listed(pairs)}. Ground on both counts for both by area.`,
    limit: `${OVERLAP_LIMIT * 100} % of the smaller polygon`,
    advice: 'Correct the outlines.',
  });
}

function listed(texts: readonly string[]): string {
  return `${texts.slice(0, LISTED).join(', ')}${texts.length > LISTED ? ' …' : ''}`;
}
