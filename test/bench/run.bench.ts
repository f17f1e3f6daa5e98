/**
 * Speed of a run end to end: read, freeze, compute, add up, store every day, swap. A district of its own making in a database of its own: 8 stations, crops of
 * the library, a reach for every 150 parcels, 366 days. The jobs are the real ones, on the threads a worker uses.
 *
 *   node --import tsx test/bench/run.bench.ts [parcels…] [--threads n]
 *
 * 10,000 and 100,000 parcels unless told; a million needs about 15 GB of disk for a while. Goals on two cores: 100,000 in 25 s within 1 GiB, 1,000,000 in
 * 5 minutes within 3 GiB, growth exponent at most 1.05. Seeded; on a busy machine look at the CPU seconds of the process.
 */
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import postgres from 'postgres';
import { startEmbedded } from '../../db/embedded.ts';
import { migrateDatabase } from '../../db/migrate.ts';
import { insertRun } from '../../db/queries/run-state.ts';
import { season } from '../../db/schema/land.ts';
import { site as siteTable, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { closeDatabase, database } from '../../lib/access/database.ts';
import { rereadEnvironment } from '../../lib/access/environment.ts';
import { createPerson } from '../../lib/access/sessions.ts';
import { mulberry32 } from '../../lib/base/random.ts';
import { createDistrict } from '../../lib/http/answers/district.ts';
import { districtRequest } from '../../lib/http/contract/rest.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { finishRun } from '../../lib/jobs/run-finish.ts';
import { DEFAULT_RUN_SETTINGS } from '../../lib/jobs/run-settings.ts';
import { computeSlice, SLICE_PARCELS } from '../../lib/jobs/run-slice.ts';
import { startRun } from '../../lib/jobs/run-start.ts';
import { seasonPool } from '../../lib/jobs/season-pool.ts';

const SITES = 8;
const YEAR = 2024;
const DAYS = 366;
const PARCELS_ON_A_REACH = 150;
const MIB = 1024 * 1024;

const words = process.argv.slice(2);
const threadsAt = words.indexOf('--threads');
const threads = threadsAt < 0 ? 2 : Number(words.splice(threadsAt, 2)[1]);
const sizes = words.length > 0 ? words.map(Number) : [10_000, 100_000];

const folder = mkdtempSync(join(tmpdir(), 'tillwater-bench-'));
const server = await startEmbedded({ folder, database: 'bench', forTests: true });
let failed = false;
try {
  await migrateDatabase(server.ownerUrl, 'db/migrations');
  process.env.DATABASE_URL = server.ownerUrl;
  process.env.LOG_LEVEL = 'warn';
  process.env.TILLWATER_SECRET = 'a secret of the bench, long enough for any use';
  rereadEnvironment();
  seasonPool(threads);
  const seconds: number[] = [];
  for (const parcels of sizes) seconds.push(await timeRun(parcels));
  for (let k = 1; k < sizes.length; k++) {
    const exponent = Math.log(seconds[k] / seconds[k - 1]) / Math.log(sizes[k] / sizes[k - 1]);
    console.log(`growth ${sizes[k - 1]} → ${sizes[k]} parcels: exponent ${exponent.toFixed(3)}`);
  }
} catch (error) {
  console.error(error);
  failed = true;
} finally {
  await stopQueue();
  await seasonPool().close();
  await closeDatabase();
  await server.stop();
  rmSync(folder, { recursive: true, force: true });
}
process.exit(failed ? 1 : 0);

/** CPU seconds of the database server and its children so far; 0 where the system does not tell. */
function serverCpu(): number {
  if (!existsSync('/proc/self/stat')) return 0;
  const main = readFileSync(join(folder, 'data', 'postmaster.pid'), 'utf8').split('\n')[0];
  let ticks = 0;
  for (const entry of readdirSync('/proc')) {
    if (!/^\d+$/.test(entry) || !existsSync(`/proc/${entry}/stat`)) continue;
    const fields = statOf(entry);
    if (entry === main) ticks += fields[13] + fields[14];
    if (entry === main || fields[1] === Number(main)) ticks += fields[11] + fields[12];
  }
  return ticks / 100;
}

/** Fields of a process's status after its name: state, parent, … */
function statOf(pid: string): number[] {
  try {
    const text = readFileSync(`/proc/${pid}/stat`, 'utf8');
    return text
      .slice(text.lastIndexOf(')') + 2)
      .split(' ')
      .map(Number);
  } catch {
    return []; // ended meanwhile
  }
}

/** One district and its run; answers with the seconds of the run. */
async function timeRun(parcels: number): Promise<number> {
  const districtId = await makeDistrict(parcels);
  const runId = await database().inDistrict(districtId, (tx) =>
    insertRun(tx, {
      ...{ districtId, seasonCode: String(YEAR), startDate: `${YEAR}-01-01`, endDate: `${YEAR}-12-31`, dayCount: DAYS },
      settings: { ...DEFAULT_RUN_SETTINGS, band_members: 0 },
      parcelCount: parcels,
    }),
  );
  const job = { districtId, runId };
  let most = 0;
  let spent = 0;
  const watch = setInterval(() => {
    most = Math.max(most, process.memoryUsage().rss);
  }, 50);
  const told: string[] = [];
  const phase = async (name: string, work: () => Promise<unknown>) => {
    const [from, cpu, server] = [performance.now(), process.cpuUsage(), serverCpu()];
    most = process.memoryUsage().rss;
    await work();
    const { user, system } = process.cpuUsage(cpu);
    const seconds = (performance.now() - from) / 1000;
    const own = (user + system) / 1e6;
    const database = serverCpu() - server;
    spent += own + database;
    told.push(`${name} ${seconds.toFixed(1)} s (CPU ${own.toFixed(1)} + database ${database.toFixed(1)} s, ${Math.round(most / MIB)} MiB)`);
    return seconds;
  };
  let seconds = await phase('plan', () => startRun(job));
  let slice = 0;
  const loop = async () => {
    while (slice * SLICE_PARCELS < parcels) await computeSlice({ ...job, slice: slice++ });
  };
  seconds += await phase('slices', () => Promise.all(Array.from({ length: threads + 1 }, loop)));
  seconds += await phase('finish', () => finishRun(job));
  clearInterval(watch);
  const [run] = await asOwner((sql) => sql`select state, standing, balance, error from run where run_id = ${runId}`);
  if (run.state !== 'done' || !run.standing) throw new Error(`the run of ${parcels} parcels is ${run.state}: ${run.error}`);
  const [size] = await asOwner(
    (sql) =>
      sql`select avg(length(daily))::int as days, avg(length(input::text))::int as input from run_parcel where run_id = ${runId} and position < 2000`,
  );
  console.log(`${parcels} parcels, ${threads} threads: ${seconds.toFixed(1)} s, CPU ${spent.toFixed(1)} s; ${told.join('; ')}`);
  console.log(
    `  ${Math.round((parcels * DAYS) / seconds / 1000) / 1000} M parcel-days/s; days of a parcel ${size.days} B, its input ${size.input} B; residual ${run.balance.max_residual_mm} mm`,
  );
  await asOwner((sql) => sql`delete from district where district_id = ${districtId}`);
  return seconds;
}

async function asOwner<T>(work: (sql: postgres.Sql) => Promise<T>): Promise<T> {
  const sql = postgres(server.ownerUrl, { max: 1, onnotice: () => {} });
  try {
    return await work(sql);
  } finally {
    await sql.end();
  }
}

async function makeDistrict(parcels: number): Promise<string> {
  const manager = await createPerson({
    name: 'Bench',
    email: `bench-${parcels}-${Date.now()}@example.org`,
    password: 'a password of the bench',
  });
  const { id } = await createDistrict(
    districtRequest.parse({ code: `bench-${parcels}`, name: `Bench of ${parcels}`, time_zone: 'America/Boise' }),
    manager,
  );
  await makeWeather(id);
  await asOwner(async (sql) => {
    await sql`insert into reach (district_id, code, name, parent_code, kind, capacity_m3_s, length_m, loss_rule, geometry)
      select ${id}, 'R' || k, 'Reach ' || k, case when k > 0 then 'R' || (k - 1) / 3 end, case when k = 0 then 'main' else 'lateral' end, null, 1000,
        '{"kind":"none"}', '{"type":"LineString","coordinates":[[0,0],[0,0]]}'
      from generate_series(0, ${Math.ceil(parcels / PARCELS_ON_A_REACH) - 1}::int) k`;
    await sql`insert into parcel (district_id, code, ordinal, reach_code, soil_code, area_m2, elevation_m, longitude, latitude, west, south, east, north, geometry)
      select ${id}, 'P' || lpad(k::text, 8, '0'), k, 'R' || k / ${PARCELS_ON_A_REACH}::int, s.codes[1 + k % array_length(s.codes, 1)],
        20000 + (k::bigint * 7919) % 80000, 700 + (k * 31) % 200, x, y, x, y, x + 0.001, y + 0.001, '{}'
      from generate_series(0, ${parcels}::int - 1) k, lateral (select -116 + (k % 1000) * 0.001 as x, 43 + (k / 1000) * 0.001 as y) place,
        (select array_agg(code order by code) as codes from soil where district_id = ${id}) s`;
    await sql`insert into planting (district_id, parcel_code, season_code, sequence, crop_code, calendar_code, planting_date)
      select ${id}, 'P' || lpad(k::text, 8, '0'), ${String(YEAR)}, 1, c.crops[i], c.calendars[i], date '2024-03-01' + (k * 13) % 75
      from generate_series(0, ${parcels}::int - 1) k,
        (select array_agg(crop order by crop) as crops, array_agg(calendar order by crop) as calendars from (
          select c.code as crop, min(a.code) as calendar from crop c join crop_calendar a on a.district_id = c.district_id and a.code like c.code || '-%'
            and not a.definition ? 'start' and not a.definition ? 'thermal'
          where c.district_id = ${id} and c.definition ->> 'type' = 'annual' group by c.code limit 40) pairs) c,
        lateral (select 1 + (k * 17) % array_length(c.crops, 1) as i) pick`;
    await sql`analyze`;
  });
  return id;
}

async function makeWeather(districtId: string): Promise<void> {
  const random = mulberry32(1);
  const series: Record<string, (day: number) => number> = {
    air_temperature_max_c: (day) => 18 - 15 * Math.cos((2 * Math.PI * day) / DAYS) + 6 * random(),
    air_temperature_min_c: (day) => 2 - 11 * Math.cos((2 * Math.PI * day) / DAYS) + 4 * random(),
    dew_point_c: (day) => -1 - 8 * Math.cos((2 * Math.PI * day) / DAYS) + 3 * random(),
    wind_speed_m_s: () => 1 + 3 * random(),
    solar_radiation_mj_m2_d: (day) => 16 - 9 * Math.cos((2 * Math.PI * day) / DAYS) + 4 * random(),
    precipitation_mm: () => (random() < 0.15 ? 12 * random() : 0),
  };
  await database().inDistrict(districtId, async (tx) => {
    await tx.insert(season).values({ districtId, code: String(YEAR), name: 'Bench', startDate: `${YEAR}-01-01`, endDate: `${YEAR}-12-31` });
    await tx.insert(weatherSource).values({ districtId, sourceId: 1, name: 'stations' });
    for (let ordinal = 0; ordinal < SITES; ordinal++)
      await tx.insert(siteTable).values({
        ...{
          districtId,
          sourceId: 1,
          ordinal,
          code: `S${ordinal}`,
          name: `Station ${ordinal}`,
          elevation: 700 + 20 * ordinal,
          windHeight: 2,
        },
        ...{ longitude: -116 + random(), latitude: 43 + random() },
      });
    for (let month = 0; month < 12; month++) {
      const [first, next] = [Date.UTC(YEAR, month, 1), Date.UTC(YEAR, month + 1, 1)];
      const dayCount = Math.round((next - first) / 86_400_000);
      const day = Math.round((first - Date.UTC(YEAR, 0, 1)) / 86_400_000);
      for (const [variable, value] of Object.entries(series)) {
        const values = new Float32Array(SITES * dayCount);
        for (let i = 0; i < values.length; i++) values[i] = value(day + (i % dayCount));
        const block = { districtId, sourceId: 1, variable, month: new Date(first).toISOString().slice(0, 10), siteCount: SITES, dayCount };
        await tx
          .insert(weatherBlock)
          .values({ ...block, values: new Uint8Array(values.buffer), quality: new Uint8Array(values.length).fill(1) });
      }
    }
  });
}
