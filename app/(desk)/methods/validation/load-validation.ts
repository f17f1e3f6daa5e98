import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { ValidationFile } from '../../../../lib/report/validation.ts';

export interface ValidationTable extends ValidationFile {
  readonly name: string;
}

/** Every check that the tests keep, a table for each of their files. A folder that is not on the disk gives none. */
export async function loadValidation(): Promise<ValidationTable[]> {
  const folder = join(/* turbopackIgnore: true */ process.cwd(), 'lib', 'report', 'validation');
  const files = (await readdir(folder).catch(() => [])).filter((file) => file.endsWith('.json')).sort();
  return Promise.all(files.map((file) => readTable(folder, file)));
}

async function readTable(folder: string, file: string): Promise<ValidationTable> {
  const text = await readFile(join(/* turbopackIgnore: true */ folder, file), 'utf8');
  return { ...(JSON.parse(text) as ValidationFile), name: file.replace(/\.json$/, '') };
}
