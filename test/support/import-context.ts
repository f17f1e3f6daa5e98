import type { ImportContext, ImportFile } from '../../lib/files/reading.ts';

/** A district that knows little: two crops with a calendar each, two seasons, one parcel box. */
export function importContext(over: Partial<ImportContext> = {}): ImportContext {
  return {
    districtUnits: 'metric',
    knownSites: [],
    knownParcels: [],
    knownReaches: [],
    knownTurnouts: [],
    crops: [
      { code: 'almond', name: 'Almonds, no ground cover' },
      { code: 'maize-grain', name: 'Maize, grain' },
      { code: 'alfalfa-hay', name: 'Alfalfa hay' },
    ],
    calendars: [
      { code: 'almond-std', cropCode: 'almond', plantingDay: '03-01' },
      { code: 'maize-early', cropCode: 'maize-grain', plantingDay: '04-15' },
      { code: 'maize-late', cropCode: 'maize-grain', plantingDay: '05-20' },
    ],
    soils: ['loam', 'clay'],
    methods: ['drip', 'furrow'],
    seasons: [
      { code: '2023', startDate: '2023-04-01', endDate: '2023-10-31' },
      { code: 'winter', startDate: '2023-10-01', endDate: '2024-05-31' },
    ],
    cropMappings: {},
    ...over,
  };
}

export function textFile(text: string, name = 'table.csv'): ImportFile {
  return { name, bytes: new TextEncoder().encode(text) };
}

export function bytesFile(bytes: Uint8Array, name = 'table.csv'): ImportFile {
  return { name, bytes };
}

/** A FeatureCollection as a file. */
export function featureFile(features: readonly unknown[], extra: Record<string, unknown> = {}): ImportFile {
  return textFile(JSON.stringify({ type: 'FeatureCollection', ...extra, features }), 'layer.geojson');
}

export function feature(properties: unknown, type: string, coordinates: unknown): unknown {
  return { type: 'Feature', properties, geometry: { type, coordinates } };
}

/** Square with its south-west corner at x, y, anticlockwise. */
export function square(x: number, y: number, size = 0.01): number[][] {
  return [
    [x, y],
    [x + size, y],
    [x + size, y + size],
    [x, y + size],
    [x, y],
  ];
}
