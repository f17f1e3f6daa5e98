import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { type DocumentedExport, documentedExports } from '../../_components/code-docs.ts';

/** Rooms of the code that hold equations, in the order of the water chain. */
export const ROOMS = [
  { room: 'base', name: 'Constants and units' },
  { room: 'geo', name: 'Areas and distances' },
  { room: 'weather', name: 'Weather: gaps and interpolation' },
  { room: 'energy', name: 'Radiation, humidity, wind, reference ET' },
  { room: 'crop', name: 'Crop coefficients and soil water' },
  { room: 'season', name: 'A parcel through its season' },
  { room: 'canal', name: 'Canals' },
  { room: 'report', name: 'Maps and reports' },
] as const;

export interface RoomDocs {
  readonly room: string;
  readonly name: string;
  readonly exports: readonly DocumentedExport[];
}

/** Every equation and constant with a source, read from the code that this service runs. A room that is not on the disk is left out. */
export async function readCodeDocs(): Promise<RoomDocs[]> {
  const rooms = await Promise.all(ROOMS.map(async ({ room, name }) => ({ room, name, exports: await readRoom(room) })));
  return rooms.filter((room) => room.exports.length > 0);
}

async function readRoom(room: string): Promise<DocumentedExport[]> {
  const folder = join(/* turbopackIgnore: true */ process.cwd(), 'lib', room);
  const files = (await readdir(folder).catch(() => [])).filter((file) => file.endsWith('.ts')).sort();
  const texts = await Promise.all(files.map((file) => readFile(join(/* turbopackIgnore: true */ folder, file), 'utf8')));
  return texts.flatMap(documentedExports);
}
