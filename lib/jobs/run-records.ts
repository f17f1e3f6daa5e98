/**
 * What a run takes from the district's records beside land, libraries and weather: soil water at the start, days before the season, deliveries, measurements,
 * images. The span is settled first, since it asks for weather; what belongs to a parcel is read page by page.
 */
import type { Tx } from '../../db/connect.ts';
import { type DeliveryRow, listDeliveries } from '../../db/queries/deliveries.ts';
import { listMeasurements, type MeasurementRow } from '../../db/queries/field-measurements.ts';
import { type ImageMean, listImageMeans } from '../../db/queries/image-means.ts';
import type { Crop, DatedValues, InitialWater, Planting, Soil } from '../season/types.ts';
import { type DeliveriesTold, deliveredDepths, type WaterSpan, waterSpan } from './run-deliveries.ts';
import { type CarriedFrom, closingsOf, findCarriedFrom, measuredFrom, measuredWater, requireCarried } from './run-initial-water.ts';
import { efficiencyAt, measurementsWanted, salinityAt, waterTableOf } from './run-measurements.ts';
import { observedBasal } from './run-observed-cover.ts';
import type { RecordsTold } from './run-records-told.ts';
import type { RunSettings } from './run-settings.ts';
import { type EarlierPlanting, earlierPlantings, type Lead, leadWithWeather } from './run-spin-up.ts';

/** What the records say of one parcel; offsets are counted from the first day stepped. */
export interface ParcelRecords {
  readonly deliveries?: DatedValues;
  readonly efficiency?: number;
  readonly salinity?: { readonly soil: number; readonly water: number };
  readonly waterTable?: DatedValues;
  readonly initialWater?: InitialWater;
  readonly observedBasal?: DatedValues;
  /** plantings of earlier seasons that stand in the days before this one */
  readonly earlier?: readonly EarlierPlanting[];
}

/** A parcel as far as its records need it. */
export interface RecordedParcel {
  readonly code: string;
  /** m² */
  readonly area: number;
  readonly soil: Soil;
}

interface PlantingRow {
  readonly parcelCode: string;
  readonly cropCode: string;
  readonly plantingDate: string;
  readonly harvestDate: string | null;
  readonly practice: Pick<Planting, 'canopy'>;
}

export interface RunRecords {
  readonly lead: Lead;
  /** the days whose weather is needed: the season with those before it */
  readonly days: { readonly startDate: string; readonly dayCount: number };
  readonly span: WaterSpan;
  /** Records of a page of parcels, by code. */
  readonly read: (
    tx: Tx,
    page: { parcels: readonly RecordedParcel[]; plantings: readonly PlantingRow[]; crops: Readonly<Record<string, Crop>> },
  ) => Promise<Map<string, ParcelRecords>>;
  /** What has been read so far. @throws Refused when soil water was to be carried over and none was */
  readonly told: () => RecordsTold;
}

interface RecordsWanted {
  readonly districtId: string;
  readonly run: { readonly seasonCode: string; readonly startDate: string; readonly endDate: string; readonly dayCount: number };
  readonly settings: RunSettings;
}

/**
 * Settles what a run takes from the records.
 *
 * @throws Refused when a setting asks for what is not recorded
 */
export async function planRecords(tx: Tx, wanted: RecordsWanted): Promise<RunRecords> {
  const { districtId, run, settings } = wanted;
  const carried = settings.initial_state === 'carry-over' ? await findCarriedFrom(tx, districtId, run.startDate) : null;
  const asked = carried ? carried.gap : settings.initial_state === 'spin-up' ? settings.spin_up_days : 0;
  const none: Lead = { days: 0, startDate: run.startDate, asked: 0 };
  const lead = asked === 0 ? none : await leadWithWeather(tx, districtId, { startDate: run.startDate, asked, settings });
  const { span, told } = await waterSpan(tx, districtId, { run, lead, settings });
  const counts: Counts = { parcels: 0, own: 0, earlier: 0, efficiency: 0, waterTable: 0, soilSalinity: 0, images: 0 };
  const reading: Reading = { ...wanted, carried, lead, counts };
  return {
    lead,
    days: { startDate: lead.startDate, dayCount: run.dayCount + lead.days },
    span,
    read: (inside, page) => readPage(inside, reading, page),
    told: () => tell(reading, told),
  };
}

/** Parcels whose records are read at once. */
const PAGE = 5000;

/** Records of every parcel of a run, by code, read page by page. `soils` has a code for each parcel. */
export async function readRecords(
  tx: Tx,
  records: RunRecords,
  given: {
    parcels: readonly { readonly code: string; readonly area: number }[];
    soils: readonly string[];
    plantings: readonly PlantingRow[];
    libraries: { readonly soils: Readonly<Record<string, Soil>>; readonly crops: Readonly<Record<string, Crop>> };
  },
): Promise<Map<string, ParcelRecords>> {
  const plantings = byParcel(given.plantings);
  const all = new Map<string, ParcelRecords>();
  for (let from = 0; from < given.parcels.length; from += PAGE) {
    const parcels = given.parcels
      .slice(from, from + PAGE)
      .flatMap(({ code, area }, i) => recordedParcel(code, area, given.libraries.soils[given.soils[from + i]]));
    const own = parcels.flatMap(({ code }) => plantings.get(code) ?? []);
    for (const [code, row] of await records.read(tx, { parcels, plantings: own, crops: given.libraries.crops })) all.set(code, row);
  }
  return all;
}

/** A parcel on a soil that is not in the library has no records: it is refused where its input is made, with its name. */
function recordedParcel(code: string, area: number, soil: Soil | undefined): RecordedParcel[] {
  return soil ? [{ code, area, soil }] : [];
}

interface Counts {
  parcels: number;
  own: number;
  earlier: number;
  efficiency: number;
  waterTable: number;
  soilSalinity: number;
  images: number;
}

interface Reading extends RecordsWanted {
  readonly carried: CarriedFrom | null;
  readonly lead: Lead;
  readonly counts: Counts;
}

type Page = Parameters<RunRecords['read']>[1];

async function readPage(tx: Tx, reading: Reading, page: Page): Promise<Map<string, ParcelRecords>> {
  const { districtId, run, settings, lead, counts } = reading;
  const codes = page.parcels.map(({ code }) => code);
  const own = page.plantings;
  const days = { districtId, codes, from: lead.startDate, to: run.endDate };
  const deliveries = settings.water === 'rule' ? [] : await listDeliveries(tx, days);
  const { quantities, from } = measurementsWanted(settings, lead.startDate, measuredFrom(run.startDate));
  const measured = byParcel(await listMeasurements(tx, { ...days, from, quantities }));
  const carried = reading.carried ? await closingsOf(tx, districtId, reading.carried, codes) : new Map<string, InitialWater>();
  const earlier = await earlierPlantings(tx, districtId, { season: run.seasonCode, lead, startDate: run.startDate, codes, own });
  const images = settings.observed_cover ? await listImageMeans(tx, days) : [];
  const parts: Parts = {
    deliveries: byParcel(deliveries),
    measured,
    carried,
    earlier,
    plantings: byParcel(own),
    observed: observedOf(images, page, lead.startDate),
  };
  counts.parcels += page.parcels.length;
  return new Map(page.parcels.map((parcel) => [parcel.code, parcelRecords(parcel, reading, page, parts)]));
}

interface Parts {
  readonly deliveries: ReadonlyMap<string, DeliveryRow[]>;
  readonly measured: ReadonlyMap<string, MeasurementRow[]>;
  readonly carried: ReadonlyMap<string, InitialWater>;
  readonly earlier: ReadonlyMap<string, EarlierPlanting[]>;
  readonly plantings: ReadonlyMap<string, PlantingRow[]>;
  readonly observed: ReadonlyMap<string, DatedValues>;
}

function parcelRecords({ code, area, soil }: RecordedParcel, reading: Reading, page: Page, parts: Parts): ParcelRecords {
  const { run, settings, lead, counts } = reading;
  const rows = parts.measured.get(code) ?? [];
  const given = parts.deliveries.get(code);
  const efficiency = efficiencyAt(rows, run.endDate);
  const salinity = settings.salinity === 'off' ? null : salinityAt(rows, run.startDate, settings);
  const waterTable = settings.capillary_rise ? waterTableOf(rows, lead.startDate, run.endDate) : null;
  const earlier = parts.earlier.get(code);
  const observed = parts.observed.get(code);
  const initialWater = parts.carried.get(code) ?? measuredAt(rows, soil, reading, rootDepthOf(parts.plantings.get(code), page.crops));
  if (initialWater) counts.own++;
  if (efficiency !== null) counts.efficiency++;
  if (waterTable) counts.waterTable++;
  if (salinity?.measured) counts.soilSalinity++;
  if (observed) counts.images++;
  counts.earlier += earlier?.length ?? 0;
  return {
    ...(given ? { deliveries: deliveredDepths(given, area, lead.startDate) } : {}),
    ...(efficiency === null ? {} : { efficiency }),
    ...(salinity ? { salinity: salinity.salinity } : {}),
    ...(waterTable ? { waterTable } : {}),
    ...(initialWater ? { initialWater } : {}),
    ...(observed ? { observedBasal: observed } : {}),
    ...(earlier ? { earlier } : {}),
  };
}

function measuredAt(rows: readonly MeasurementRow[], soil: Soil, { run, settings }: Reading, rootDepth: number): InitialWater | null {
  if (settings.initial_state !== 'measured') return null;
  const from = measuredFrom(run.startDate);
  return measuredWater(
    rows.filter(({ date }) => from <= date && date <= run.startDate),
    soil,
    rootDepth,
  );
}

/** Deepest root of the first planting [m]; NaN where nothing is planted. */
function rootDepthOf(plantings: readonly PlantingRow[] | undefined, crops: Page['crops']): number {
  const first = plantings?.reduce((a, b) => (b.plantingDate < a.plantingDate ? b : a));
  return (first && crops[first.cropCode]?.rootDepthMax) ?? Number.NaN;
}

function observedOf(images: readonly ImageMean[], { plantings, crops }: Page, startDate: string): Map<string, DatedValues> {
  if (images.length === 0) return new Map();
  const own = byParcel(plantings);
  const seen = (code: string) =>
    (own.get(code) ?? []).flatMap(({ cropCode, plantingDate, harvestDate, practice }) =>
      crops[cropCode] ? [{ plantingDate, harvestDate, canopy: practice.canopy, crop: crops[cropCode] }] : [],
    );
  return observedBasal(images, seen, startDate);
}

function byParcel<Row extends { readonly parcelCode: string }>(rows: readonly Row[]): Map<string, Row[]> {
  const map = new Map<string, Row[]>();
  for (const row of rows) {
    const own = map.get(row.parcelCode);
    if (own) own.push(row);
    else map.set(row.parcelCode, [row]);
  }
  return map;
}

function tell({ carried, lead, settings, counts }: Reading, deliveries: DeliveriesTold | null): RecordsTold {
  if (carried) requireCarried(carried, counts.own);
  return {
    initial_state: {
      rule: settings.initial_state,
      parcels_with_own: counts.own,
      parcels_by_fraction: counts.parcels - counts.own,
      carried_from: carried ? { run: carried.runId, season: carried.season, end_date: carried.endDate, stale: carried.stale } : null,
      lead_days: lead.days,
      lead_days_asked: lead.asked,
      earlier_plantings: counts.earlier,
    },
    deliveries,
    measured: {
      efficiency: counts.efficiency,
      water_table: counts.waterTable,
      soil_salinity: counts.soilSalinity,
      images: counts.images,
    },
  };
}
