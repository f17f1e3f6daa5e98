/**
 * Weather stations, one row each, in a delimited file. A table that repeats its stations row by row (weather with coordinates) gives each once.
 */
import { counted } from '../base/counted.ts';
import { isTimeZone } from '../base/time-zone.ts';
import { STANDARD_WIND_HEIGHT } from '../energy/complete-weather.ts';
import { geodesicDistance } from '../geo/geodesic.ts';
import { codeFault } from './code-text.ts';
import type { FindingList } from './finding-list.ts';
import { type PlainRow, type PlainTable, readPlainTable } from './plain-table.ts';
import type { ImportContext, ImportFile, ImportOptions, ImportReading, Progress, StagedSite } from './reading.ts';
import type { TableRole } from './table-columns.ts';

/** Distance from the district beyond which a station is suspect [m]. */
const FAR = 500_000;
/** Coordinates of one station may differ this much between rows [degrees]. */
const SAME_PLACE = 0.02;

export const STATION_ROLES: readonly TableRole[] = [
  {
    role: 'code',
    names: [
      'site',
      'site code',
      'site id',
      'station',
      'station code',
      'station id',
      'station number',
      'wban',
      'stid',
      'stn',
      'code',
      'id',
      'location',
    ],
    required: true,
  },
  { role: 'name', names: ['name', 'site name', 'station name'] },
  { role: 'latitude', names: ['latitude', 'lat', 'y'], required: true },
  { role: 'longitude', names: ['longitude', 'lon', 'long', 'lng', 'x'], required: true },
  { role: 'elevation', names: ['elevation', 'elev', 'altitude', 'alt', 'height', 'z'], kind: 'length' },
  { role: 'wind_height', names: ['wind height', 'anemometer height', 'wind sensor height', 'windheight'], kind: 'length' },
  { role: 'zone', names: ['zone', 'time zone', 'timezone', 'tz'] },
];

interface Kept {
  readonly site: StagedSite;
  readonly row: number;
}

/** Reads a table of stations. */
export async function readStations(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const kept = new Map<string, Kept>();
  let repeated = 0;
  const assumed = { length: context.districtUnits === 'us' ? 'ft' : 'm' };
  const each = (row: PlainRow, table: PlainTable) => {
    const site = stationOf(row, options);
    if (!site) return;
    const earlier = kept.get(site.code);
    if (!earlier) kept.set(site.code, { site, row: row.row });
    else if (samePlace(earlier.site, site)) repeated++;
    else differs(row, site, earlier, table);
  };
  const finish = (findings: FindingList) => {
    const sites = [...kept.values()].map(({ site }) => site);
    noteStations(sites, repeated, context, findings);
    return { kind: 'stations' as const, sites: findings.fatal ? [] : sites };
  };
  const extra = () => ({ siteCount: kept.size, boundingBox: boxOf([...kept.values()].map(({ site }) => site)) });
  return readPlainTable({ files, options, progress, roles: STATION_ROLES, assumed }, each, finish, extra);
}

function stationOf(row: PlainRow, options: ImportOptions): StagedSite | null {
  const code = row.text('code');
  if (code === null)
    row.fail({ code: 'missing-code', message: 'The row has no station code.', role: 'code', advice: 'Give the station a code.' });
  const fault = code === null ? null : codeFault('Station', code);
  if (fault) row.fail({ ...fault, role: 'code' });
  const latitude = row.number('latitude', { low: -90, high: 90, unit: '°' });
  const longitude = row.number('longitude', { low: -180, high: 360, unit: '°' });
  const elevation = row.number('elevation', { low: -450, high: 9000, unit: 'm', missingCodes: true });
  const windHeight = row.number('wind_height', { low: 0.5, high: 200, unit: 'm', missingCodes: true });
  if (row.good && (latitude === null || longitude === null)) {
    row.fail({
      code: 'missing-coordinates',
      message: 'The station has no latitude or longitude.',
      role: latitude === null ? 'latitude' : 'longitude',
      advice: 'Give both in decimal degrees.',
    });
  }
  if (!row.good || code === null || latitude === null || longitude === null) return null;
  const east = longitude > 180 ? longitude - 360 : longitude;
  return {
    code,
    name: row.text('name') ?? code,
    longitude: east,
    latitude,
    elevation,
    windHeight: windHeight ?? options.windHeight ?? null,
    zone: row.text('zone'),
  };
}

function samePlace(a: StagedSite, b: StagedSite): boolean {
  const near = Math.abs(a.longitude - b.longitude) <= SAME_PLACE && Math.abs(a.latitude - b.latitude) <= SAME_PLACE;
  return near && a.elevation === b.elevation && a.windHeight === b.windHeight && a.name === b.name;
}

function differs(row: PlainRow, site: StagedSite, earlier: Kept, _table: PlainTable): void {
  row.fail({
    code: 'duplicate-code',
    message: `Station ${site.code} stands in row ${earlier.row} with other values; the first is kept.`,
    role: 'code',
    limit: 'one row per station',
    advice: 'Delete the wrong row.',
  });
}

function noteStations(sites: readonly StagedSite[], repeated: number, context: ImportContext, findings: FindingList): void {
  if (repeated > 0)
    findings.note({
      code: 'repeated-stations',
      message: `${counted(repeated, 'row repeats', 'rows repeat')} a station of an earlier row; each station is taken once.`,
    });
  const noElevation = sites.filter((site) => site.elevation === null);
  if (noElevation.length > 0) {
    findings.warn({
      code: 'no-elevation',
      message: `${counted(noElevation.length, 'station has', 'stations have')} no elevation (${codes(noElevation)}); the district's elevation will be assumed.`,
      advice: 'Add a column "elevation".',
    });
  }
  const noHeight = sites.filter((site) => site.windHeight === null);
  if (noHeight.length > 0) {
    findings.warn({
      code: 'no-wind-height',
      message: `${counted(noHeight.length, 'station has', 'stations have')} no wind height (${codes(noHeight)}); wind will be taken as measured at ${STANDARD_WIND_HEIGHT} m.`,
      advice:
        'Add a column "wind_height", or set one height in the options. Agricultural networks often measure at 2 or 3 m, weather services at 10 m.',
    });
  }
  const noZone = sites.filter((site) => site.zone !== null && !isTimeZone(site.zone));
  if (noZone.length > 0) {
    findings.warn({
      code: 'unknown-zone',
      message: `${counted(noZone.length, 'station names', 'stations name')} a zone that is not known (${codes(noZone)}, first "${noZone[0].zone}"); the district's zone will be taken.`,
      column: 'zone',
      limit: 'a name such as America/Boise, or an offset such as UTC-07:00',
      advice: 'Correct the zone: hourly weather is cut into days by it.',
    });
  }
  warnFar(sites, context, findings);
}

/** Stations far from the district; when the mirrored longitude is near, west was counted positive. */
function warnFar(sites: readonly StagedSite[], { districtBox }: ImportContext, findings: FindingList): void {
  if (!districtBox) return;
  const [west, south, east, north] = districtBox;
  const distance = (longitude: number, latitude: number) =>
    geodesicDistance(longitude, latitude, Math.min(Math.max(longitude, west), east), Math.min(Math.max(latitude, south), north));
  for (const site of sites) {
    const far = distance(site.longitude, site.latitude);
    if (far <= FAR) continue;
    const mirrored = distance(-site.longitude, site.latitude) <= FAR;
    const swapped = Math.abs(site.longitude) <= 90 && distance(site.latitude, site.longitude) <= FAR;
    findings.warn({
      code: 'station-far-away',
      message: `Station ${site.code} lies ${Math.round(far / 1000)} km from the district.`,
      column: 'longitude',
      value: `${site.longitude}, ${site.latitude}`,
      limit: `${FAR / 1000} km`,
      advice: mirrored
        ? 'West longitudes are negative: change the sign.'
        : swapped
          ? 'Latitude and longitude look exchanged.'
          : 'Check the coordinates.',
    });
  }
}

function codes(sites: readonly StagedSite[]): string {
  return `${sites
    .slice(0, 10)
    .map((site) => site.code)
    .join(', ')}${sites.length > 10 ? ' …' : ''}`;
}

function boxOf(sites: readonly StagedSite[]): [number, number, number, number] | null {
  if (sites.length === 0) return null;
  const longitudes = sites.map((site) => site.longitude);
  const latitudes = sites.map((site) => site.latitude);
  return [Math.min(...longitudes), Math.min(...latitudes), Math.max(...longitudes), Math.max(...latitudes)];
}
