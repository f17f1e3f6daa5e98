/** What can be brought in, in the order a new district needs it: the columns each takes, and a file to start from. */

import type { ImportAnswer } from '../../lib/http/contract/rest.ts';

const TABLE = { formats: 'CSV', accept: '.csv,.tsv,.txt,.zip,text/csv,text/plain' } as const;
const SHAPES = {
  formats: 'shapes',
  accept: '.geojson,.json,.zip,.gpkg,.fgb,.parquet,.geoparquet,.kml,.kmz,.shp,.dbf,.prj,.cpg,.shx,application/geo+json',
} as const;
/** What shapes are read from. */
export const SHAPE_FORMATS = 'GeoJSON, zipped shapefile, GeoPackage, FlatGeobuf, GeoParquet, KML';

export interface ImportKindText {
  readonly kind: ImportAnswer['kind'];
  readonly name: string;
  /** what it is read from, in a few words */
  readonly formats: string;
  /** endings offered by the file chooser; any file is told by its content */
  readonly accept: string;
  readonly says: string;
  readonly columns: string;
  /** the template's file name and content, invented; null for what no text can show */
  readonly template: { readonly name: string; readonly text: string } | null;
}

const rows = (...lines: readonly string[]) => `${lines.join('\r\n')}\r\n`;

function features(...list: readonly { readonly properties: object; readonly geometry: object }[]): string {
  const collection = { type: 'FeatureCollection', features: list.map((one) => ({ type: 'Feature', ...one })) };
  return `${JSON.stringify(collection, null, 2)}\n`;
}

const line = (...coordinates: readonly number[][]) => ({ type: 'LineString', coordinates });
const square = (west: number, south: number, size: number) => ({
  type: 'Polygon',
  coordinates: [
    [
      [west, south],
      [west + size, south],
      [west + size, south + size],
      [west, south + size],
      [west, south],
    ],
  ],
});

export const IMPORT_KINDS: readonly ImportKindText[] = [
  {
    kind: 'stations',
    name: 'Weather stations',
    ...TABLE,
    says: 'One row per station. Weather tables name them, unless the file places its own station.',
    columns: 'site, name, latitude, longitude, elevation, wind_height, zone',
    template: {
      name: 'stations-template.csv',
      text: rows('site,name,latitude,longitude,elevation_m,wind_height_m', '001,Invented station,45.12,-120.15,240,2'),
    },
  },
  {
    kind: 'weather',
    name: 'Weather',
    formats: 'CSV or grids',
    accept: '.csv,.tsv,.txt,.dat,.zip,.nc,.nc4,.cdf,.h5,.tif,.tiff',
    says: 'Stations by day, hour or minute as tables; grids as NetCDF, zipped Zarr or a series of GeoTIFF. Later imports replace earlier values of the same place and day.',
    columns:
      'site, date (and hour), and any of: air temperature max/min/mean, dew point, vapour pressure, relative humidity max/min/mean, specific humidity, wind speed, solar radiation, sunshine hours, net radiation, precipitation, pressure, reference ET. Units from the headers, or chosen afterwards',
    template: {
      name: 'weather-template.csv',
      text: rows(
        'site,date,tmax_c,tmin_c,rhmax_pct,rhmin_pct,wind_m_s,solar_mj_m2_d,rain_mm',
        '001,2023-04-01,18.2,4.1,92,38,2.1,17.5,0',
        '001,2023-04-02,16.9,5.0,95,44,2.8,15.1,1.2',
      ),
    },
  },
  {
    kind: 'canals',
    name: 'Canals',
    ...SHAPES,
    says: 'Lines drawn from head to tail, one feature per reach. The reach at the headworks has no parent.',
    columns:
      'reach, parent, name, kind, capacity_m3_s, loss_rule (none, fraction_per_km, efficiency, seepage_mm_d), loss_value, wetted_perimeter_m',
    template: {
      name: 'canals-template.geojson',
      text: features(
        {
          properties: {
            reach: 'MAIN',
            parent: null,
            name: 'Main canal',
            kind: 'main',
            capacity_m3_s: 4.5,
            loss_rule: 'fraction_per_km',
            loss_value: 0.01,
          },
          geometry: line([-120.2, 45.1], [-120.15, 45.12]),
        },
        {
          properties: {
            reach: 'L1',
            parent: 'MAIN',
            name: 'First lateral',
            kind: 'lateral',
            capacity_m3_s: 1.2,
            loss_rule: 'efficiency',
            loss_value: 0.9,
          },
          geometry: line([-120.15, 45.12], [-120.13, 45.15]),
        },
      ),
    },
  },
  {
    kind: 'turnouts',
    name: 'Turnouts',
    formats: 'CSV or points',
    accept: `${TABLE.accept},${SHAPES.accept}`,
    says: 'Where water leaves a reach. With their places, parcels that name none can be joined to the nearest.',
    columns: 'turnout, reach, capacity_m3_s, longitude, latitude (points bring their own place)',
    template: {
      name: 'turnouts-template.csv',
      text: rows('turnout,reach,capacity_m3_s,longitude,latitude', 'T1,L1,0.15,-120.1390,45.1405'),
    },
  },
  {
    kind: 'areas',
    name: 'Service areas',
    ...SHAPES,
    says: 'Polygons of the land that a reach or turnout serves. Parcels inside that name none can be joined to it; areas are outlined on the map.',
    columns: 'area, name, reach, turnout',
    template: {
      name: 'service-areas-template.geojson',
      text: features({
        properties: { area: 'A1', name: 'First lateral', reach: 'L1', turnout: 'T1' },
        geometry: square(-120.141, 45.139, 0.012),
      }),
    },
  },
  {
    kind: 'parcels',
    name: 'Parcels',
    ...SHAPES,
    says: 'Polygons, one feature per parcel. Area is measured on the ellipsoid; a crop column also makes plantings of the chosen season.',
    columns: 'parcel, name, turnout, reach, soil, method, crop, elevation_m',
    template: {
      name: 'parcels-template.geojson',
      text: features(
        {
          properties: { parcel: '0001', name: 'Home', turnout: 'T1', reach: 'L1', soil: 'loam', method: 'furrow', crop: 'maize' },
          geometry: square(-120.14, 45.14, 0.004),
        },
        {
          properties: { parcel: '0002', name: null, turnout: 'T1', reach: 'L1', soil: 'loam', method: 'drip', crop: 'alfalfa' },
          geometry: square(-120.135, 45.14, 0.004),
        },
      ),
    },
  },
  {
    kind: 'plantings',
    name: 'Plantings',
    ...TABLE,
    says: 'What stands on each parcel in a season. Plantings of a parcel and season are replaced as a whole.',
    columns:
      'parcel, season, crop, calendar, planting_date, harvest_date, cut_dates (divided by ;), area_share; how it is watered and covered, where it differs from the method: irrigation_rule (depletion, interval, fixed-depth, daily, deficit, none) with irrigation_trigger, irrigation_refill, irrigation_interval_d or irrigation_depth_mm, trigger_initial … refill_late of a deficit, pre_irrigation_days, pre_irrigation_depth_mm, germination (days:mm, divided by ;), mulch, mulch_cover, canopy_cover, canopy_height_m',
    template: {
      name: 'plantings-template.csv',
      text: rows(
        'parcel,season,crop,planting_date,harvest_date,cut_dates,area_share',
        '0001,2023,maize,2023-04-20,,,1',
        '0002,2023,alfalfa,2023-03-10,,2023-05-25;2023-07-05,1',
      ),
    },
  },
  {
    kind: 'soils',
    name: 'Soil classes',
    ...TABLE,
    says: 'One row per soil class, or one for each of its layers from the surface down; parcels and soil polygons name them by code.',
    columns:
      'code, name, field_capacity, wilting_point, rew_mm, tew_mm, ze_m, curve_number, root_limit_m, top_m and bottom_m of a layer, saturation, texture, percolation_mm_d, capillary_class',
    template: {
      name: 'soils-template.csv',
      text: rows(
        'code,name,top_m,bottom_m,field_capacity,wilting_point,rew_mm,curve_number,texture',
        'SL,Sandy loam,,,0.23,0.11,8,75,sandy loam',
        'LS,Loam over sand,0,0.4,0.27,0.12,9,78,loam',
        'LS,Loam over sand,0.4,1.5,0.12,0.05,,,sand',
      ),
    },
  },
  {
    kind: 'soil-areas',
    name: 'Soil polygons',
    ...SHAPES,
    says: 'A soil map. A parcel without a soil of its own takes the classes under it, weighted by area.',
    columns: 'code, soil',
    template: {
      name: 'soil-polygons-template.geojson',
      text: features({ properties: { code: 'S-1', soil: 'loam' }, geometry: square(-120.145, 45.135, 0.02) }),
    },
  },
  {
    kind: 'deliveries',
    name: 'Deliveries',
    ...TABLE,
    says: 'Water put on parcels, one row per parcel and day or turn; rows of a day add up. Later imports replace the day. A 0 says that nothing was delivered. Runs can take them in place of what the crops ask for.',
    columns: 'parcel, date, and volume_m3 (or acre-feet, megalitres …) or gross_depth_mm over the parcel',
    template: {
      name: 'deliveries-template.csv',
      text: rows('parcel,date,volume_m3', '0001,2023-05-02,1250', '0002,2023-05-04,980'),
    },
  },
  {
    kind: 'measurements',
    name: 'Field measurements',
    ...TABLE,
    says: 'What was measured at parcels: a column for each quantity, or one row per value with its quantity named. Later imports replace all depths of a parcel, day and quantity.',
    columns:
      'parcel, date, depth_m, and any of: water_content, depletion_mm, water_table_m, soil_salinity_ds_m (ECe), water_salinity_ds_m (ECw), efficiency; or quantity, value, unit',
    template: {
      name: 'measurements-template.csv',
      text: rows(
        'parcel,date,depth_m,water_content,water_table_m,efficiency',
        '0001,2023-03-28,0.3,0.21,,',
        '0001,2023-03-28,0.6,0.24,,',
        '0002,2023-03-28,,,1.8,0.72',
      ),
    },
  },
  {
    kind: 'images',
    name: 'Images of plant cover',
    formats: 'GeoTIFF',
    accept: '.tif,.tiff,image/tiff',
    says: 'A vegetation index (−1 … 1) or the fraction of ground covered (0 … 1), one image a file with its day in the name. The mean over each parcel can replace the crop curve of a run.',
    columns: 'one band; cells without a value where clouds hid the ground',
    template: null,
  },
];

export function kindName(kind: string): string {
  return IMPORT_KINDS.find((one) => one.kind === kind)?.name ?? kind;
}

export function templateHref({ name, text }: NonNullable<ImportKindText['template']>): string {
  const type = name.endsWith('.csv') ? 'text/csv' : 'application/geo+json';
  return `data:${type};charset=utf-8,${encodeURIComponent(text)}`;
}
