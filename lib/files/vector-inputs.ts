/**
 * The files of one import as vector files: the loose parts of a shapefile (.shp, .dbf, .prj, .cpg) belong together, every other file stands alone.
 */

import type { FindingList } from './finding-list.ts';
import { shown } from './finding-list.ts';
import type { ImportFile } from './reading.ts';

/** Parts of a shapefile by their ending, lower case. */
export type ShapefileParts = Readonly<Record<string, ImportFile>>;

export interface VectorInput {
  /** of the file that findings name */
  readonly name: string;
  readonly file: ImportFile;
  /** set for a loose shapefile */
  readonly parts?: ShapefileParts;
}

const PART = /\.(shp|dbf|prj|cpg|shx|sbn|sbx|qix|qpj|cst|idm|ind|ain|aih|atx|fix)$/i;
/** Documents that come along with a layer and hold no features. */
const COMPANION = /\.(shp\.xml|qmd|qml|sld|lyrx?|txt|md|pdf|html?)$/i;

/** Puts the loose parts of shapefiles together. A part whose .shp is missing is a refusal. */
export function vectorInputs(files: readonly ImportFile[], findings: FindingList): VectorInput[] {
  const sets = new Map<string, Record<string, ImportFile>>();
  const inputs: VectorInput[] = [];
  const several = files.some(({ name }) => /\.shp$/i.test(name));
  for (const file of files) {
    const part = PART.exec(file.name);
    if (part) {
      const stem = file.name.slice(0, part.index).toLowerCase();
      const set = sets.get(stem) ?? {};
      set[part[1].toLowerCase()] = file;
      sets.set(stem, set);
    } else if (!(several && COMPANION.test(file.name))) inputs.push({ name: file.name, file });
  }
  for (const parts of sets.values()) {
    if (parts.shp) inputs.push({ name: parts.shp.name, file: parts.shp, parts });
    else {
      const { name } = Object.values(parts)[0];
      findings.refuse({
        code: 'shapefile-incomplete',
        message: `"${shown(name)}" is a part of a shapefile whose .shp file is not among the files.`,
        file: name,
        advice: 'Send the .shp, .dbf and .prj files together, or one ZIP archive of them.',
      });
    }
  }
  return inputs;
}
