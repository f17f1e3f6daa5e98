/**
 * Crops named on parcels → plantings of one season.
 */
import { counted } from '../base/counted.ts';
import { proposeCrops } from './crop-mapping.ts';
import { type BoundProperties, textOf } from './feature-properties.ts';
import { type FindingList, shown } from './finding-list.ts';
import { calendarOf, plantingDateIn } from './planting-defaults.ts';
import type { RawFeature } from './raw-feature.ts';
import type { CropCount, ImportContext, ImportOptions, StagedParcel, StagedPlanting } from './reading.ts';

interface PlantingWork {
  readonly options: ImportOptions;
  readonly context: ImportContext;
  readonly findings: FindingList;
  readonly parcels: readonly StagedParcel[];
}

/** Crop codes of the features with their counts and the crop each stands for. */
export function cropsOf(
  features: readonly RawFeature[],
  { bound }: BoundProperties,
  options: ImportOptions,
  context: ImportContext,
): Map<string, CropCount> {
  const counts = new Map<string, number>();
  for (const feature of features) {
    const code = textOf(feature, bound, 'crop');
    if (code !== null) counts.set(code, (counts.get(code) ?? 0) + 1);
  }
  return new Map(proposeCrops(counts, options, context).map((crop) => [crop.foreignCode, crop]));
}

/** Plantings of the mapped crops in the season chosen; a parcel whose crop is not mapped has none. */
export function plantingsOf(work: PlantingWork, crops: ReadonlyMap<string, CropCount>, { bound }: BoundProperties): StagedPlanting[] {
  const { context, findings, parcels } = work;
  warnUnmapped(crops, bound.get('crop')?.header, findings);
  if (!bound.has('crop')) return [];
  const season = chosenSeason(work);
  if (!season) return [];
  const starts = { season: 0 };
  const withoutCalendar = new Set<string>();
  const plantings = parcels.flatMap((parcel): StagedPlanting[] => {
    if (parcel.crop === null) return [];
    const calendar = calendarOf(context, parcel.crop, null);
    if (!calendar) withoutCalendar.add(parcel.crop);
    if (!calendar) return [];
    const { date, customary } = plantingDateIn(season, calendar.plantingDay);
    if (!customary) starts.season++;
    return [
      {
        parcelCode: parcel.code,
        seasonCode: season.code,
        sequence: 1,
        cropCode: parcel.crop,
        calendarCode: calendar.code,
        plantingDate: date,
        harvestDate: null,
        cutDates: [],
        areaShare: 1,
      },
    ];
  });
  if (plantings.length > 0)
    findings.note({
      code: 'planting-date-assumed',
      message: `${counted(plantings.length, 'planting takes', 'plantings take')} the first calendar of the crop and its customary planting day.`,
    });
  if (starts.season > 0)
    findings.warn({
      code: 'planting-date-season-start',
      message: `${counted(starts.season, 'planting starts', 'plantings start')} on the first day of the season: the calendar has no day within it.`,
      advice: 'Import plantings with dates.',
    });
  if (withoutCalendar.size > 0)
    findings.warn({
      code: 'unknown-calendar',
      message: `Crops without a calendar have no plantings: ${[...withoutCalendar].join(', ')}.`,
      advice: 'Add a calendar to each crop.',
    });
  return plantings;
}

/** Mappings worth storing: those that name a crop, and those that say on purpose that there is none. */
export function mappingsOf(crops: ReadonlyMap<string, CropCount>): Record<string, string | null> {
  const mapped = [...crops.values()].filter((crop) => crop.cropCode !== null || crop.by === 'option' || crop.by === 'stored');
  return Object.fromEntries(mapped.map((crop) => [crop.foreignCode, crop.cropCode]));
}

function warnUnmapped(crops: ReadonlyMap<string, CropCount>, column: string | undefined, findings: FindingList): void {
  const unmapped = [...crops.values()].filter((crop) => crop.cropCode === null && crop.by !== 'option' && crop.by !== 'stored');
  if (unmapped.length > 0) {
    const parts = unmapped
      .slice(0, 20)
      .map((crop) => `${shown(crop.foreignCode)} (${crop.count}${crop.proposed ? `, perhaps ${crop.proposed}` : ''})`);
    findings.warn({
      code: 'unmapped-crop',
      message: `${counted(unmapped.length, 'crop code is', 'crop codes are')} not in the library; the parcels come without planting: ${parts.join(', ')}${unmapped.length > 20 ? ' …' : ''}.`,
      column: column,
      advice: 'Map them to crops of the library in the options.',
    });
  }
}

function chosenSeason({ options, context, findings }: PlantingWork): ImportContext['seasons'][number] | null {
  const season = context.seasons.find((candidate) => candidate.code === options.season);
  if (!season) {
    findings.warn({
      code: options.season ? 'unknown-season' : 'no-season',
      message: options.season
        ? `Season ${shown(options.season)} is not known; no plantings are made.`
        : 'No season is chosen; the crops of the parcels are read but no plantings are made.',
      limit: context.seasons.map((candidate) => candidate.code).join(', '),
      advice: 'Choose a season in the options.',
    });
    return null;
  }
  return season;
}
