/**
 * Plantings of parcels, one row each, in a delimited file.
 */
import { isoDate } from '../base/civil-date.ts';
import { proposeCrops } from './crop-mapping.ts';
import { parseDate } from './date-cell.ts';
import { type FindingList, shown } from './finding-list.ts';
import { type PlainRow, type PlainTable, readPlainTable } from './plain-table.ts';
import { calendarOf, plantingDateIn, type Season } from './planting-defaults.ts';
import { PRACTICE_ROLES, practiceOf } from './planting-practice.ts';
import type { CropCount, ImportContext, ImportFile, ImportOptions, ImportReading, Progress, StagedPlanting } from './reading.ts';
import type { TableRole } from './table-columns.ts';

export const PLANTING_ROLES: readonly TableRole[] = [
  { role: 'parcel', names: ['parcel', 'parcel code', 'parcel id', 'code'], required: true },
  { role: 'season', names: ['season', 'season code'] },
  { role: 'crop', names: ['crop', 'crop code', 'crop name', 'crop type'], required: true },
  { role: 'calendar', names: ['calendar', 'calendar code', 'crop calendar'] },
  { role: 'planting_date', names: ['planting date', 'planted', 'sowing date', 'sown', 'plant date'] },
  { role: 'harvest_date', names: ['harvest date', 'harvest', 'harvested'] },
  { role: 'cut_dates', names: ['cut dates', 'cuts', 'cutting dates', 'cut date'] },
  { role: 'area_share', names: ['area share', 'share', 'area fraction', 'fraction', 'percent'], kind: 'share' },
  ...PRACTICE_ROLES,
];

/** Sum of shares may pass 1 by rounding of the file. */
const SHARE_TOLERANCE = 1e-6;

type Draft = Omit<StagedPlanting, 'sequence'>;

interface Work {
  readonly options: ImportOptions;
  readonly context: ImportContext;
  readonly parcels: ReadonlySet<string>;
  readonly crops: Map<string, CropCount>;
  readonly drafts: { draft: Draft; row: number }[];
  defaultCalendars: number;
  customaryDates: number;
  seasonStarts: number;
}

/** Reads a table of plantings. */
export async function readPlantings(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const parcels = new Set(context.knownParcels);
  const work: Work = { options, context, parcels, crops: new Map(), drafts: [], defaultCalendars: 0, customaryDates: 0, seasonStarts: 0 };
  const each = (row: PlainRow, _table: PlainTable) => {
    const draft = plantingOf(row, work);
    if (draft) work.drafts.push({ draft, row: row.row });
  };
  const finish = (findings: FindingList) => {
    noteDefaults(work, findings);
    const plantings = sequenced(work.drafts, findings);
    return { kind: 'plantings' as const, plantings: findings.fatal ? [] : plantings };
  };
  return readPlainTable({ files, options, progress, roles: PLANTING_ROLES }, each, finish, () => ({ crops: [...work.crops.values()] }));
}

function plantingOf(row: PlainRow, work: Work): Draft | null {
  const parcelCode = row.text('parcel');
  if (parcelCode === null)
    row.fail({ code: 'missing-code', message: 'The row has no parcel code.', role: 'parcel', advice: 'Give the parcel of the planting.' });
  else if (!work.parcels.has(parcelCode))
    row.fail({
      code: 'unknown-parcel',
      message: `Parcel ${shown(parcelCode)} is not known.`,
      role: 'parcel',
      advice: 'Import parcels first, or correct the code.',
    });
  const season = seasonOf(row, work);
  const crop = cropOf(row, work);
  const areaShare = shareOf(row);
  const given = row.date('planting_date');
  const harvestDate = row.date('harvest_date');
  const cutDates = cutDatesOf(row);
  const practice = practiceOf(row);
  if (!row.good || parcelCode === null || !season || !crop) return null;
  const calendar = calendarOf(work.context, crop, row.text('calendar'));
  if (!calendar) return noCalendar(row, crop);
  if (row.text('calendar') === null) work.defaultCalendars++;
  const plantingDate = given ?? defaultDate(season, calendar.plantingDay, work);
  if (!checkDates(row, { plantingDate, harvestDate, cutDates, season })) return null;
  return {
    parcelCode,
    seasonCode: season.code,
    cropCode: crop,
    calendarCode: calendar.code,
    plantingDate,
    harvestDate,
    cutDates,
    areaShare,
    ...(practice === null ? {} : { practice }),
  };
}

function seasonOf(row: PlainRow, { options, context }: Work): Season | null {
  const code = row.text('season') ?? options.season ?? (context.seasons.length === 1 ? context.seasons[0].code : null);
  const season = context.seasons.find((candidate) => candidate.code === code);
  if (season) return season;
  const known = context.seasons.map((candidate) => candidate.code).join(', ');
  row.fail({
    code: 'unknown-season',
    message: code ? `Season ${shown(code)} is not known.` : 'The row names no season.',
    role: 'season',
    limit: known,
    advice: 'Make the season first, or choose one in the options.',
  });
  return null;
}

function cropOf(row: PlainRow, { options, context, crops }: Work): string | null {
  const text = row.text('crop');
  if (text === null) {
    row.fail({ code: 'missing-crop', message: 'The row has no crop.', role: 'crop', advice: 'Name a crop of the library.' });
    return null;
  }
  const known = crops.get(text);
  const count = known ? { ...known, count: known.count + 1 } : proposeCrops(new Map([[text, 1]]), options, context)[0];
  crops.set(text, count);
  if (count.cropCode) return count.cropCode;
  const advice = count.proposed ? `Is it ${count.proposed}? Map it in the options.` : 'Map it to a crop of the library in the options.';
  row.fail({ code: 'unmapped-crop', message: `Crop "${shown(text)}" is not in the library.`, role: 'crop', advice });
  return null;
}

/** Share as a fraction; values above 1 are percent. */
function shareOf(row: PlainRow): number {
  const value = row.number('area_share', { low: 0, high: 100, unit: '%' });
  if (value === null) return 1;
  const share = value > 1 ? value / 100 : value;
  if (share === 0)
    row.fail({
      code: 'value-out-of-range',
      message: 'The area share is 0.',
      role: 'area_share',
      limit: 'above 0, at most 1',
      advice: 'Delete the row or give its share.',
    });
  return share;
}

function cutDatesOf(row: PlainRow): string[] {
  const dates: string[] = [];
  for (const part of (row.text('cut_dates') ?? '').split(/[;|]/)) {
    if (part.trim() === '') continue;
    const date = parseDate(part, 'dmy');
    if (date) dates.push(isoDate(date.day));
    else
      row.fail({
        code: 'not-a-date',
        message: `Cut date "${shown(part)}" is not a date.`,
        role: 'cut_dates',
        advice: 'Write dates as YYYY-MM-DD, divided by semicolons.',
      });
  }
  return dates.sort();
}

function noCalendar(row: PlainRow, crop: string): null {
  const named = row.text('calendar');
  row.fail({
    code: 'unknown-calendar',
    message: named ? `Crop ${crop} has no calendar "${shown(named)}".` : `Crop ${crop} has no calendar.`,
    role: 'calendar',
    advice: 'Add a calendar to the crop first.',
  });
  return null;
}

function defaultDate(season: Season, plantingDay: string | null, work: Work): string {
  const { date, customary } = plantingDateIn(season, plantingDay);
  if (customary) work.customaryDates++;
  else work.seasonStarts++;
  return date;
}

function checkDates(
  row: PlainRow,
  dates: { plantingDate: string; harvestDate: string | null; cutDates: readonly string[]; season: Season },
): boolean {
  const { plantingDate, harvestDate, cutDates, season } = dates;
  const limit = `${season.startDate} to ${season.endDate}`;
  if (plantingDate > season.endDate)
    row.fail({
      code: 'date-outside-season',
      message: `Planting date ${plantingDate} is after season ${season.code}.`,
      role: 'planting_date',
      limit,
      advice: 'Correct the date or choose another season.',
    });
  if (harvestDate !== null && harvestDate <= plantingDate)
    row.fail({
      code: 'harvest-before-planting',
      message: `Harvest ${harvestDate} is not after planting ${plantingDate}.`,
      role: 'harvest_date',
      limit: `after ${plantingDate}`,
      advice: 'Correct one of the dates.',
    });
  if (harvestDate !== null && harvestDate < season.startDate)
    row.fail({
      code: 'date-outside-season',
      message: `Harvest ${harvestDate} is before season ${season.code}.`,
      role: 'harvest_date',
      limit,
      advice: 'Correct the date or choose another season.',
    });
  const early = cutDates.find((date) => date <= plantingDate);
  if (early)
    row.fail({
      code: 'cut-before-planting',
      message: `Cut ${early} is not after planting ${plantingDate}.`,
      role: 'cut_dates',
      limit: `after ${plantingDate}`,
      advice: 'Correct the date.',
    });
  return row.good;
}

function noteDefaults(work: Work, findings: FindingList): void {
  if (work.defaultCalendars > 0)
    findings.note({
      code: 'calendar-assumed',
      message: `${work.defaultCalendars} plantings name no calendar; the first of their crop is used.`,
    });
  if (work.customaryDates > 0)
    findings.note({
      code: 'planting-date-assumed',
      message: `${work.customaryDates} plantings have no date; the customary day of their calendar is used.`,
    });
  if (work.seasonStarts > 0)
    findings.warn({
      code: 'planting-date-season-start',
      message: `${work.seasonStarts} plantings have no date and their calendar has no day within the season; the first day of the season is used.`,
      advice: 'Give planting dates.',
    });
}

/** Numbers the plantings of each parcel and season by date, and leaves out those whose shares overlap to more than the whole. */
function sequenced(drafts: readonly { draft: Draft; row: number }[], findings: FindingList): StagedPlanting[] {
  const groups = new Map<string, { draft: Draft; row: number }[]>();
  for (const entry of drafts) {
    const key = JSON.stringify([entry.draft.seasonCode, entry.draft.parcelCode]);
    const group = groups.get(key);
    if (group) group.push(entry);
    else groups.set(key, [entry]);
  }
  return [...groups.values()].flatMap((group) => {
    const sorted = group.sort((a, b) =>
      a.draft.plantingDate < b.draft.plantingDate ? -1 : a.draft.plantingDate > b.draft.plantingDate ? 1 : a.row - b.row,
    );
    return withinWhole(sorted, findings).map((draft, index) => ({ ...draft, sequence: index + 1 }));
  });
}

/** Drops a planting that, with those growing on its planting date, covers more than the parcel. A planting without harvest ends where the next begins on its land. */
function withinWhole(sorted: readonly { draft: Draft; row: number }[], findings: FindingList): Draft[] {
  const kept: Draft[] = [];
  for (const { draft, row } of sorted) {
    const growing = kept.filter((other) =>
      other.harvestDate === null ? other.plantingDate === draft.plantingDate : other.harvestDate > draft.plantingDate,
    );
    const share = growing.reduce((sum, other) => sum + other.areaShare, draft.areaShare);
    if (share <= 1 + SHARE_TOLERANCE) {
      kept.push(draft);
      continue;
    }
    findings.error({
      code: 'area-share-above-one',
      message: `Parcel ${draft.parcelCode}: with this planting ${Math.round(share * 100)} % of its area is planted on ${draft.plantingDate}; the row is left out.`,
      row,
      column: 'area_share',
      value: String(draft.areaShare),
      limit: '1 over all plantings that grow at the same time',
      advice: 'Give area shares, or a harvest date of the earlier planting.',
    });
  }
  return kept;
}
