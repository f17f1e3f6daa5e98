import type { Understood } from '../../lib/files/reading.ts';
import { FactList } from './data-table.tsx';
import { dateRange } from './date-words.ts';
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
    ['Stations', siteCount === null ? null : String(siteCount)],
    ['Format', formatText(understood)],
    ['Dates written', understood.dateOrder ? ORDERS[understood.dateOrder] : null],
    ['Coordinates', understood.crs],
    ['Extent', boundingBox ? `${boundingBox.map((degree) => degree.toFixed(3)).join(', ')} (west, south, east, north)` : null],
    ['Season', typeof options.season === 'string' ? options.season : null],
    ['Source', typeof options.source === 'string' ? options.source : null],
    ['Parcels not in the file', options.replace === true ? 'are removed' : null],
  ];
  return facts.filter((fact): fact is readonly [string, string] => Boolean(fact[1]));
}

function formatText({ format, delimiter, decimalComma, encoding }: Understood): string {
  if (format !== 'csv') return format === 'geojson' ? 'GeoJSON' : 'not recognised';
  const parts = [
    'CSV',
    delimiter ? `cells divided by ${DELIMITERS[delimiter] ?? delimiter}` : null,
    decimalComma ? 'decimal comma' : null,
    encoding,
  ];
  return parts.filter(Boolean).join(', ');
}
