/** Opens a file of arrays by what it holds, whatever its name: NetCDF-3, NetCDF-4 (HDF5), GeoTIFF, or a Zarr store in a zip or a folder. */
import { stat } from 'node:fs/promises';
import { join } from 'node:path';
import type { ArrayFile } from './array-file.ts';
import { unreadable } from './array-slab.ts';
import { headOf } from './byte-source.ts';
import type { FindingList } from './finding-list.ts';
import { isTiff, openGeotiff } from './geotiff-file.ts';
import { isClassicNetcdf, openClassicNetcdf } from './netcdf3-file.ts';
import { findHdf5, openNetcdf4 } from './netcdf4-file.ts';
import type { ImportFile } from './reading.ts';
import { openZarr } from './zarr-file.ts';
import { folderPieces, isZarrMetadata, zipPieces } from './zarr-store.ts';
import { isZip, openZip } from './zip.ts';

const HEAD = 16;

/**
 * Opens a file of arrays.
 *
 * @param findings what was noticed on the way; the file's own refusal is thrown, not added
 * @returns null when the content is of another kind, a zip without a Zarr store included
 * @throws {Refused} when the kind is known and the file is damaged or beyond a limit; its `findings` say where and what to do
 */
export async function openArrayFile(file: ImportFile, findings?: FindingList): Promise<ArrayFile | null> {
  if (file.path !== undefined && (await stat(file.path)).isDirectory()) return openFolder(file, file.path, findings);
  const head = await headOf(file, HEAD);
  if (isClassicNetcdf(head)) return openClassicNetcdf(file);
  if (isTiff(head)) return openGeotiff(file, findings);
  if (isZip(head)) return openZippedZarr(file, findings);
  const hdf5 = await findHdf5(file);
  if (hdf5) return openNetcdf4(file, findings);
  if (claimsNetcdf(file.name)) {
    const advice = 'Copy or download the file again; a NetCDF file begins with "CDF" or with the HDF5 signature.';
    throw unreadable(file.name, 'is named as NetCDF and is none', advice);
  }
  return null;
}

async function openFolder(file: ImportFile, folder: string, findings?: FindingList): Promise<ArrayFile | null> {
  const looks = await Promise.all(
    ['.zgroup', '.zarray', '.zmetadata', 'zarr.json'].map((name) => stat(join(folder, name)).catch(() => null)),
  );
  return looks.some((entry) => entry?.isFile()) ? openZarr(file.name, await folderPieces(folder), findings) : null;
}

async function openZippedZarr(file: ImportFile, findings?: FindingList): Promise<ArrayFile | null> {
  const archive = await openZip(file, findings);
  if (archive.members.some(({ name }) => isZarrMetadata(name))) return openZarr(file.name, zipPieces(archive), findings);
  archive.close();
  return null;
}

function claimsNetcdf(name: string): boolean {
  return /\.(nc|nc3|nc4|cdf|netcdf)$/i.test(name);
}
