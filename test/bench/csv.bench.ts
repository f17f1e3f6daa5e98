/**
 * Speed of reading daily weather from CSV to staged blocks, against PostgreSQL's COPY of the same rows into a plain table.
 *
 *   node --import tsx test/bench/csv.bench.ts [rows …]
 *
 * Rows: site, date and eight numbers, seeded. COPY goes through the driver into an embedded server of its own, as text and numbers, without
 * index. Both in one process, one after the other, the better of three. The ratio compares across machines, absolute figures do not.
 */
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import postgres from 'postgres';
import { startEmbedded } from '../../db/embedded.ts';
import { isoDate } from '../../lib/base/civil-date.ts';
import { mulberry32 } from '../../lib/base/random.ts';
import { readWeather } from '../../lib/files/weather-csv.ts';
import { importContext } from '../support/import-context.ts';

const SITES = 100;
const FIRST_DAY = 7305;
const HEADER = 'site,date,tmax_c,tmin_c,rh_max_pct,rh_min_pct,wind_m_s,solar_mj_m2_d,rain_mm,pressure_kpa';
const PIECE = 64 * 1024;

function table(rows: number): Uint8Array {
  const random = mulberry32(7);
  const number = (low: number, high: number, decimals: number) => (low + (high - low) * random()).toFixed(decimals);
  const lines = [HEADER];
  for (let row = 0; row < rows; row++) {
    const values = [number(20, 40, 1), number(0, 19, 1), number(60, 100, 0), number(10, 59, 0), number(0, 9, 2), number(5, 30, 2)];
    lines.push(
      `S${row % SITES},${isoDate(FIRST_DAY + Math.floor(row / SITES))},${values.join(',')},${number(0, 9, 1)},${number(95, 102, 2)}`,
    );
  }
  return new TextEncoder().encode(`${lines.join('\n')}\n`);
}

const context = importContext({ knownSites: Array.from({ length: SITES }, (_, k) => ({ code: `S${k}`, name: `Site ${k}` })) });

async function readOnce(bytes: Uint8Array, rows: number): Promise<number> {
  const start = performance.now();
  const reading = await readWeather([{ name: 'bench.csv', bytes }], {}, context, () => undefined);
  const took = performance.now() - start;
  if (reading.staged.kind !== 'weather' || reading.staged.rows !== rows || reading.findingCounts.error > 0)
    throw new Error('rows were lost');
  return took;
}

async function copyOnce(sql: postgres.Sql, bytes: Uint8Array, rows: number): Promise<number> {
  await sql.unsafe('drop table if exists plain');
  const numbers = ['tmax', 'tmin', 'rh_max', 'rh_min', 'wind', 'solar', 'rain', 'pressure'].map((name) => `${name} double precision`);
  await sql.unsafe(`create table plain (site text, day date, ${numbers.join(', ')})`);
  const start = performance.now();
  const into = await sql.unsafe('copy plain from stdin with (format csv, header)').writable();
  await pipeline(Readable.from(piecesOf(bytes)), into);
  const took = performance.now() - start;
  const [{ count }] = await sql.unsafe('select count(*)::int as count from plain');
  if (count !== rows) throw new Error(`COPY stored ${count} of ${rows} rows`);
  return took;
}

function* piecesOf(bytes: Uint8Array): Generator<Buffer> {
  for (let at = 0; at < bytes.length; at += PIECE)
    yield Buffer.from(bytes.buffer, bytes.byteOffset + at, Math.min(PIECE, bytes.length - at));
}

async function best(times: number, run: () => Promise<number>): Promise<number> {
  let least = Number.POSITIVE_INFINITY;
  for (let i = 0; i < times; i++) least = Math.min(least, await run());
  return least;
}

const folder = mkdtempSync(join(tmpdir(), 'tillwater-bench-'));
const server = await startEmbedded({ folder, database: 'bench', forTests: true });
const sql = postgres(server.ownerUrl, { max: 1, onnotice: () => {} });
try {
  console.log('CSV of daily weather, site, date and eight numbers; thousand rows per second');
  console.log(['rows', 'MB', 'our reader', 'COPY', 'reader / COPY', 'resident'].map((cell) => cell.padStart(15)).join(''));
  const sizes = process.argv.slice(2).map(Number);
  for (const rows of sizes.length > 0 ? sizes : [100_000, 1_000_000]) {
    const bytes = table(rows);
    const [ours, copy] = [await best(3, () => readOnce(bytes, rows)), await best(3, () => copyOnce(sql, bytes, rows))];
    const cells = [rows, (bytes.length / 1e6).toFixed(1), (rows / ours).toFixed(0), (rows / copy).toFixed(0), (copy / ours).toFixed(2)];
    console.log([...cells, `${Math.round(process.memoryUsage.rss() / 1048576)} MiB`].map((cell) => String(cell).padStart(15)).join(''));
  }
} finally {
  await sql.end();
  await server.stop();
  rmSync(folder, { recursive: true, force: true });
}
