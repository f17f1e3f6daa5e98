/**
 * A ZIP archive with a vector file in it: a shapefile in parts, KMZ, or one file of another format.
 */

import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import { type FindingList, shown } from './finding-list.ts';
import type { ImportFile, ImportOptions, UnderstoodLayer } from './reading.ts';
import { openShapefile } from './shapefile.ts';
import { chooseLayer, type LayerWish, refusal, type VectorSource } from './vector-source.ts';
import { isZip, openZip, type ZipArchive, type ZipMember } from './zip.ts';

type ArchiveOptions = LayerWish & Pick<ImportOptions, 'crs' | 'plan'>;
type OpenMember = (file: ImportFile, options: ArchiveOptions, findings: FindingList) => Promise<VectorSource>;

/** Files that a vector reader opens, by their ending. */
const VECTOR_ENDING = /\.(gpkg|geojson|json|fgb|parquet|geoparquet|kml)$/i;
/** What other programs leave in archives. */
const NOISE = /(^|\/)(__MACOSX\/|\.DS_Store$|Thumbs\.db$)/i;

/**
 * Opens the layer asked for in an archive, or the first that has features. @throws {Refused} when the archive is damaged or holds none
 * @param open opens a member that is no shapefile
 */
export async function openVectorArchive(
  file: ImportFile,
  options: ArchiveOptions,
  findings: FindingList,
  open: OpenMember,
): Promise<VectorSource> {
  const archive = await openZip(file, findings);
  try {
    const members = archive.members.filter(({ name }) => !NOISE.test(name));
    if (members.length > MOST_MEMBERS && !members.some(({ name }) => /\.gdb\//i.test(name))) throw crowded(file, members.length);
    if (members.some(({ name }) => /\.gdb\/[^/]+\.gdbtable$/i.test(name))) throw fileGeodatabase(file);
    const shapefiles = members.filter(({ name }) => /\.shp$/i.test(name));
    if (shapefiles.length > 0) return await openShapefiles(file, { archive, members, shapefiles }, options, findings);
    const files = members.filter(({ name }) => VECTOR_ENDING.test(name));
    if (files.length > 0) return await openMember(file, { archive, files }, options, findings, open);
    const nested = members.find(({ name }) => /\.(zip|kmz)$/i.test(name));
    if (nested) throw archiveInArchive(file, nested);
    throw refusal(file.name, {
      code: 'archive-without-layer',
      message: `The archive holds no file of features: ${listed(members)}.`,
      limit: 'a shapefile (.shp, .dbf, .prj), GeoPackage, GeoJSON, FlatGeobuf, GeoParquet, KML',
      advice: 'Pack the layer into the archive, or send it by itself.',
    });
  } finally {
    archive.close();
  }
}

/** Most members of an archive of layers: a shapefile has up to a dozen. */
const MOST_MEMBERS = 2000;

function crowded(file: ImportFile, count: number) {
  return refusal(file.name, {
    code: 'archive-crowded',
    message: `The archive has ${count} members; layers are looked for among at most ${MOST_MEMBERS}.`,
    limit: `${MOST_MEMBERS} members`,
    advice: 'Pack only the layer into the archive, or send it by itself.',
  });
}

function fileGeodatabase(file: ImportFile) {
  return refusal(file.name, {
    code: 'file-geodatabase',
    message: 'The archive is a file geodatabase (.gdb), which is not read.',
    limit: 'GeoPackage, zipped Shapefile, GeoJSON, FlatGeobuf, GeoParquet, KML',
    advice: 'Export the layer as GeoPackage (it keeps names and types), and import that.',
  });
}

function archiveInArchive(file: ImportFile, { name }: ZipMember) {
  return refusal(file.name, {
    code: 'archive-in-archive',
    message: `The archive holds another archive, "${name.slice(0, 60)}", which is not opened.`,
    advice: 'Send the inner archive by itself.',
  });
}

function listed(members: readonly ZipMember[]): string {
  if (members.length === 0) return 'it is empty';
  const names = members.slice(0, 5).map(({ name }) => name.slice(0, 60));
  return `it has ${names.join(', ')}${members.length > 5 ? ` and ${members.length - 5} more` : ''}`;
}

interface Shapefiles {
  readonly archive: ZipArchive;
  readonly members: readonly ZipMember[];
  readonly shapefiles: readonly ZipMember[];
}

/** Several shapefiles in one archive are its layers. */
async function openShapefiles(file: ImportFile, given: Shapefiles, options: ArchiveOptions, findings: FindingList): Promise<VectorSource> {
  const { archive, members, shapefiles } = given;
  const layers: (UnderstoodLayer & { member: ZipMember })[] = [];
  for (const member of shapefiles) {
    const stem = member.name.slice(0, -4).toLowerCase();
    const index = members.find(({ name }) => name.toLowerCase() === `${stem}.shx`);
    const count = index ? Math.max(0, (index.size - 100) / 8) : null;
    layers.push({ name: basename(member.name).slice(0, -4), featureCount: count, geometry: null, member });
  }
  const chosen = chooseLayer(file.name, layers, options);
  const stem = chosen.member.name.slice(0, -4).toLowerCase();
  const parts: Record<string, ImportFile> = {};
  for (const ending of ['shp', 'dbf', 'prj', 'cpg']) {
    const member = members.find(({ name }) => name.toLowerCase() === `${stem}.${ending}`);
    if (member) parts[ending] = { name: basename(member.name), bytes: await archive.read(member.name) };
  }
  const source = await openShapefile(parts, options, findings);
  if (layers.length === 1) return source;
  const names = layers.map(({ name, featureCount }) => ({
    name,
    featureCount,
    geometry: name === source.layer ? source.layers[0].geometry : null,
  }));
  tellLayer(file, names, source.layer, options, findings);
  return { ...source, layers: names };
}

interface Members {
  readonly archive: ZipArchive;
  readonly files: readonly ZipMember[];
}

/** A single file in an archive; of several, the one named in the options, or the first. KMZ: doc.kml, or the first .kml at its top. */
async function openMember(
  file: ImportFile,
  { archive, files }: Members,
  options: ArchiveOptions,
  findings: FindingList,
  open: OpenMember,
): Promise<VectorSource> {
  const named = files.find(({ name }) => name === options.layer || basename(name) === options.layer);
  const chosen = named ?? files.find(({ name }) => /^doc\.kml$/i.test(name)) ?? files[0];
  if (files.length > 1 && !named)
    findings.warn({
      code: 'archive-several-files',
      message: `The archive holds ${files.length} files of features; "${basename(chosen.name)}" is read.`,
      file: file.name,
      limit: files
        .slice(0, 20)
        .map(({ name }) => basename(name))
        .join(', '),
      advice: 'Name another in the options, or send them one by one.',
    });
  const rest = named ? { ...options, layer: undefined } : options;
  if (!/\.gpkg$/i.test(chosen.name)) {
    const inner = { name: basename(chosen.name), bytes: await archive.read(chosen.name) };
    if (isZip(inner.bytes)) throw archiveInArchive(file, chosen);
    return open(inner, rest, findings);
  }
  const folder = await mkdtemp(join(tmpdir(), 'layer-'));
  const remove = () => void rm(folder, { recursive: true, force: true });
  try {
    const source = await open(await archive.extract(chosen.name, folder), rest, findings);
    return {
      ...source,
      close: () => {
        source.close?.();
        remove();
      },
    };
  } catch (error) {
    remove();
    throw error;
  }
}

/** Says which layer of several is read when none was chosen. */
export function tellLayer(
  file: ImportFile,
  layers: readonly UnderstoodLayer[],
  layer: string,
  options: LayerWish,
  findings: FindingList,
): void {
  if (options.layer !== undefined || layers.length < 2) return;
  const others = layers.filter(({ name }) => name !== layer).map(({ name, featureCount }) => `${shown(name)} (${featureCount ?? '?'})`);
  findings.warn({
    code: 'layer-chosen',
    message: `The file holds ${layers.length} layers; "${shown(layer)}" is read. The others: ${others.slice(0, 20).join(', ')}.`,
    file: file.name,
    advice: 'Choose another layer in the options if that is not the one.',
  });
}
