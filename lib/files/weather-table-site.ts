/** Whose weather a table is: told by a column, chosen, placed by the file itself, or the only site there is. */
import { counted } from '../base/counted.ts';
import { shown } from './finding-list.ts';
import type { ImportContext, ImportFile } from './reading.ts';
import type { WeatherColumns } from './weather-columns.ts';
import type { WeatherReading } from './weather-csv.ts';
import { type FilePlace, placedStation } from './weather-file.ts';

/** A known site within this many degrees of the place in a file is the file's site. */
const SAME_PLACE = 0.02;

export type SiteChoice = { readonly kind: 'column' } | { readonly kind: 'fixed'; readonly index: number };

/** The context with the stations that files placed beside the known ones, in the order of the finder's codes. */
export function contextOf({ context, stations }: Pick<WeatherReading, 'context' | 'stations'>): ImportContext {
  return { ...context, knownSites: [...context.knownSites, ...stations] };
}

interface SiteRequest {
  readonly columns: WeatherColumns;
  readonly file: ImportFile;
  readonly headers: readonly string[];
  readonly place: FilePlace | null;
}

/** The site of a table's rows; null after a file-level finding. */
export function siteOfTable(request: SiteRequest, reading: WeatherReading): SiteChoice | null {
  const { columns, file } = request;
  const { options, context, findings, sites } = reading;
  if (columns.site >= 0) return { kind: 'column' };
  if (options.site) {
    const index = sites.seek(options.site);
    if (index >= 0) return { kind: 'fixed', index };
    findings.refuse({
      code: 'unknown-site',
      message: `The site "${shown(options.site)}" that the options name is not known.`,
      file: file.name,
      value: shown(options.site),
      advice: context.knownSites.length === 0 ? 'Import stations first.' : 'Name a site of the district.',
    });
    return null;
  }
  const told = siteOfPlace(request, reading);
  if (told >= 0) return { kind: 'fixed', index: told };
  if (context.knownSites.length === 1) {
    findings.note({
      code: 'site-assumed',
      message: `The file has no site column; its rows go to the only known site, ${context.knownSites[0].code}.`,
      file: file.name,
    });
    return { kind: 'fixed', index: 0 };
  }
  findings.refuse({
    code: 'missing-column',
    message: `The file has no site column, and ${counted(context.knownSites.length, 'site is', 'sites are')} known.`,
    file: file.name,
    column: 'site',
    advice: context.knownSites.length === 0 ? 'Import stations first.' : 'Add a site column, or name the site in the options.',
  });
  return null;
}

/** Site by the name or place that the file tells; a new station where it tells a place and nobody is there; −1 otherwise. */
function siteOfPlace({ place, file, headers }: SiteRequest, reading: WeatherReading): number {
  const { context, findings, sites, stations } = reading;
  if (!place) return -1;
  const name = place.name?.toLowerCase();
  const named = context.knownSites.findIndex(
    (site) => name !== undefined && (site.code.toLowerCase() === name || site.name.toLowerCase() === name),
  );
  const near = context.knownSites.findIndex(
    ({ longitude, latitude }) =>
      Math.abs((longitude ?? Number.NaN) - place.longitude) <= SAME_PLACE &&
      Math.abs((latitude ?? Number.NaN) - place.latitude) <= SAME_PLACE,
  );
  const known = named >= 0 ? named : near;
  if (known >= 0) {
    findings.note({
      code: 'site-of-file',
      message: `The file ${named >= 0 ? `names site ${shown(place.name ?? '')}` : `lies at ${place.latitude}, ${place.longitude}`}: its rows go to site ${context.knownSites[known].code}.`,
      file: file.name,
    });
    return known;
  }
  const station = placedStation(place, file, headers);
  if (!station) return -1;
  findings.note({
    code: 'station-of-file',
    message: `The file places its station at ${station.latitude}, ${station.longitude}${station.elevation === null ? '' : `, ${station.elevation} m`}: station ${shown(station.code)} is made when the import is applied.`,
    file: file.name,
    advice: 'To give its rows to a station that is known, name that site in the options.',
  });
  const added = sites.add(station.code);
  if (!stations.some(({ code }) => code === station.code)) stations.push(station);
  return added;
}
