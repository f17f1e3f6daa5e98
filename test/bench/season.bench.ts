/**
 * Speed of the season kernel: parcel-days per second. Stations: 8 stations, weather interpolated to every parcel, reference ET per parcel and day. Grid: 25
 * parcels in a row lie in one cell and have its weather.
 *
 *   node --import tsx test/bench/season.bench.ts [parcels …]
 *
 * Runs 10,000 and 100,000 parcels × 366 days on one and on two threads, in slices, so that memory stays bounded; a sample of the same parcels through the
 * scalar season of test/support; and, where gcc is there, the same method in C (season-yardstick.c). Seeded; ratios within one run compare across
 * machines, absolute figures do not. On a busy machine look at the figure per CPU second: C is given per CPU second too.
 */
import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { mulberry32 } from '../../lib/base/random.ts';
import { makeSeasonPool } from '../../lib/jobs/season-pool.ts';
import { runSeason } from '../../lib/season/kernel.ts';
import type { ParcelInput, SeasonInput } from '../../lib/season/types.ts';
import { makeCalendar, makeCrop, makeMethod, makeSites, makeSoil, makeWeather, makeWeights } from '../support/random-season.ts';
import { scalarSeason } from '../support/scalar-season.ts';

const DAYS = 366;
const SITES = 8;
const SLICE = 2000;
const SCALAR_PARCELS = 300;
/** parcels in a cell of the grid case */
const IN_CELL = 25;

/** A district of `count` parcels on one crop each, with a library of 40 crops and calendars, 12 soils and 6 methods; invented. */
function district(count: number, inCell = 1): SeasonInput {
  const random = mulberry32(1);
  const crops = Array.from({ length: 40 }, () => makeCrop(random));
  const calendars = Array.from({ length: 40 }, () => makeCalendar(random));
  const soils = Array.from({ length: 12 }, () => makeSoil(random));
  const methods = Array.from({ length: 6 }, () => makeMethod(random));
  const makePlace = () => ({ latitude: 38 + 2 * random(), elevation: 50 + 300 * random(), weights: makeWeights(random, SITES) });
  let place = makePlace();
  const parcels: ParcelInput[] = Array.from({ length: count }, (_, k) => {
    const crop = Math.floor(random() * 40);
    if (k % inCell === 0) place = makePlace();
    return {
      code: `P${k}`,
      area: 10000,
      ...place,
      longitude: -1.5,
      soil: soils[Math.floor(random() * 12)],
      method: methods[Math.floor(random() * 6)],
      plantings: [
        {
          crop: crops[crop],
          calendar: calendars[crop],
          plantingDate: `2024-0${3 + Math.floor(random() * 3)}-15`,
          harvestDate: '2024-10-15',
          cutDates: [],
          areaShare: 1,
        },
      ],
    };
  });
  const settings = { method: 'fao56', initialDepletion: 0.3, lapseRate: 0.0065, irrigate: true, runoff: true } as const;
  return {
    startDate: '2024-01-01',
    dayCount: DAYS,
    settings,
    sites: makeSites(random, SITES),
    weather: makeWeather(random, SITES, DAYS),
    parcels,
  };
}

function slices(input: SeasonInput): SeasonInput[] {
  const all: SeasonInput[] = [];
  for (let from = 0; from < input.parcels.length; from += SLICE) all.push({ ...input, parcels: input.parcels.slice(from, from + SLICE) });
  return all;
}

/** Million parcel-days of one thread in this process, per second of the clock and per second of processor time. */
function oneThread(input: SeasonInput): { clock: number; processor: number } {
  const start = performance.now();
  const used = process.cpuUsage();
  let worst = 0;
  for (const slice of slices(input)) worst = Math.max(worst, runSeason(slice).maxBalanceResidual);
  if (!(worst < 1e-6)) throw new Error(`balance residual ${worst} mm`);
  const { user, system } = process.cpuUsage(used);
  const parcelDays = input.parcels.length * DAYS;
  return { clock: parcelDays / (performance.now() - start) / 1000, processor: parcelDays / (user + system) };
}

/** Million parcel-days per second of a pool; a slice per thread and one waiting for each. */
async function pooled(input: SeasonInput, threads: number): Promise<number> {
  const pool = makeSeasonPool(threads);
  await pool.run({ ...input, parcels: input.parcels.slice(0, 200) });
  const waiting = slices(input);
  const start = performance.now();
  const feed = async () => {
    for (let slice = waiting.shift(); slice; slice = waiting.shift()) await pool.run(slice);
  };
  await Promise.all(Array.from({ length: threads * 2 }, feed));
  const speed = (input.parcels.length * DAYS) / (performance.now() - start) / 1000;
  await pool.close();
  return speed;
}

function scalar(input: SeasonInput): number {
  const sample = input.parcels.slice(0, SCALAR_PARCELS);
  for (const parcel of sample.slice(0, 30)) scalarSeason(input, parcel);
  const start = performance.now();
  for (const parcel of sample) scalarSeason(input, parcel);
  return (sample.length * DAYS) / (performance.now() - start) / 1000;
}

/** The C yardstick, built in a folder of its own; null where there is no gcc. */
function buildYardstick(): { run(parcels: number, inCell: number): number; remove(): void } | null {
  const folder = mkdtempSync(join(tmpdir(), 'yardstick-'));
  const source = fileURLToPath(new URL('./season-yardstick.c', import.meta.url));
  const program = join(folder, 'yardstick');
  const built = spawnSync('gcc', ['-O3', '-march=native', source, '-lm', '-o', program]);
  const remove = () => rmSync(folder, { recursive: true });
  if (built.status !== 0) {
    remove();
    return null;
  }
  const run = (parcels: number, inCell: number) =>
    Number(spawnSync(program, [`${parcels}`, inCell > 1 ? 'grid' : 'stations'], { encoding: 'utf8' }).stdout);
  return { run, remove };
}

const sizes = process.argv.slice(2).map(Number);
const yardstick = buildYardstick();
oneThread(district(2000));
const lines = [
  ['case', 'parcels', 'one thread', 'per CPU s', 'C, CPU s', 'kernel / C', 'pool of 1', 'pool of 2', 'two / one', 'scalar', 'resident'],
];
for (const count of sizes.length > 0 ? sizes : [10_000, 100_000]) {
  for (const inCell of [1, IN_CELL]) {
    const input = district(count, inCell);
    const plain = scalar(input);
    const single = oneThread(input);
    const compiled = yardstick === null ? Number.NaN : yardstick.run(count, inCell);
    const one = await pooled(input, 1);
    const two = await pooled(input, 2);
    const resident = `${Math.round(process.memoryUsage.rss() / 1048576)} MiB`;
    const speeds = [single.clock, single.processor, compiled, single.processor / compiled, one, two, two / one, plain];
    lines.push([inCell > 1 ? 'grid' : 'stations', String(count), ...speeds.map((speed) => speed.toFixed(2)), resident]);
  }
}
yardstick?.remove();
console.log(`season kernel, ${DAYS} days, ${SITES} stations; million parcel-days per second`);
for (const line of lines) console.log(line.map((cell) => cell.padStart(12)).join(''));
