/**
 * Speed of a band: members × parcels × days, only period sums kept, on the threads that a worker uses.
 *
 *   node --import tsx test/bench/band.bench.ts [parcels] [members] [threads]
 *
 * 10,000 parcels × 100 members × 366 days on one and two threads unless told; the goal is 60 s on two cores. A district of its own making, on 8 stations and
 * 60 reaches, parcels of a reach side by side, in the parts that a run is cut into. Seeded; on a busy machine look at the figure per CPU second.
 */
import { periodsOf } from '../../lib/base/civil-date.ts';
import { mulberry32 } from '../../lib/base/random.ts';
import { closeBandThreads, computeBandPart } from '../../lib/jobs/band-threads.ts';
import { DEFAULT_FIELD_ERRORS } from '../../lib/season/band-factors.ts';
import type { EnsembleWanted } from '../../lib/season/ensemble.ts';
import type { ParcelInput, SeasonInput } from '../../lib/season/types.ts';
import { makeCalendar, makeCrop, makeMethod, makeSites, makeSoil, makeWeather, makeWeights } from '../support/random-season.ts';

const DAYS = 366;
const SITES = 8;
const REACHES = 60;
/** Days walked in a part, as in a run. */
const PART_DAYS = 20_000_000;

function district(count: number): SeasonInput {
  const random = mulberry32(1);
  const crops = Array.from({ length: 40 }, (_, k) => ({ ...makeCrop(random), code: `crop-${k}` }));
  const calendars = Array.from({ length: 40 }, () => makeCalendar(random));
  const soils = Array.from({ length: 12 }, (_, k) => ({ ...makeSoil(random), code: `soil-${k}` }));
  const methods = Array.from({ length: 6 }, (_, k) => ({ ...makeMethod(random), code: `method-${k}` }));
  const parcels: ParcelInput[] = Array.from({ length: count }, (_, k) => {
    const crop = Math.floor(random() * 40);
    const planting = { plantingDate: `2024-0${3 + Math.floor(random() * 3)}-15`, harvestDate: '2024-10-15', cutDates: [], areaShare: 1 };
    return {
      ...{ code: `P${k}`, area: 10000, latitude: 38 + 2 * random(), longitude: -1.5, elevation: 50 + 300 * random() },
      soil: soils[Math.floor(random() * 12)],
      method: methods[Math.floor(random() * 6)],
      plantings: [{ ...planting, crop: crops[crop], calendar: calendars[crop] }],
      weights: makeWeights(random, SITES),
    };
  });
  return {
    startDate: '2024-01-01',
    dayCount: DAYS,
    settings: { method: 'fao56', initialDepletion: 0.3, lapseRate: 0.0065, irrigate: true, runoff: true },
    sites: makeSites(random, SITES),
    weather: makeWeather(random, SITES, DAYS),
    parcels,
  };
}

interface Part {
  readonly input: SeasonInput;
  readonly wanted: EnsembleWanted;
}

function partsOf(input: SeasonInput, members: number): Part[] {
  const size = Math.floor(PART_DAYS / (members * DAYS));
  const periods = (['week', 'month', 'season'] as const).flatMap((kind) => periodsOf(kind, '2024-01-01', '2024-12-31', 1));
  const weather = { deviation: new Float64Array(DAYS).fill(0.08), persistence: new Float64Array(DAYS).fill(0.6) };
  const parts: Part[] = [];
  for (let from = 0; from < input.parcels.length; from += size) {
    const parcels = input.parcels.slice(from, from + size);
    const reaches = parcels.map((_, k) => Math.floor(((from + k) * REACHES) / input.parcels.length));
    const reachCount = reaches[reaches.length - 1] - reaches[0] + 1;
    const common = { members, seed: 1, errors: DEFAULT_FIELD_ERRORS, weather, periods, reachCount };
    parts.push({ input: { ...input, parcels }, wanted: { ...common, reachOf: reaches.map((reach) => reach - reaches[0]) } });
  }
  return parts;
}

/** Runs all parts, `threads` at a time; answers seconds by the clock and of processor time, the longest part, and a checksum. */
async function run(parts: readonly Part[], threads: number) {
  const [start, used] = [performance.now(), process.cpuUsage()];
  const sums = new Float64Array(parts.length);
  let [next, longest] = [0, 0];
  const work = async () => {
    while (next < parts.length) {
      const part = next++;
      const began = performance.now();
      const { parcels } = await computeBandPart(parts[part]);
      longest = Math.max(longest, (performance.now() - began) / 1000);
      sums[part] = parcels.reduce((sum, value) => sum + value, 0);
    }
  };
  await Promise.all(Array.from({ length: threads }, work));
  const { user, system } = process.cpuUsage(used);
  const clock = (performance.now() - start) / 1000;
  return { clock, processor: (user + system) / 1e6, longest, checksum: sums.reduce((sum, value) => sum + value, 0) };
}

const [count = 10_000, members = 100, most = 2] = process.argv.slice(2).map(Number);
const parts = partsOf(district(count), members);
const days = count * members * DAYS;
console.log(`${count} parcels × ${members} members × ${DAYS} days = ${(days / 1e6).toFixed(0)} million days, ${parts.length} parts`);
let before: number | null = null;
for (let threads = 1; threads <= most; threads++) {
  const { clock, processor, longest, checksum } = await run(parts, threads);
  if (before !== null && checksum !== before) throw new Error(`${threads} threads came to other bytes: ${checksum} against ${before}`);
  before = checksum;
  const rate = (seconds: number) => (days / seconds / 1e6).toFixed(2);
  const memory = (process.memoryUsage().rss / 2 ** 20).toFixed(0);
  console.log(
    `${threads} thread(s): ${clock.toFixed(1)} s, ${rate(clock)} M days/s (${rate(processor)} per CPU second), longest part ${longest.toFixed(1)} s, ${memory} MiB resident`,
  );
}
await closeBandThreads();
