/**
 * What a reader of weather tells once per file rather than once per row.
 */

import { type DayNumber, isoDate } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { siteFinder } from './site-finder.ts';
import { windHeightOf } from './weather-column.ts';
import type { ValueColumn, WeatherColumns } from './weather-columns.ts';
import { hourPairs, type RowCounts } from './weather-row.ts';
import type { WeatherStore } from './weather-store.ts';

const LISTED = 20;
/** A step between two days of a site longer than this is reported as a jump [d]. */
const JUMP_DAYS = 366;

/** One note per column and code: how many cells meant missing. */
export function noteMissing(counts: RowCounts, columns: readonly ValueColumn[], file: string, findings: FindingList): void {
  for (const { index, header } of columns) {
    for (const [text, cells] of counts.missing.get(index) ?? []) {
      const what = text === '' ? 'Empty cells' : `"${shown(text)}"`;
      findings.note({
        code: 'missing-value',
        message: `${what} treated as missing in column "${shown(header)}", ${counted(cells, 'cell', 'cells')}.`,
        file,
        column: header,
        value: shown(text),
      });
    }
  }
  if (counts.traceRain > 0)
    findings.note({
      code: 'trace-rain',
      message: `${counted(counts.traceRain, 'cell with a trace of rain is', 'cells with a trace of rain are')} read as 0 mm.`,
      file,
    });
}

/** Quality flags, codes of origin and night radiation: one note each. */
export function noteRowCounts(counts: RowCounts, columns: readonly ValueColumn[], file: string, findings: FindingList): void {
  const header = (index: number) => columns.find((column) => column.index === index)?.header ?? '';
  for (const [index, cells] of counts.flagged) {
    findings.note({
      code: 'flagged-value',
      message: `${counted(cells, 'value', 'values')} of column "${shown(header(index))}" left out: the quality flag beside it is not 0.`,
      file,
      column: header(index),
    });
  }
  if (counts.negativeRadiation > 0) {
    findings.note({
      code: 'negative-radiation',
      message: `${counted(counts.negativeRadiation, 'small negative reading', 'small negative readings')} of solar radiation taken as 0: a pyranometer loses heat to the night sky.`,
      file,
    });
  }
  const origins = [...counts.origins].map(
    ([index, codes]) => `${shown(header(index))} ${[...codes].map(([code, cells]) => `${shown(code) || '(empty)'} (${cells})`).join(', ')}`,
  );
  if (origins.length === 0) return;
  findings.note({
    code: 'origin-codes',
    message: `The file says by codes where its values come from; all are taken, measured or not. Codes with their rows: ${origins.join('; ')}.`,
    file,
    advice: 'Look up the codes of the source: a value that was interpolated or computed is no measurement.',
  });
}

/** Sites that are not known: one error with the codes and the rows left out. */
export function noteUnknownSites(sites: ReturnType<typeof siteFinder>, knownCount: number, findings: FindingList): void {
  for (const [code, text] of sites.joined) {
    findings.warn({
      code: 'site-joined',
      message: `Site "${shown(text)}" of the file is taken for site ${code}: same name or same number.`,
      value: shown(text),
      advice: 'Write the code as it is stored.',
    });
  }
  if (sites.unknown.size === 0) return;
  const entries = [...sites.unknown];
  const rows = entries.reduce((sum, [, entry]) => sum + entry.rows, 0);
  const list = entries.slice(0, LISTED).map(([code, entry]) => `${shown(code) || '(empty)'} (${entry.rows})`);
  findings.error({
    code: 'unknown-site',
    message: `${counted(rows, 'row names', 'rows name')} ${counted(entries.length, 'unknown site', 'unknown sites')} and ${rows === 1 ? 'is' : 'are'} left out: ${list.join(', ')}${entries.length > LISTED ? ' …' : ''}.`,
    file: entries[0][1].file,
    row: entries[0][1].firstRow,
    value: shown(entries[0][0]),
    advice: knownCount === 0 ? 'Import stations first.' : 'Import these stations first, or correct the codes.',
  });
}

/** Combined columns, and wind heights named by headers. */
export function noteColumns({ values }: WeatherColumns, file: string, findings: FindingList): void {
  const has = (role: string) => values.some((column) => column.role === role);
  const hours = (columns: readonly ValueColumn[]) => columns.map((column) => `${column.hour}:00`).join(' and ');
  const pairs = hourPairs(values);
  const winds = values.filter((column) => column.role === 'wind_speed_at_hour_m_s');
  if (pairs.length > 0 && !has('vapour_pressure_kpa')) {
    findings.note({
      code: 'vapour-pressure-from-hours',
      message: `Vapour pressure is the mean of temperature and humidity read at ${hours(pairs.map(([t]) => t))} (FAO-56 Eq. 54).`,
      file,
    });
  }
  if (winds.length > 0 && !has('wind_speed_m_s')) {
    findings.note({
      code: 'wind-from-hours',
      message: `Daily wind is the mean of the readings at ${hours(winds)}; a day that lacks one of them has no wind.`,
      file,
    });
  }
  if (has('vapour_pressure_deficit_kpa') && !has('vapour_pressure_kpa') && pairs.length === 0) {
    findings.note({
      code: 'vapour-pressure-from-deficit',
      message: 'Vapour pressure is the saturation at the temperatures of the day less the deficit.',
      file,
    });
  }
  for (const column of values.filter(({ role }) => role === 'wind_speed_m_s')) {
    const height = windHeightOf(column.header);
    if (height === null) continue;
    findings.note({
      code: 'wind-height-in-header',
      message: `Column "${shown(column.header)}" names a wind height of ${height} m; the height stored with each station is used.`,
      file,
      column: column.header,
      advice: `Set the wind height of the stations to ${height} m.`,
    });
  }
}

/** Missing days per site, and jumps longer than a year. */
export function noteDays(store: WeatherStore, codes: readonly string[], findings: FindingList): void {
  const gaps: string[] = [];
  let missing = 0;
  for (const [site, code] of codes.entries()) {
    const extent = store.extent(site);
    if (!extent) continue;
    const absent = extent.last - extent.first + 1 - extent.count;
    if (absent === 0) continue;
    missing += absent;
    gaps.push(`${code} ${absent}`);
    if (absent > JUMP_DAYS) noteJumps(code, store.daysOf(site), findings);
  }
  if (gaps.length === 0) return;
  const more = gaps.length > LISTED ? ` and ${gaps.length - LISTED} more` : '';
  findings.note({
    code: 'missing-days',
    message: `${counted(missing, 'day is', 'days are')} absent between the first and last day of ${counted(gaps.length, 'site', 'sites')}: ${gaps.slice(0, LISTED).join(', ')}${more}.`,
  });
}

function noteJumps(code: string, days: readonly DayNumber[], findings: FindingList): void {
  for (let i = 1; i < days.length; i++) {
    if (days[i] - days[i - 1] <= JUMP_DAYS) continue;
    findings.warn({
      code: 'year-jump',
      message: `Site ${code}: the days jump from ${isoDate(days[i - 1])} to ${isoDate(days[i])}.`,
      value: isoDate(days[i]),
      advice: 'Check the years; a typical year made of months of different years is not a record of days.',
    });
  }
}
