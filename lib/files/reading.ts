/**
 * What goes into reading a file and what comes out: the contract between the readers and the import pipeline.
 *
 * A reader is bytes → { understood, findings, preview, staged }. It knows no database and stores nothing.
 */
import type { Geometry, LineString, MultiLineString, MultiPolygon, Polygon } from 'geojson';
import type { Finding } from '../base/errors.ts';
import type { LossRule } from '../canal/loss-rule.ts';
import type { Planting, Soil } from '../season/types.ts';
import type { BlockVariable, GridShape } from '../weather/variable.ts';
import type { LineageSummary } from './lineage-summary.ts';

export type ImportKind =
  | 'stations'
  | 'weather'
  | 'parcels'
  | 'canals'
  | 'turnouts'
  | 'areas'
  | 'plantings'
  | 'soils'
  | 'soil-areas'
  | 'images'
  | 'deliveries'
  | 'measurements';

/** One uploaded file. Readers of large formats open `path` where it is given; `bytes` then reads the whole file, and is only for small ones. */
export interface ImportFile {
  readonly name: string;
  readonly bytes: Uint8Array;
  /** where it lies on disk while it is read, when it does */
  readonly path?: string;
}

/** What the district already knows, so that codes can be checked and joined. */
export interface ImportContext {
  readonly districtUnits: 'metric' | 'us';
  readonly knownSites: readonly {
    readonly code: string;
    readonly name: string;
    /** IANA zone or fixed offset of its clock; left out or null: that of the district */
    readonly zone?: string | null;
    readonly longitude?: number;
    readonly latitude?: number;
    /** m */
    readonly elevation?: number | null;
  }[];
  readonly knownParcels: readonly string[];
  readonly knownReaches: readonly { readonly code: string; readonly parentCode: string | null }[];
  readonly knownTurnouts: readonly {
    readonly code: string;
    readonly reachCode: string;
    readonly longitude?: number | null;
    readonly latitude?: number | null;
  }[];
  readonly crops: readonly { readonly code: string; readonly name: string }[];
  /** `plantingDay` is MM-DD */
  readonly calendars: readonly { readonly code: string; readonly cropCode: string; readonly plantingDay: string | null }[];
  readonly soils: readonly string[];
  readonly methods: readonly string[];
  readonly seasons: readonly { readonly code: string; readonly startDate: string; readonly endDate: string }[];
  /** foreign crop code → crop of the library, or null for "no crop of ours" */
  readonly cropMappings: Readonly<Record<string, string | null>>;
  /** bounding box of the district's parcels [west, south, east, north], when it has any */
  readonly districtBox?: readonly [number, number, number, number] | null;
  /** bounding box of the district's stations [west, south, east, north], when it has any */
  readonly siteBox?: readonly [number, number, number, number] | null;
  /** parcel → its plantings in all seasons; parcels without plantings are left out */
  readonly plantingCounts?: Readonly<Record<string, number>>;
  /** IANA zone of the district: its day is the day of weather that names no other */
  readonly timeZone?: string;
  /** elevation taken where none is known [m] */
  readonly defaultElevation?: number;
  readonly sources?: readonly { readonly name: string; readonly kind: 'stations' | 'grid'; readonly grid: GridShape | null }[];
  readonly serviceAreas?: readonly {
    readonly code: string;
    readonly reachCode: string | null;
    readonly turnoutCode: string | null;
    readonly geometry: Polygon | MultiPolygon;
  }[];
  /** lines of the reaches, head to tail */
  readonly reachLines?: readonly { readonly code: string; readonly geometry: LineString | MultiLineString }[];
  /** shapes of the parcels, where the kind needs them: images */
  readonly parcelShapes?: readonly { readonly code: string; readonly geometry: Polygon | MultiPolygon }[];
  /** area of each parcel [m²], where the kind needs them: deliveries */
  readonly parcelAreas?: Readonly<Record<string, number>>;
  /** soil class → its name */
  readonly soilNames?: Readonly<Record<string, string>>;
  /** reach → parcels that name it; reaches without parcels are left out */
  readonly parcelCounts?: Readonly<Record<string, number>>;
}

export type DateOrder = 'ymd' | 'dmy' | 'mdy';

/** The user's corrections to what was understood. Anything left out is sniffed. */
export interface ColumnPlan {
  /** keyed by the header as written, or by the column's index from 0 as text; `role: null` ignores the column */
  readonly columns?: Readonly<Record<string, { readonly role: string | null; readonly unit?: string | null; readonly hour?: number }>>;
  readonly dateOrder?: DateOrder;
  readonly delimiter?: ',' | ';' | '\t' | '|';
  readonly decimalComma?: boolean;
  /** a name iconv knows: utf-8, utf-16le, utf-16be, windows-1252 … */
  readonly encoding?: string;
  /** line of the header, from 1 */
  readonly headerRow?: number;
}

/** Choices for one import. Every member is checked; a bad one becomes a finding. */
export interface ImportOptions {
  readonly plan?: ColumnPlan;
  /** season that plantings belong to when the file does not say (parcels with a crop column, plantings without a season column) */
  readonly season?: string;
  /** name of the weather source; default: the name of the first file without its ending */
  readonly source?: string;
  /** weather and stations: whether the source's values are observed, or a forecast of days to come; default as the source is, a new one observed */
  readonly role?: 'observed' | 'forecast';
  /** weather: site of a file without a site column */
  readonly site?: string;
  /** parcels and canals: what the district has and the file does not is removed */
  readonly replace?: boolean;
  /** further cell texts that mean missing, e.g. "-99.9" */
  readonly missingCodes?: readonly string[];
  /** order of day, month and year in dates with separators; same as `plan.dateOrder` */
  readonly dateOrder?: DateOrder;
  /** parcels: property that holds the crop */
  readonly cropColumn?: string;
  /** parcels and canals: property that holds the code */
  readonly codeColumn?: string;
  /** foreign crop code → crop of the library, or null; goes before the stored mappings */
  readonly cropMappings?: Readonly<Record<string, string | null>>;
  /** soil polygons: class of the file → soil of the district, or null to leave its polygons out */
  readonly soilMappings?: Readonly<Record<string, string | null>>;
  /** stations: anemometer height [m] of stations that bring none */
  readonly windHeight?: number;
  /** vector and archive files: layer (or member file) to read; default the first that has features */
  readonly layer?: string;
  /** vector and raster files: coordinate system of the file, "EPSG:…"; goes before what the file says */
  readonly crs?: string;
  /** parcels without a code of a turnout or reach: how they are joined to one by place */
  readonly joinByPlace?: 'none' | 'nearest-turnout' | 'nearest-reach' | 'service-area';
  /** furthest a turnout or reach may lie from the edge of a parcel that is joined to it [m]; default 500 */
  readonly joinDistance?: number;
  /** parcels: first day on which the file's parcels stand (YYYY-MM-DD) */
  readonly validFrom?: string;
  /** hourly and shorter weather: what a time stamp names; default told from the file, else `end` for sums and `start` otherwise, with a warning */
  readonly stamp?: 'start' | 'centre' | 'end';
  /** hourly and shorter weather: zone of the stamps, an IANA name or a fixed offset such as "UTC-07:00" */
  readonly stampZone?: string;
  /** hourly and shorter weather: fewest hours of a day that make its sums and means; default 22 */
  readonly minimumHours?: number;
  /** grids: cells within this many degrees around the district are kept; default one cell */
  readonly margin?: number;
  /** images: what their values are; default vegetation index */
  readonly quantity?: 'vegetation_index' | 'fraction_covered';
  /** grids: read the whole grid although the district has a place; only for small grids */
  readonly wholeGrid?: boolean;
}

/** One column of a table, or one property of the features of a vector file. */
export interface UnderstoodColumn {
  readonly index: number;
  readonly header: string;
  /** unit as written in the header or the units row */
  readonly unitText: string | null;
  readonly role: string | null;
  /** unit the values are read in */
  readonly unit: string | null;
  /** 0–1 */
  readonly confidence: number;
  readonly sample: readonly string[];
  /** hour of day of a reading such as 9am */
  readonly hour?: number;
  /** why the column has this role or none */
  readonly reason?: string;
}

export interface CropCount {
  readonly foreignCode: string;
  readonly count: number;
  readonly cropCode: string | null;
  /** how the crop was found; `similar` is a proposal that is not applied until it is confirmed */
  readonly by: 'option' | 'stored' | 'code' | 'name' | 'similar' | null;
  readonly proposed: string | null;
}

export type FileFormat =
  | 'csv'
  | 'geojson'
  | 'shapefile'
  | 'geopackage'
  | 'flatgeobuf'
  | 'geoparquet'
  | 'kml'
  | 'netcdf-3'
  | 'netcdf-4'
  | 'zarr'
  | 'geotiff'
  | 'zip'
  | 'unknown';

/** One layer of a vector file, or one member of an archive. */
export interface UnderstoodLayer {
  readonly name: string;
  readonly featureCount: number | null;
  readonly geometry: string | null;
}

/** The window of a grid that was read. */
export interface UnderstoodGrid {
  readonly shape: GridShape;
  /** cells kept */
  readonly cells: number;
  /** [west, south, east, north] of the centres of the cells kept */
  readonly box: readonly [number, number, number, number];
  /** minutes from one field to the next; null for a single field */
  readonly stepMinutes: number | null;
  readonly calendar: string | null;
}

/** A soil class of a soil map, and the soil of the district that it stands for. */
export interface SoilClassCount {
  readonly foreignCode: string;
  readonly count: number;
  readonly soilCode: string | null;
  readonly by: 'option' | 'code' | 'name' | null;
}

/** What the reader made of the file, for the user to check. */
export interface Understood {
  readonly format: FileFormat;
  /** vector files and archives with a choice */
  readonly layers?: readonly UnderstoodLayer[];
  readonly layer?: string | null;
  /** how the coordinates were brought to WGS 84, with the accuracy that can be expected */
  readonly transformation?: string | null;
  readonly grid?: UnderstoodGrid | null;
  /** hourly and shorter weather */
  readonly stamp?: 'start' | 'centre' | 'end' | null;
  readonly stampZone?: string | null;
  readonly stepMinutes?: number | null;
  readonly encoding: string | null;
  readonly delimiter: string | null;
  readonly decimalComma: boolean | null;
  readonly dateOrder: DateOrder | null;
  readonly headerRow: number | null;
  readonly columns: readonly UnderstoodColumn[];
  readonly rowCount: number;
  readonly usableRows: number;
  readonly dateRange: { readonly start: string; readonly end: string } | null;
  readonly siteCount: number | null;
  readonly featureCount: number | null;
  readonly crops: readonly CropCount[];
  /** parcels: what becomes of those that stand; added once the district's parcels were compared */
  readonly lineage?: LineageSummary;
  /** soil polygons: classes of the map */
  readonly soilClasses?: readonly SoilClassCount[];
  /** [west, south, east, north] */
  readonly boundingBox: readonly [number, number, number, number] | null;
  readonly crs: string | null;
}

export interface TablePreview {
  readonly kind: 'table';
  readonly header: readonly string[];
  readonly rows: readonly {
    readonly row: number;
    readonly cells: readonly string[];
    readonly status: 'ok' | 'bad';
    readonly reason: string | null;
  }[];
}

export interface MapPreview {
  readonly kind: 'map';
  readonly collection: {
    readonly type: 'FeatureCollection';
    readonly features: readonly {
      readonly type: 'Feature';
      readonly properties: {
        readonly row: number;
        readonly code: string | null;
        readonly status: 'ok' | 'repaired' | 'refused';
        readonly reason: string | null;
      };
      readonly geometry: Geometry | null;
    }[];
  };
}

type Preview = TablePreview | MapPreview;

export interface StagedSite {
  readonly code: string;
  readonly name: string;
  readonly longitude: number;
  readonly latitude: number;
  /** m */
  readonly elevation: number | null;
  /** m */
  readonly windHeight: number | null;
  readonly zone: string | null;
}

/** One variable of one month: values [site × day of month × step] in the unit of the variable, NaN where missing. */
export interface StagedBlock {
  readonly variable: BlockVariable;
  /** YYYY-MM-01 */
  readonly month: string;
  /** sorted */
  readonly siteCodes: readonly string[];
  /** values a day: 1, or 24 for hourly variables */
  readonly steps: 1 | 24;
  readonly values: Float32Array;
}

/** Takes a block as soon as it is read, so that a large grid is never whole in memory; wait for it before the next. */
export type BlockSink = (block: StagedBlock) => Promise<void>;

/** A cell of a grid, as a site that the import brings along. */
export interface StagedCell {
  readonly code: string;
  readonly row: number;
  readonly column: number;
  readonly longitude: number;
  readonly latitude: number;
  /** m */
  readonly elevation: number | null;
  /** height the wind of the grid is at [m], where it says */
  readonly windHeight?: number | null;
}

export interface StagedArea {
  readonly code: string;
  readonly name: string;
  readonly reachCode: string | null;
  readonly turnoutCode: string | null;
  /** m², on the WGS 84 ellipsoid */
  readonly area: number;
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
  readonly geometry: Polygon | MultiPolygon;
  readonly attributes: Readonly<Record<string, string | number | boolean | null>>;
}

export interface StagedSoilArea {
  readonly code: string;
  readonly soilCode: string;
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
  readonly geometry: Polygon | MultiPolygon;
  readonly attributes: Readonly<Record<string, string | number | boolean | null>>;
}

export interface StagedParcel {
  readonly code: string;
  readonly name: string | null;
  readonly turnoutCode: string | null;
  readonly reachCode: string | null;
  readonly soilCode: string | null;
  readonly methodCode: string | null;
  /** m², on the WGS 84 ellipsoid */
  readonly area: number;
  /** m */
  readonly elevation: number | null;
  /** of a point inside */
  readonly longitude: number;
  readonly latitude: number;
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
  readonly geometry: Polygon | MultiPolygon;
  readonly attributes: Readonly<Record<string, string | number | boolean | null>>;
  readonly crop: string | null;
}

export interface StagedTurnout {
  readonly code: string;
  readonly reachCode: string;
  /** m³ s⁻¹ */
  readonly capacity: number | null;
  /** degrees, where the file says */
  readonly longitude?: number | null;
  readonly latitude?: number | null;
}

/** Mean of an image over a parcel. */
export interface StagedImageMean {
  readonly parcelCode: string;
  /** YYYY-MM-DD */
  readonly date: string;
  readonly quantity: 'vegetation_index' | 'fraction_covered';
  readonly value: number;
  /** share of the parcel that was seen, 0–1 */
  readonly seenShare: number;
}

/** Water put on a parcel on a day, gross [m³]. */
export interface StagedDelivery {
  readonly parcelCode: string;
  /** YYYY-MM-DD */
  readonly date: string;
  readonly volume: number;
}

/** Something measured, or given, at a parcel on a day, in the unit of its quantity. */
export interface StagedMeasurement {
  readonly parcelCode: string;
  /** YYYY-MM-DD */
  readonly date: string;
  readonly quantity:
    | 'water_content_m3_m3'
    | 'root_zone_depletion_mm'
    | 'water_table_depth_m'
    | 'soil_salinity_ds_m'
    | 'water_salinity_ds_m'
    | 'efficiency';
  /** lower edge of the soil it holds for [m]; 0 where depth means nothing, or is not told */
  readonly depth: number;
  readonly value: number;
}

/** The members of a planting that say how it is watered and covered. */
export type PlantingPractice = Pick<Planting, 'irrigation' | 'mulch' | 'canopy' | 'preIrrigation' | 'germination'>;

export interface StagedPlanting {
  readonly parcelCode: string;
  readonly seasonCode: string;
  /** order within parcel and season, from 1 */
  readonly sequence: number;
  readonly cropCode: string;
  readonly calendarCode: string;
  readonly plantingDate: string;
  readonly harvestDate: string | null;
  readonly cutDates: readonly string[];
  readonly areaShare: number;
  /** how it is watered and covered; left out when the file says nothing */
  readonly practice?: PlantingPractice;
}

export interface StagedReach {
  readonly code: string;
  readonly name: string;
  readonly parentCode: string | null;
  readonly kind: string;
  /** m³ s⁻¹ */
  readonly capacity: number | null;
  readonly lossRule: LossRule;
  /** m, on the ellipsoid */
  readonly length: number;
  readonly geometry: LineString | MultiLineString;
}

/** A soil class as a file brings it: what it does not say is null. */
export interface StagedSoil extends Omit<Soil, 'curveNumber' | 'rootLimit' | 'capillary'> {
  /** texture whose capillary properties it has */
  readonly capillaryClass?: string;
  readonly curveNumber: number | null;
  /** m */
  readonly rootLimit: number | null;
  readonly source: string;
}

export type StagedImport =
  | { readonly kind: 'stations'; readonly sites: readonly StagedSite[] }
  | {
      readonly kind: 'weather';
      readonly source: string;
      /** the blocks that were not handed to the sink */
      readonly blocks: readonly StagedBlock[];
      /** cells of a grid, or stations that the file itself places; both are made when the import is applied */
      readonly cells?: readonly StagedCell[];
      readonly stations?: readonly StagedSite[];
      readonly grid?: GridShape | null;
      /** rows kept; for grids, site-days with a value */
      readonly rows: number;
      /** sites with at least one value */
      readonly sites: number;
    }
  | {
      readonly kind: 'parcels';
      readonly parcels: readonly StagedParcel[];
      readonly turnouts: readonly StagedTurnout[];
      readonly plantings: readonly StagedPlanting[];
      /** crop codes of the file that were mapped by the user or by exact match: worth storing */
      readonly cropMappings: Readonly<Record<string, string | null>>;
    }
  | { readonly kind: 'canals'; readonly reaches: readonly StagedReach[] }
  | { readonly kind: 'turnouts'; readonly turnouts: readonly StagedTurnout[] }
  | { readonly kind: 'areas'; readonly areas: readonly StagedArea[] }
  | { readonly kind: 'soil-areas'; readonly soilAreas: readonly StagedSoilArea[] }
  | { readonly kind: 'plantings'; readonly plantings: readonly StagedPlanting[] }
  | { readonly kind: 'images'; readonly images: readonly StagedImageMean[] }
  | { readonly kind: 'deliveries'; readonly deliveries: readonly StagedDelivery[] }
  | { readonly kind: 'measurements'; readonly measurements: readonly StagedMeasurement[] }
  | { readonly kind: 'soils'; readonly soils: readonly StagedSoil[] };

export interface FindingCounts {
  readonly error: number;
  readonly warning: number;
  readonly note: number;
}

export interface ImportReading {
  readonly understood: Understood;
  /** at most 1,000 kept; `findingCounts` has the true totals */
  readonly findings: readonly Finding[];
  readonly findingCounts: FindingCounts;
  readonly preview: Preview;
  /** empty when a file-level error was found */
  readonly staged: StagedImport;
}

/** Told how far a reading is, 0–1. May wait, so that a cancel can be seen. */
export type Progress = (fraction: number) => void | Promise<void>;

export const NOTHING_UNDERSTOOD: Understood = {
  format: 'unknown',
  encoding: null,
  delimiter: null,
  decimalComma: null,
  dateOrder: null,
  headerRow: null,
  columns: [],
  rowCount: 0,
  usableRows: 0,
  dateRange: null,
  siteCount: null,
  featureCount: null,
  crops: [],
  boundingBox: null,
  crs: null,
};
