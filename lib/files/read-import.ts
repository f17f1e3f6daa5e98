/**
 * The front door for files: bytes of a kind → what was understood, what was found, a preview, and rows ready to apply.
 */
import { readCanals } from './canals-geojson.ts';
import { FINDING_LIMIT, FindingList } from './finding-list.ts';
import { checkOptions } from './import-options.ts';
import { readParcels } from './parcels-geojson.ts';
import { readPlantings } from './plantings-csv.ts';
import {
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

export type { ImportOptions } from './reading.ts';

type Reader = (files: readonly ImportFile[], options: ImportOptions, context: ImportContext, progress: Progress) => Promise<ImportReading>;

const READERS: Record<ImportKind, Reader> = {
  stations: readStations,
  weather: readWeather,
  parcels: readParcels,
  canals: readCanals,
  plantings: readPlantings,
  soils: readSoils,
};

const EMPTY: Record<ImportKind, StagedImport> = {
  stations: { kind: 'stations', sites: [] },
  weather: { kind: 'weather', source: '', blocks: [], rows: 0, sites: 0 },
  parcels: { kind: 'parcels', parcels: [], turnouts: [], plantings: [], cropMappings: {} },
  canals: { kind: 'canals', reaches: [] },
  plantings: { kind: 'plantings', plantings: [] },
  soils: { kind: 'soils', soils: [] },
};

/**
 * Reads the files of one import. Never throws for what is in a file or in the options: every fault is a finding. A bad row is left out and
 * named; a fault of the file as a whole stages nothing.
 *
 * @param options as they came from outside; checked here
 * @param progress told the share done, 0–1; what it throws goes through (a cancel)
 */
export async function readImport(
  kind: ImportKind,
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress = () => undefined,
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
  const reading = await READERS[kind](files, checked, context, progress);
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
