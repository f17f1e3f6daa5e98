/**
 * Speed of reading parcels: a GeoJSON file of many polygons to staged parcels, with repair, ellipsoidal area, inside point and the search for
 * overlaps.
 *
 *   node --import tsx test/bench/parcels.bench.ts [parcels …]
 *
 * The parcels are invented (seeded): outlines of 8 to 24 corners on a grid of fields, one in fifty with a slip of the pen that must be
 * repaired, one in a hundred reaching into its neighbour. The bar is 100,000 parcels in under 30 s on one core.
 */
import { mulberry32 } from '../../lib/base/random.ts';
import { readImport } from '../../lib/files/read-import.ts';
import type { ImportFile } from '../../lib/files/reading.ts';
import { importContext } from '../support/import-context.ts';

const BAR_SECONDS = 30;
const SPACING = 0.003;

function outline(random: () => number, x: number, y: number, index: number): number[][] {
  const corners = 8 + Math.floor(random() * 17);
  const reach = index % 100 === 0 ? 0.62 : 0.45;
  const ring = Array.from({ length: corners }, (_, k) => {
    const angle = (2 * Math.PI * k) / corners;
    const radius = SPACING * reach * (0.75 + 0.25 * random());
    return [round(x + radius * Math.cos(angle)), round(y + radius * Math.sin(angle))];
  });
  if (index % 50 === 7) ring.splice(3, 2, ring[4], ring[3]);
  return [...ring, ring[0]];
}

const round = (degrees: number) => Math.round(degrees * 1e7) / 1e7;

function parcelFile(count: number): ImportFile {
  const random = mulberry32(1);
  const side = Math.ceil(Math.sqrt(count));
  const features = Array.from({ length: count }, (_, index) => {
    const [x, y] = [-1.5 + (index % side) * SPACING, 38 + Math.floor(index / side) * SPACING];
    return JSON.stringify({
      type: 'Feature',
      properties: {
        parcel: `P${index}`,
        crop: 'almond',
        method: 'drip',
        reach: `L${index % 60}`,
        owner: `owner ${index % 997}`,
        hectares: 4.2,
      },
      geometry: { type: 'Polygon', coordinates: [outline(random, x, y, index)] },
    });
  });
  const text = `{"type":"FeatureCollection","features":[${features.join(',\n')}]}`;
  return { name: 'parcels.geojson', bytes: new TextEncoder().encode(text) };
}

const sizes = process.argv.slice(2).map(Number);
console.log('parcels from GeoJSON to staged, on one thread');
for (const count of sizes.length > 0 ? sizes : [10_000, 100_000]) {
  const file = parcelFile(count);
  const megabytes = file.bytes.length / 2 ** 20;
  const start = performance.now();
  const used = process.cpuUsage();
  const reading = await readImport('parcels', [file], { season: '2023' }, importContext());
  const seconds = (performance.now() - start) / 1000;
  const { user, system } = process.cpuUsage(used);
  if (reading.staged.kind !== 'parcels') throw new Error('not parcels');
  const { error, warning } = reading.findingCounts;
  const told = `${reading.staged.parcels.length} staged, ${error} errors, ${warning} warnings`;
  const speed = `${seconds.toFixed(1)} s (processor ${((user + system) / 1e6).toFixed(1)} s), ${Math.round(count / seconds)} parcels/s`;
  const resident = `${Math.round(process.memoryUsage.rss() / 2 ** 20)} MiB resident`;
  console.log(`${count} parcels, ${megabytes.toFixed(1)} MiB: ${speed}; ${told}; ${resident}; bar ${BAR_SECONDS} s per 100,000`);
}
