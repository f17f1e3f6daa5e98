/**
 * The front door for files: bytes of a kind → what was understood, what was found, a preview, and rows ready to apply.
 */
import { readCanals } from './canals.ts';
import { type ContentKind, contentKind } from './content-kind.ts';
import { readDeliveries } from './deliveries-csv.ts';
import { headOf } from './file-head.ts';
import { FINDING_LIMIT, FindingList } from './finding-list.ts';
import { checkOptions } from './import-options.ts';
import { readMeasurements } from './measurements-csv.ts';
import { readParcels } from './parcels.ts';
import { readPlantings } from './plantings-csv.ts';
import {
  type BlockSink,
  type ImportContext,
  type ImportFile,
  type ImportKind,
  type ImportOptions,
  type ImportReading,
  NOTHING_UNDERSTOOD,
  type Progress,
  type StagedImport,
} from './reading.ts';
import { readSoils } from './soils-csv.ts';
import { readStations } from './stations-csv.ts';
import { readWeather } from './weather-csv.ts';
import { listZipMembers } from './zip.ts';

export type { ImportOptions } from './reading.ts';

type Reader = (
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
  sink?: BlockSink,
) => Promise<ImportReading>;

const READERS: Record<ImportKind, Reader> = {
  stations: readStations,
  weather: readWeatherOfAnyKind,
  parcels: readParcels,
  canals: readCanals,
  turnouts: async (files, options, context, progress) => (await import('./turnouts.ts')).readTurnouts(files, options, context, progress),
  areas: async (files, options, context, progress) =>
    (await import('./service-areas.ts')).readServiceAreas(files, options, context, progress),
  'soil-areas': async (files, options, context, progress) =>
    (await import('./soil-areas.ts')).readSoilAreas(files, options, context, progress),
  plantings: readPlantings,
  soils: readSoils,
  images: async (files, options, context, progress) => (await import('./images.ts')).readImages(files, options, context, progress),
  deliveries: readDeliveries,
  measurements: readMeasurements,
};

const EMPTY: Record<ImportKind, StagedImport> = {
  stations: { kind: 'stations', sites: [] },
  weather: { kind: 'weather', source: '', blocks: [], rows: 0, sites: 0 },
  parcels: { kind: 'parcels', parcels: [], turnouts: [], plantings: [], cropMappings: {} },
  canals: { kind: 'canals', reaches: [] },
  turnouts: { kind: 'turnouts', turnouts: [] },
  areas: { kind: 'areas', areas: [] },
  'soil-areas': { kind: 'soil-areas', soilAreas: [] },
  plantings: { kind: 'plantings', plantings: [] },
  soils: { kind: 'soils', soils: [] },
  images: { kind: 'images', images: [] },
  deliveries: { kind: 'deliveries', deliveries: [] },
  measurements: { kind: 'measurements', measurements: [] },
};

/**
 * Reads the files of one import. Never throws for what is in a file or in the options: every fault is a finding. A bad row is left out and
 * named; a fault of the file as a whole stages nothing.
 *
 * @param options as they came from outside; checked here
 * @param progress told the share done, 0–1; what it throws goes through (a cancel)
 * @param sink takes blocks of weather as they are read; without one they are all in what is staged
 */
export async function readImport(
  kind: ImportKind,
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress = () => undefined,
  sink?: BlockSink,
): Promise<ImportReading> {
  const findings = new FindingList();
  const checked = checkOptions(options, findings);
  if (files.length === 0) {
    findings.refuse({ code: 'no-file', message: 'The import has no file.', advice: 'Choose at least one file.' });
    return {
      understood: NOTHING_UNDERSTOOD,
      findings: findings.list(),
      findingCounts: findings.totals(),
      preview: { kind: 'table', header: [], rows: [] },
      staged: EMPTY[kind],
    };
  }
  const reading = await READERS[kind](files, checked, context, progress, sink);
  const counts = findings.totals();
  return {
    ...reading,
    findings: [...findings.list(), ...reading.findings].slice(0, FINDING_LIMIT),
    findingCounts: {
      error: reading.findingCounts.error + counts.error,
      warning: reading.findingCounts.warning + counts.warning,
      note: reading.findingCounts.note + counts.note,
    },
  };
}

const ARRAYS: readonly ContentKind[] = ['netcdf', 'hdf5', 'tiff'];

/** Weather as arrays (NetCDF, Zarr, GeoTIFF, or an archive of them) or as tables. */
async function readWeatherOfAnyKind(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
  sink?: BlockSink,
): Promise<ImportReading> {
  for (const file of files) {
    const kind = contentKind(headOf(file), file.name);
    if (ARRAYS.includes(kind) || (kind === 'zip' && (await holdsArrays(file)))) {
      const { readGridWeather } = await import('./grid-weather.ts');
      return readGridWeather(files, options, context, progress, sink);
    }
  }
  return readWeather(files, options, context, progress);
}

/** True for an archive with an array store or array files in it. A damaged one is left to the reader of tables, which says what is wrong. */
async function holdsArrays(file: ImportFile): Promise<boolean> {
  try {
    const members = await listZipMembers(file);
    return members.some(({ name }) => /(^|\/)(\.z(group|array|metadata)|zarr\.json)$|\.(nc4?|cdf|h5|hdf5?|tiff?)$/i.test(name));
  } catch {
    return false;
  }
}
