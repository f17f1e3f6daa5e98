/**
 * Opens the array files of an import, those inside zip archives as well.
 */
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Refused } from '../base/errors.ts';
import type { ArrayFile } from './array-file.ts';
import { type FindingList, shown } from './finding-list.ts';
import { openArrayFile } from './open-array-file.ts';
import type { ImportFile } from './reading.ts';
import { extractMember, isZip, listZipMembers } from './zip.ts';

/** Members of an archive that may hold arrays. */
const ARRAY_MEMBER = /\.(nc|nc3|nc4|cdf|netcdf|h5|hdf5|tif|tiff)$/i;
/** Most array files of one import. */
export const GRID_FILE_LIMIT = 5000;

/** Opens one array file; null when it is of another kind. */
export type OpenArray = (file: ImportFile, findings?: FindingList) => Promise<ArrayFile | null>;

/** An opened file with the name the user knows it by. */
export interface GridFile {
  readonly name: string;
  /** name without folders and ending */
  readonly stem: string;
  readonly arrays: ArrayFile;
}

/** The opened files of an import. Close them. */
export interface GridFiles {
  readonly files: readonly GridFile[];
  close(): Promise<void>;
}

/**
 * Opens every file; what cannot be opened becomes a finding.
 *
 * @param open in place of the reader of all formats
 */
export async function openGridFiles(
  files: readonly ImportFile[],
  findings: FindingList,
  open: OpenArray = openArrayFile,
): Promise<GridFiles> {
  const opened: GridFile[] = [];
  const folders: string[] = [];
  const close = async () => {
    for (const { arrays } of opened) await arrays.close();
    for (const folder of folders) await rm(folder, { recursive: true, force: true });
  };
  try {
    for (const file of files) await openOne(file, file.name, { opened, folders, findings, open });
  } catch (error) {
    await close();
    throw error;
  }
  return { files: opened, close };
}

interface Opening {
  readonly opened: GridFile[];
  readonly folders: string[];
  readonly findings: FindingList;
  readonly open: OpenArray;
}

async function openOne(file: ImportFile, name: string, opening: Opening): Promise<void> {
  const { opened, findings, open } = opening;
  if (opened.length >= GRID_FILE_LIMIT) throw new Refused(`The import has more than ${GRID_FILE_LIMIT} array files; bring them in parts.`);
  try {
    const arrays = await open(file, findings);
    if (arrays) opened.push({ name, stem: stemOf(name), arrays });
    else if (isZip(file.bytes.subarray(0, 4)) && name === file.name) await openMembers(file, opening);
    else notArrays(name, findings);
  } catch (error) {
    if (!(error instanceof Refused)) throw error;
    const found =
      error.findings.length > 0
        ? error.findings
        : [{ severity: 'error' as const, code: 'unreadable-file', message: error.message, file: name }];
    for (const finding of found) findings.add({ file: name, ...finding });
  }
}

async function openMembers(file: ImportFile, opening: Opening): Promise<void> {
  const members = (await listZipMembers(file, opening.findings)).filter(
    (member) => ARRAY_MEMBER.test(member.name) && !/(^|\/)(__MACOSX|\.)/.test(member.name),
  );
  if (members.length === 0) return notArrays(file.name, opening.findings);
  const folder = await mkdtemp(join(tmpdir(), 'tillwater-grid-'));
  opening.folders.push(folder);
  for (const member of members.sort((a, b) => (a.name < b.name ? -1 : 1))) {
    await openOne(await extractMember(file, member.name, folder), `${file.name}/${member.name}`, opening);
  }
}

function notArrays(name: string, findings: FindingList): void {
  findings.error({
    code: 'not-an-array-file',
    message: `"${shown(name)}" holds no gridded weather that can be read.`,
    file: name,
    limit: 'NetCDF-3, NetCDF-4, Zarr, GeoTIFF, or a zip of them',
    advice: 'Bring the file in one of these formats.',
  });
}

/** @example stemOf('grids/tasmax_2020.nc') // 'tasmax_2020' */
export function stemOf(name: string): string {
  return (name.split('/').at(-1) ?? name).replace(/(\.(nc|nc3|nc4|cdf|netcdf|h5|hdf5|tif|tiff|zarr|zip))+$/i, '');
}
