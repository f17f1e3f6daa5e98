/**
 * Speed of gridded weather: a 200 × 200 cell window of a large daily grid (585 × 1386 cells), in deflated blocks as archives keep them.
 *
 *   node --import tsx test/bench/grid.bench.ts [days]
 *
 * Makes its own files in the system's temporary folder (invented numbers, seeded; a few minutes). First the whole way, from seven variables of a
 * year to monthly blocks. Then the window alone: where Python 3 with netCDF4 and xarray is on the machine, it makes files of 16-bit and
 * of floating-point numbers, with and without the shuffle filter, in three shapes of block, and xarray and our reader read each of them in
 * turn; without it only the unshuffled file of our own writer is read, for that writer has no shuffle filter. Ratios of medians within
 * one run compare across machines, absolute figures do not. "stored" is the numbers as they are stored (ours are doubles always),
 * "unpacked" with scale, offset and missing code applied.
 */
import { type ChildProcess, spawn, spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { fileOnDisk } from '../../lib/files/file-on-disk.ts';
import { readGridWeather } from '../../lib/files/grid-weather.ts';
import { openArrayFile } from '../../lib/files/open-array-file.ts';
import type { GridFileShape } from '../support/grid-file.ts';
import { importContext } from '../support/import-context.ts';

const days = Number(process.argv[2] ?? 365);
const TURNS = 5;
/** Days of files of one block a day, which take longest to make. */
const MOST_SINGLE_DAYS = 60;
/** Days read at a time when a district is read: whole blocks. */
const SLAB_DAYS = 30;
const SHAPE = { rows: 585, columns: 1386, chunk: [30, 64, 64], part: { rows: [192, 448], columns: [576, 832] } } as const;
const BLOCKS = ['30 64 64', '1 585 1386', '61 98 231'];

/** Names and units as archives of daily weather have them; scales that bring the invented numbers to plausible weather. */
const YEAR: GridFileShape['variables'] = [
  { name: 'tmmx', units: 'K', scale: 0.01, offset: 298 },
  { name: 'tmmn', units: 'K', scale: 0.01, offset: 285 },
  { name: 'rmax', units: '%', scale: 0.01, offset: 70 },
  { name: 'rmin', units: '%', scale: 0.01, offset: 35 },
  { name: 'vs', units: 'm s-1', scale: 0.001, offset: 4 },
  { name: 'srad', units: 'W m-2', scale: 0.05, offset: 200 },
  { name: 'pr', units: 'mm', scale: 0.001, offset: 4 },
];

/** Seconds by the clock, and of processor time over all threads. */
type Times = readonly [wall: number, busy: number];

function median(values: readonly number[]): number {
  return [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)];
}

async function timed(work: () => Promise<unknown>): Promise<Times> {
  const begin = performance.now();
  const before = process.cpuUsage();
  await work();
  const { user, system } = process.cpuUsage(before);
  return [(performance.now() - begin) / 1000, (user + system) / 1e6];
}

/** The process that runs the other reader. */
class OtherReader {
  private readonly lines: AsyncIterator<string>;

  private constructor(private readonly child: ChildProcess) {
    this.lines = createInterface({ input: child.stdout as NodeJS.ReadableStream })[Symbol.asyncIterator]();
  }

  /** Null where no Python of the machine has what it takes. */
  static async start(): Promise<OtherReader | null> {
    const script = new URL('../support/grid-reader.py', import.meta.url).pathname;
    for (const python of ['python3', '/usr/bin/python3']) {
      const child = spawn(python, [script], { stdio: ['pipe', 'pipe', 'inherit'] });
      child.on('error', () => undefined);
      const reader = new OtherReader(child);
      if ((await reader.lines.next()).value === 'ready') return reader;
    }
    return null;
  }

  async ask(command: string): Promise<string> {
    this.child.stdin?.write(`${command}\n`);
    const { value, done } = await this.lines.next();
    if (done) throw new Error(`the other reader ended at: ${command}`);
    return value;
  }

  async read(path: string, way: string, dayCount: number): Promise<{ times: Times; sum: number }> {
    const [wall, busy, sum] = (await this.ask(`read ${path} ${way} ${dayCount}`)).split(' ').map(Number);
    return { times: [wall, busy], sum };
  }

  end(): void {
    this.child.stdin?.end();
  }
}

/** Unpacks in place as the other reader does; files of floating-point numbers have nothing to unpack but their missing code. */
function unpack(values: Float64Array, isPacked: boolean): void {
  if (!isPacked) return;
  for (let k = 0; k < values.length; k++) values[k] = values[k] === -32768 ? Number.NaN : values[k] * 0.01 + 280;
}

/** Opens the file and reads the window, in slabs of at most `slabDays`. */
async function readWindow(path: string, dayCount: number, slabDays: number, take: (values: Float64Array) => void): Promise<void> {
  const file = await openArrayFile(fileOnDisk('grid.nc', path));
  if (file === null) throw new Error('the made file is not told as an array file');
  for (let day = 0; day < dayCount; day += slabDays) {
    take(await file.read('tas', [day, 200, 600], [Math.min(slabDays, dayCount - day), 200, 200]));
  }
  await file.close();
}

async function sumOfWindow(path: string, dayCount: number): Promise<number> {
  let sum = 0;
  await readWindow(path, dayCount, dayCount, (values) => {
    for (const value of values) sum += value;
  });
  return sum;
}

/** Reads one file both ways in turn, and prints the medians. */
async function compare(name: string, path: string, dayCount: number, isPacked: boolean, other: OtherReader | null): Promise<void> {
  const ways = [
    ['stored', 'stored', dayCount, () => undefined],
    ['unpacked', 'unpacked', dayCount, (values: Float64Array) => unpack(values, isPacked)],
    [`unpacked, ${SLAB_DAYS} days at a time`, 'unpacked', SLAB_DAYS, (values: Float64Array) => unpack(values, isPacked)],
  ] as const;
  if (other) {
    const [own, { sum }] = [await sumOfWindow(path, dayCount), await other.read(path, 'stored', dayCount)];
    if (Math.abs(own - sum) > 1e-9 * Math.abs(sum)) throw new Error(`${name}: the readers differ: ${own}, ${sum}`);
  }
  console.log(`${name}, ${dayCount} days, ${(statSync(path).size / 2 ** 20).toFixed(0)} MiB`);
  for (const [label, way, slabDays, take] of ways) {
    const own: Times[] = [];
    const others: Times[] = [];
    for (let turn = 0; turn <= TURNS; turn++) {
      const times = await timed(() => readWindow(path, dayCount, slabDays, take));
      const otherTimes = (await other?.read(path, way, dayCount))?.times;
      if (turn === 0) continue;
      own.push(times);
      if (otherTimes) others.push(otherTimes);
    }
    report(label, own, others);
  }
}

function report(label: string, own: readonly Times[], others: readonly Times[]): void {
  const middle = (all: readonly Times[], k: 0 | 1) => median(all.map((times) => times[k]));
  const line = `  ${label}: ${middle(own, 0).toFixed(3)} s (${middle(own, 1).toFixed(3)} s of processor)`;
  if (others.length === 0) {
    console.log(line);
    return;
  }
  const ratios = ([0, 1] as const).map((k) => (middle(others, k) / middle(own, k)).toFixed(2));
  console.log(
    `${line}; xarray ${middle(others, 0).toFixed(3)} s (${middle(others, 1).toFixed(3)} s): ratio ${ratios[0]} (processor ${ratios[1]})`,
  );
}

/** The whole way of a year of seven variables. */
async function readYear(path: string): Promise<void> {
  const [west, south, east, north] = [-124 + 600 / 24, 49 - 399 / 24, -124 + 799 / 24, 49 - 200 / 24];
  const context = importContext({ districtBox: [west, south, east, north], timeZone: 'UTC' });
  let values = 0;
  let cells = 0;
  const [wall, busy] = await timed(async () => {
    const reading = await readGridWeather(
      [fileOnDisk('year.nc', path)],
      { margin: 0 },
      context,
      async () => undefined,
      async (block) => {
        values += block.values.length;
      },
    );
    cells = reading.understood.grid?.cells ?? 0;
  });
  console.log(
    `${YEAR.length} variables to monthly blocks: ${cells} cells, ${(values / 1e6).toFixed(0)} million values, ${wall.toFixed(1)} s ` +
      `(${busy.toFixed(1)} s of processor); most memory ${(process.resourceUsage().maxRSS / 1024).toFixed(0)} MiB`,
  );
}

/** Makes a file, or reads the year, in a process of its own, so that memory is counted apart. */
function apart(path: string, what: 'year' | 'tas' | 'read'): void {
  const made = spawnSync(process.execPath, ['--import', 'tsx', import.meta.filename, String(days), path, what], { stdio: 'inherit' });
  if (made.status !== 0) throw new Error('the file could not be made or read');
}

const [, , , target, names] = process.argv;
if (target !== undefined && names === 'read') {
  await readYear(target);
  process.exit(0);
}
if (target !== undefined) {
  // the writer's library takes much memory of its own, which is not to be counted with the reading
  const { writeGridFile } = await import('../support/grid-file.ts');
  const variables = names === 'year' ? YEAR : [{ name: 'tas', units: 'K', scale: 0.01, offset: 280 }];
  await writeGridFile(target, { ...SHAPE, days, variables });
  process.exit(0);
}

const folder = mkdtempSync(join(tmpdir(), 'grid-bench-'));
const other = await OtherReader.start();
try {
  const year = join(folder, 'year.nc');
  apart(year, 'year');
  apart(year, 'read');
  const path = join(folder, 'grid.nc');
  apart(path, 'tas');
  // one file stays open, so that the HDF5 library stays loaded, as it does in the other process
  const keeper = await openArrayFile(fileOnDisk('grid.nc', path));
  if (other === null) {
    console.log('no Python 3 with netCDF4 and xarray on this machine: nothing to compare with, and no shuffled files');
    await compare('int16 plain [30 64 64]', path, days, true, null);
  } else {
    for (const block of BLOCKS) {
      for (const kind of ['int16', 'float32']) {
        for (const filters of ['plain', 'shuffled']) {
          const dayCount = block.startsWith('1 ') ? Math.min(days, MOST_SINGLE_DAYS) : days;
          const copy = join(folder, 'copy.nc');
          await other.ask(`copy ${path} ${copy} ${kind} ${filters} ${dayCount} ${block}`);
          await compare(`${kind} ${filters} [${block}]`, copy, dayCount, kind === 'int16', other);
          rmSync(copy);
        }
      }
    }
  }
  await keeper?.close();
} finally {
  other?.end();
  rmSync(folder, { recursive: true, force: true });
}
