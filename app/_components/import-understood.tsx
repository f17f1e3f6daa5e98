import type { FileFormat, Understood, UnderstoodGrid } from '../../lib/files/reading.ts';
import { FactList } from './data-table.tsx';
import { dateRange } from './date-words.ts';
import { plain } from './figures.ts';
import { Section } from './page-head.tsx';

const ORDERS = { ymd: 'year, month, day', dmy: 'day, month, year', mdy: 'month, day, year' } as const;
const DELIMITERS: Readonly<Record<string, string>> = { ',': 'comma', ';': 'semicolon', '\t': 'tab', '|': 'bar' };

/** What the reader made of the files, in facts. */
export function UnderstoodFacts({ understood, options }: { understood: Understood; options: Readonly<Record<string, unknown>> }) {
  return (
    <Section title="What was understood">
      <FactList facts={factsOf(understood, options)} />
    </Section>
  );
}

function factsOf(understood: Understood, options: Readonly<Record<string, unknown>>): (readonly [string, string])[] {
  const { rowCount, usableRows, dateRange: days, boundingBox, siteCount } = understood;
  const facts: (readonly [string, string | null | undefined])[] = [
    ['Rows', `${usableRows} of ${rowCount} usable`],
    ['Days', days ? dateRange(days.start, days.end) : null],
    [understood.grid ? 'Grid' : 'Stations', understood.grid ? gridText(understood.grid) : siteCount === null ? null : String(siteCount)],
    ['Format', formatText(understood)],
    ['Dates written', understood.dateOrder ? ORDERS[understood.dateOrder] : null],
    ['Layer', understood.layers && understood.layers.length > 1 ? (understood.layer ?? null) : null],
    ['Coordinates', understood.crs],
    ['Brought to WGS 84', understood.transformation],
    ['Time stamps', stampText(understood)],
    ['Extent', boundingBox ? `${boundingBox.map((degree) => degree.toFixed(3)).join(', ')} (west, south, east, north)` : null],
    ['Season', typeof options.season === 'string' ? options.season : null],
    ['Source', typeof options.source === 'string' ? options.source : null],
    ['Parcels not in the file', options.replace === true ? 'are removed' : null],
  ];
  return facts.filter((fact): fact is readonly [string, string] => Boolean(fact[1]));
}

const FORMATS: Readonly<Record<FileFormat, string>> = {
  csv: 'CSV',
  geojson: 'GeoJSON',
  shapefile: 'Shapefile',
  geopackage: 'GeoPackage',
  flatgeobuf: 'FlatGeobuf',
  geoparquet: 'GeoParquet',
  kml: 'KML',
  'netcdf-3': 'NetCDF-3',
  'netcdf-4': 'NetCDF-4',
  zarr: 'Zarr',
  geotiff: 'GeoTIFF',
  zip: 'ZIP archive',
  unknown: 'not recognised',
};

/** @example '1,250 cells of 585 × 1,386, one field each 60 min, 365_day calendar' */
function gridText({ shape, cells, stepMinutes, calendar }: UnderstoodGrid): string {
  const step =
    stepMinutes === null
      ? 'single fields'
      : `one field each ${stepMinutes % 1440 === 0 ? `${stepMinutes / 1440} d` : `${stepMinutes} min`}`;
  return [
    `${plain(cells, 0)} cells of ${plain(shape.rows, 0)} × ${plain(shape.columns, 0)}`,
    step,
    calendar ? `${calendar} calendar` : null,
  ]
    .filter(Boolean)
    .join(', ');
}

const STAMPS = { start: 'the start', centre: 'the middle', end: 'the end' } as const;

function stampText({ stamp, stampZone, stepMinutes }: Understood): string | null {
  if (!stamp) return null;
  return [`name ${STAMPS[stamp]} of ${stepMinutes ? `each ${stepMinutes} min` : 'the interval'}`, stampZone ? `in ${stampZone}` : null]
    .filter(Boolean)
    .join(', ');
}

function formatText({ format, delimiter, decimalComma, encoding }: Understood): string {
  if (format !== 'csv') return [FORMATS[format], encoding].filter(Boolean).join(', ');
  const parts = [
    'CSV',
    delimiter ? `cells divided by ${DELIMITERS[delimiter] ?? delimiter}` : null,
    decimalComma ? 'decimal comma' : null,
    encoding,
  ];
  return parts.filter(Boolean).join(', ');
}
