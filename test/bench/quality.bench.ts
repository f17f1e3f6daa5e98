/**
 * Speed of the checks: 25 stations × 4 years × 10 variables, every rule.
 *
 *   node --import tsx test/bench/quality.bench.ts
 *
 * Seeded and invented. On a busy machine look at the CPU seconds.
 */
import { mulberry32, normalDeviate } from '../../lib/base/random.ts';
import { checkSource } from '../../lib/energy/quality-check.ts';
import type { SiteObservations, WeatherVariable } from '../../lib/weather/variable.ts';

const SITES = 25;
const DAYS = 1461;
/** mean and spread of each variable, in its unit */
const VARIABLES: Partial<Record<WeatherVariable, readonly [number, number]>> = {
  air_temperature_max_c: [25, 8],
  air_temperature_min_c: [11, 7],
  air_temperature_mean_c: [18, 7],
  dew_point_c: [8, 5],
  vapour_pressure_kpa: [1.1, 0.3],
  relative_humidity_max_pct: [90, 4],
  relative_humidity_min_pct: [40, 10],
  wind_speed_m_s: [3, 1],
  solar_radiation_mj_m2_d: [18, 5],
  precipitation_mm: [2, 3],
};

function record(): SiteObservations {
  const random = mulberry32(1);
  const values: Partial<Record<WeatherVariable, Float64Array>> = {};
  for (const [name, [mean, spread]] of Object.entries(VARIABLES) as [WeatherVariable, readonly [number, number]][]) {
    const shared = Float64Array.from({ length: DAYS }, (_, day) => spread * (Math.sin(day / 58) + 0.4 * normalDeviate(random)));
    values[name] = Float64Array.from({ length: SITES * DAYS }, (_, i) =>
      Math.max(0.01, mean + shared[i % DAYS] + 0.1 * spread * normalDeviate(random)),
    );
  }
  const sites = Array.from({ length: SITES }, (_, i) => ({
    ...{ code: `S${i}`, name: '', longitude: -116 + 0.05 * i, latitude: 43 + 0.02 * i, elevation: 800, windHeight: 2 },
  }));
  return { sites, startDate: '2020-01-01', dayCount: DAYS, values };
}

const observations = record();
for (let go = 1; go <= 3; go++) {
  const [began, used] = [performance.now(), process.cpuUsage()];
  const { flags } = checkSource(observations, { defaultElevation: 0, radiationCoefficient: 0.16, today: '2026-01-01' });
  const { user, system } = process.cpuUsage(used);
  const seconds = (performance.now() - began) / 1000;
  console.log(`go ${go}: ${seconds.toFixed(2)} s, ${((user + system) / 1e6).toFixed(2)} CPU s, ${flags.length} flags`);
}
