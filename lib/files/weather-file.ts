/**
 * What a weather file says outside its table: lines above the header, a legend below the rows, the place and name of the station; and
 * layouts whose columns are fixed and not named.
 */

import { type FindingList, shown } from './finding-list.ts';
import type { ImportFile, StagedSite } from './reading.ts';
import { decodeText, detectEncoding } from './text-encoding.ts';
import { windHeightOf } from './weather-column.ts';
import { isZip, openZip } from './zip.ts';

const TAIL_BYTES = 8192;
const TABLE_NAME = /\.(csv|txt|dat|tsv|tab)$/i;

/** Where a file says its station is. Degrees east and north, m; NaN where it does not say. */
export interface FilePlace {
  readonly name: string | null;
  readonly longitude: number;
  readonly latitude: number;
  readonly elevation: number;
  /** height of the anemometer [m], where the layout fixes it */
  readonly windHeight: number;
}

/** One table to read, and what its file says beside it. */
export interface WeatherTable {
  readonly file: ImportFile;
  readonly place: FilePlace | null;
  /** minutes east of UTC, where the layout fixes the clock */
  readonly offset: number | null;
}

/** Most tables of one archive: as many as an import takes files. */
const MOST_TABLES = 400;

/** The tables of a file: itself, a fixed layout written out as a table, or the tables within an archive. */
export async function weatherTables(file: ImportFile, findings: FindingList): Promise<WeatherTable[]> {
  if (!isZip(file.bytes.subarray(0, 8))) return [fixedLayout(file, findings) ?? { file, place: null, offset: null }];
  const archive = await openZip(file, findings);
  try {
    const tables = archive.members.filter(({ name }) => TABLE_NAME.test(name) && !/(^|\/)(\.|__MACOSX)/.test(name));
    if (tables.length > MOST_TABLES) {
      findings.refuse({
        code: 'too-many-tables',
        message: `The archive holds ${tables.length} tables; an import takes at most ${MOST_TABLES}.`,
        file: file.name,
        limit: `${MOST_TABLES} tables`,
        advice: 'Put the rows of many small files into few, or split the archive.',
      });
      return [];
    }
    noteOthers(
      file,
      archive.members.filter((member) => !tables.includes(member)).map(({ name }) => name),
      findings,
    );
    if (tables.length === 0) {
      findings.refuse({
        code: 'no-table',
        message: `The archive holds no table (${
          archive.members
            .slice(0, 5)
            .map(({ name }) => shown(name))
            .join(', ') || 'it is empty'
        }).`,
        file: file.name,
        limit: 'a member named .csv, .txt, .dat, .tsv or .tab',
        advice: 'Send the table itself, or an archive that holds it.',
      });
    }
    const read: WeatherTable[] = [];
    for (const { name } of tables) {
      const member = { name: name.slice(name.lastIndexOf('/') + 1), bytes: await archive.read(name) };
      read.push(fixedLayout(member, findings) ?? { file: member, place: null, offset: null });
    }
    return read;
  } finally {
    archive.close();
  }
}

function noteOthers(file: ImportFile, names: readonly string[], findings: FindingList): void {
  if (names.length === 0) return;
  findings.note({
    code: 'archive-member-ignored',
    message: `Members of the archive that are no tables are not read: ${names.slice(0, 5).map(shown).join(', ')}${names.length > 5 ? ' …' : ''}.`,
    file: file.name,
  });
}

/** Columns of the daily files of the surface radiation network, each measurement followed by its flag. Source: the network's file description. */
const RADIATION_NETWORK = [
  ...['year', 'day of year', 'month', 'day', 'hour', 'minute', 'decimal_time', 'zenith_angle'],
  ...[
    'solar radiation (W/m2)',
    'upwelling_solar',
    'direct_normal',
    'diffuse',
    'infrared_down',
    'case_down',
    'dome_down',
    'infrared_up',
  ].flatMap(withFlag),
  ...['case_up', 'dome_up', 'ultraviolet_b', 'photosynthetic', 'net_solar_only', 'net_infrared_only', 'net radiation (W/m2)'].flatMap(
    withFlag,
  ),
  ...['air temperature (degC)', 'relative humidity (%)', 'wind speed (m/s)', 'direction_of_wind', 'pressure (hPa)'].flatMap(withFlag),
];
const RADIATION_NETWORK_PLACE = /^\s*(-?\d+\.\d+)\s+(-?\d+\.\d+)\s+(-?\d+)\s*m\s+version/;
/** Height of that network's anemometers [m]. Source: the network's station description (recalled). */
const RADIATION_NETWORK_WIND_HEIGHT = 10;

function withFlag(name: string): string[] {
  return [name, `${name.replace(/\s*\(.*\)/, '')}_qc`];
}

/**
 * A file of the surface radiation network (two lines with name, latitude, longitude west and elevation, then columns divided by blanks) as a
 * table with named columns and the same line numbers; null for any other file.
 */
function fixedLayout(file: ImportFile, findings: FindingList): WeatherTable | null {
  const head = decodeText(file.bytes.subarray(0, 1024), { name: 'windows-1252', skip: 0 }).split(/\r?\n/);
  const place = RADIATION_NETWORK_PLACE.exec(head[1] ?? '');
  if (!place || (head[2] ?? '').trim().split(/\s+/).length !== RADIATION_NETWORK.length) return null;
  const lines = decodeText(file.bytes, detectEncoding(file.bytes)).split(/\r?\n/);
  const rows = lines.slice(2).map((line) => line.trim().replace(/\s+/g, ','));
  const text = ['', RADIATION_NETWORK.join(','), ...rows].join('\n');
  const name = lines[0].trim();
  const longitude = -Number(place[2]);
  findings.note({
    code: 'fixed-layout',
    message: `The file has the fixed columns of the surface radiation network; its longitude ${place[2]} counts west and is read as ${longitude}. Stamps are UTC.`,
    file: file.name,
    row: 2,
  });
  return {
    file: { name: file.name, bytes: new TextEncoder().encode(text) },
    place: { name, longitude, latitude: Number(place[1]), elevation: Number(place[3]), windHeight: RADIATION_NETWORK_WIND_HEIGHT },
    offset: 0,
  };
}

const KEY_VALUE = /^[\s#]*([A-Za-z][^:=]*?)\s*(?:\(([^)]*)\))?\s*[:=]\s*(.*?)[\s,;]*$/;

/** Place and name told by lines above a header, such as `Latitude (decimal degrees): 45.000`; null when they tell neither. */
export function placeOfPreamble(lines: readonly string[]): FilePlace | null {
  const told = new Map<string, string>();
  for (const line of lines) {
    const match = KEY_VALUE.exec(line);
    if (match) told.set(match[1].toLowerCase().replace(/[\s_]+/g, ' '), match[3]);
  }
  const number = (...keys: string[]) => Number.parseFloat(keys.map((key) => told.get(key)).find((text) => text !== undefined) ?? '');
  const name = ['site', 'site id', 'site code', 'station', 'station id', 'station code', 'station name', 'site name']
    .map((key) => told.get(key))
    .find((text) => text !== undefined && text !== '');
  const place = {
    name: name ?? null,
    longitude: number('longitude', 'lon', 'long'),
    latitude: number('latitude', 'lat'),
    elevation: number('elevation', 'altitude', 'height', 'alt'),
    windHeight: Number.NaN,
  };
  return name === undefined && Number.isNaN(place.latitude) ? null : place;
}

/** A legend above or below a table: header → what it says the column is. Lines look like `T2m: 2-m air temperature (degree Celsius)`. */
export function legendOf(file: ImportFile, preamble: readonly string[]): Map<string, string> {
  const tail = file.bytes.subarray(Math.max(0, file.bytes.length - TAIL_BYTES));
  const lines = decodeText(tail, { ...detectEncoding(file.bytes.subarray(0, TAIL_BYTES)), skip: 0 }).split(/\r\n|\n|\r/);
  const legend = new Map<string, string>();
  for (const line of [...preamble, ...lines]) {
    const match = /^\s*([A-Za-z][\w()]{0,30}):\s+(.+?)\s*$/.exec(line);
    if (match) legend.set(match[1], match[2].replace(/\((.+) = .+\)\s*\(/, '('));
  }
  return legend;
}

/** The station that a file places itself, by its name or that of the file. */
export function placedStation(place: FilePlace, file: ImportFile, headers: readonly string[]): StagedSite | null {
  if (Number.isNaN(place.latitude) || Number.isNaN(place.longitude)) return null;
  const named = place.name ?? file.name.replace(/\.[^.]*$/, '');
  const height = headers.map(windHeightOf).find((each) => each !== null) ?? place.windHeight;
  return {
    code: named.slice(0, 60),
    name: named,
    longitude: place.longitude,
    latitude: place.latitude,
    elevation: Number.isNaN(place.elevation) ? null : place.elevation,
    windHeight: Number.isNaN(height) ? null : height,
    zone: null,
  };
}
