/**
 * Speed of window reading from NetCDF-4: a 200 × 200 cell window of a year of a large daily grid (585 × 1386 cells, 16-bit, deflated chunks).
 *
 *   node --import tsx test/bench/grid.bench.ts [days]
 *
 * Makes its own file in the system's temporary folder (invented numbers, seeded; about a minute) and reads it several times. Where Python 3
 * with xarray is on the machine, it reads the same window of the same file as often, and the ratio of the medians is printed; ratios within one run
 * compare across machines, absolute figures do not. "stored" is the numbers as they are stored, "unpacked" with scale, offset and
 * missing code applied.
 */
import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { openArrayFile } from '../../lib/files/open-array-file.ts';
import { writeGridFile } from '../support/grid-file.ts';

const days = Number(process.argv[2] ?? 365);
const ROWS = 585;
const COLUMNS = 1386;
const COUNT = [days, 200, 200];
const TURNS = 5;
/** Days read at a time when a district is read: whole chunks. */
const SLAB_DAYS = 30;

const PYTHON = `
import sys, time
try:
    import xarray
except ImportError:
    sys.exit(3)
path, turns = sys.argv[1], int(sys.argv[2])
for scaled in (False, True):
    for turn in range(turns + 1):
        wall, busy = time.perf_counter(), time.process_time()
        with xarray.open_dataset(path, mask_and_scale=scaled, decode_times=False) as data:
            data['tas'][:, 200:400, 600:800].values
        if turn > 0:
            print(time.perf_counter() - wall, time.process_time() - busy)
`;

/** Seconds by the clock, and of processor time over all threads. */
type Times = readonly [wall: number, busy: number];

function median(values: readonly number[]): number {
  return [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)];
}

function unpack(values: Float64Array): Float64Array {
  for (let k = 0; k < values.length; k++) values[k] = values[k] === -32768 ? Number.NaN : values[k] * 0.01 + 280;
  return values;
}

async function timed(work: () => Promise<unknown>): Promise<Times> {
  const begin = performance.now();
  const before = process.cpuUsage();
  await work();
  const { user, system } = process.cpuUsage(before);
  return [(performance.now() - begin) / 1000, (user + system) / 1e6];
}

/** Opens the file and reads the window, in slabs of at most `slabDays`. */
async function readWindow(path: string, slabDays: number, finish: (values: Float64Array) => unknown): Promise<void> {
  const file = await openArrayFile({ name: 'grid.nc', path, bytes: new Uint8Array() });
  if (file === null) throw new Error('the made file is not told as an array file');
  for (let day = 0; day < days; day += slabDays) {
    finish(await file.read('tas', [day, 200, 600], [Math.min(slabDays, days - day), 200, 200]));
  }
  await file.close();
}

/** The same by xarray, as stored and unpacked; null where there is none. */
function readByXarray(path: string): readonly (readonly Times[])[] | null {
  for (const python of ['python3', '/usr/bin/python3']) {
    const run = spawnSync(python, ['-c', PYTHON, path, String(TURNS)], { encoding: 'utf8' });
    if (run.status !== 0) continue;
    const times = run.stdout
      .trim()
      .split('\n')
      .map((line) => line.split(' ').map(Number) as unknown as Times);
    return [times.slice(0, TURNS), times.slice(TURNS)];
  }
  return null;
}

function report(name: string, own: readonly Times[], other: readonly Times[] | undefined): void {
  const values = COUNT.reduce((product, length) => product * length, 1) / 1e6;
  const [wall, busy] = [0, 1].map((k) => median(own.map((times) => times[k])));
  const line = `window ${name}: ${wall.toFixed(3)} s (${busy.toFixed(3)} s of processor), ${(values / wall).toFixed(1)} million values a second`;
  if (other === undefined) {
    console.log(line);
    return;
  }
  const [otherWall, otherBusy] = [0, 1].map((k) => median(other.map((times) => times[k])));
  console.log(`${line}; xarray ${otherWall.toFixed(3)} s (${otherBusy.toFixed(3)} s): ratio ${(otherWall / wall).toFixed(2)}`);
}

const folder = mkdtempSync(join(tmpdir(), 'grid-bench-'));
try {
  const path = join(folder, 'grid.nc');
  const shape = { days, rows: ROWS, columns: COLUMNS, chunk: [30, 64, 64] as const };
  await writeGridFile(path, { ...shape, variables: [{ name: 'tas', units: 'K', scale: 0.01, offset: 280 }] });
  console.log(`${days} days × ${ROWS} × ${COLUMNS} cells, ${(statSync(path).size / 2 ** 20).toFixed(0)} MiB on disk`);
  // one file stays open, so that the HDF5 library stays loaded, as it does in the other process
  const keeper = await openArrayFile({ name: 'grid.nc', path, bytes: new Uint8Array() });
  const ways = [
    ['as stored', days, () => undefined],
    ['unpacked', days, unpack],
    [`unpacked, ${SLAB_DAYS} days at a time`, SLAB_DAYS, unpack],
  ] as const;
  const own: Times[][] = ways.map(() => []);
  for (let turn = 0; turn <= TURNS; turn++) {
    for (const [k, [, slabDays, finish]] of ways.entries()) {
      const times = await timed(() => readWindow(path, slabDays, finish));
      if (turn > 0) own[k].push(times);
    }
  }
  await keeper?.close();
  const other = readByXarray(path);
  for (const [k, [name]] of ways.entries()) report(name, own[k], other?.[Math.min(k, 1)]);
  if (other === null) console.log('no Python 3 with xarray on this machine: nothing to compare with');
  console.log(`memory, the making of the file included: ${(process.memoryUsage.rss() / 2 ** 20).toFixed(0)} MiB`);
} finally {
  rmSync(folder, { recursive: true, force: true });
}
