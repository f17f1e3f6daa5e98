/**
 * Two water years of daily weather at the stations of the invented district, from a published stochastic generator.
 *
 * Rain: two-state first-order Markov chain and exponential depths. Maximum and minimum temperature and solar radiation: residuals of a first-order
 * multivariate autoregression about harmonics that depend on the day being wet or dry. Source: Richardson (1981), Water Resources Research 17(1),
 * 182–190; matrices from Richardson & Wright (1984), WGEN, USDA-ARS-8 (recalled, not re-read). Stations are tied by correlating the driving
 * noise, after Wilks (1998), Journal of Hydrology 210, 178–191 (recalled, not re-read). Departures: radiation is generated as a share of clear-sky
 * radiation; dew point and wind follow simple rules given in `climate.ts`.
 */
import { type DayNumber, dayNumber, dayOfYear } from '../../base/civil-date.ts';
import { mulberry32, normalDeviate, type Random } from '../../base/random.ts';
import { clearSkyRadiation } from '../../energy/radiation.ts';
import { sunDay } from '../../energy/sun.ts';
import type { Site, SiteObservations } from '../../weather/variable.ts';
import {
  BETWEEN_STATIONS,
  CLEARNESS,
  DEW_POINT_DEPRESSION,
  ELEVATION,
  harmonicAt,
  MAXIMUM_TEMPERATURE,
  MINIMUM_TEMPERATURE,
  RAIN,
  WIND,
} from './climate.ts';
import { demoOutages } from './outages.ts';
import { DEMO_END, DEMO_START, type DemoValues, emptyValues } from './record.ts';
import { elevationAt, lonLat, planeFromValley, riverAcross } from './terrain.ts';

/** Lag-one and driving matrices of the residuals of maximum temperature, minimum temperature, radiation. Source: Richardson & Wright (1984) (recalled). */
export const LAG_ONE = [
  [0.567, 0.086, -0.002],
  [0.253, 0.504, -0.05],
  [-0.006, -0.039, 0.244],
] as const;
export const DRIVE = [
  [0.781, 0, 0],
  [0.328, 0.637, 0],
  [0.238, -0.341, 0.873],
] as const;

/** Places of the stations: along the valley, from the river [m], height added to the ground for the one on a knoll. Names invented. */
const PLACES = [
  { code: 'AV-HD', name: 'Headworks', along: 900, across: 330 },
  { code: 'AV-NB', name: 'North Bench', along: 9400, across: 2300 },
  { code: 'AV-WB', name: 'Willow Bottom', along: 14800, across: -420 },
  { code: 'AV-SB', name: 'South Bench', along: 17600, across: -3000 },
  { code: 'AV-HL', name: 'Highline', along: 24400, across: 6800 },
  { code: 'AV-TL', name: 'Tail Meadow', along: 29200, across: 700 },
] as const;

function demoSites(): Site[] {
  return PLACES.map(({ code, name, along, across }) => {
    const point = planeFromValley(along, riverAcross(along) + across);
    const [longitude, latitude] = lonLat(point);
    return { code, name, longitude, latitude, elevation: Math.round(elevationAt(point)), windHeight: 2 };
  });
}

/**
 * Daily observations of all stations, in sensor resolution, with the outages a real network has (NaN).
 *
 * Shape: each variable [site × day]. Solar radiation never exceeds clear-sky radiation (FAO-56 Eq. 37); minimum stays below maximum temperature.
 *
 * @param seed any 32-bit integer
 */
export function demoWeather(seed: number): SiteObservations {
  const sites = demoSites();
  const first = dayNumber(DEMO_START);
  const dayCount = dayNumber(DEMO_END) - first + 1;
  const random = mulberry32(seed ^ 0x3ea7);
  const values = emptyValues(sites.length * dayCount);
  let states = sites.map(startState);
  for (let day = -30; day < dayCount; day++) {
    const shared = drawNoise(random);
    states = states.map((state, s) => nextState({ state, site: sites[s], day: first + day, noise: mixNoise(shared, drawNoise(random)) }));
    for (let s = 0; day >= 0 && s < states.length; s++) record(values, s * dayCount + day, states[s]);
  }
  demoOutages(values, dayCount);
  return { sites, startDate: DEMO_START, dayCount, values };
}

interface Noise {
  readonly rain: number;
  readonly depth: number;
  readonly residual: readonly [number, number, number];
  readonly wind: number;
  readonly dew: number;
}

function drawNoise(random: Random): Noise {
  const draw = () => normalDeviate(random);
  return { rain: draw(), depth: draw(), residual: [draw(), draw(), draw()], wind: draw(), dew: draw() };
}

/** Standard normal noise of one station: part shared by all, part its own, so that two stations correlate as stated. */
function mixNoise(shared: Noise, own: Noise): Noise {
  const mix = (a: number, b: number, correlation: number) => Math.sqrt(correlation) * a + Math.sqrt(1 - correlation) * b;
  const { rain, residual, wind } = BETWEEN_STATIONS;
  const residuals = [0, 1, 2].map((k) => mix(shared.residual[k], own.residual[k], residual)) as [number, number, number];
  return {
    rain: mix(shared.rain, own.rain, rain),
    depth: mix(shared.depth, own.depth, rain),
    residual: residuals,
    wind: mix(shared.wind, own.wind, wind),
    dew: mix(shared.dew, own.dew, residual),
  };
}

/** One station on one day. */
interface State {
  readonly wet: boolean;
  readonly residual: readonly [number, number, number];
  readonly windResidual: number;
  readonly airTemperatureMax: number;
  readonly airTemperatureMin: number;
  readonly dewPoint: number;
  readonly windSpeed: number;
  readonly solarRadiation: number;
  readonly precipitation: number;
}

function startState(): State {
  const weather = { airTemperatureMax: 0, airTemperatureMin: 0, dewPoint: 0, windSpeed: 0, solarRadiation: 0, precipitation: 0 };
  return { wet: false, residual: [0, 0, 0], windResidual: 0, ...weather };
}

function nextState({ state, site, day, noise }: { state: State; site: Site; day: DayNumber; noise: Noise }): State {
  const j = dayOfYear(day);
  const wet = normalShare(noise.rain) < harmonicAt(state.wet ? RAIN.wetAfterWet : RAIN.wetAfterDry, j);
  const residual = nextResidual(state.residual, noise.residual);
  const windResidual = WIND.persistence * state.windResidual + Math.sqrt(1 - WIND.persistence ** 2) * noise.wind;
  const height = site.elevation - ELEVATION.reference;
  const depth = -harmonicAt(RAIN.meanDepth, j) * (1 + ELEVATION.rain * height) * Math.log(1 - normalShare(noise.depth));
  return {
    wet,
    residual,
    windResidual,
    ...temperatures({ j, wet, residual, height, dew: noise.dew }),
    windSpeed: windSpeed(j, windResidual),
    solarRadiation: clearness(j, wet, residual[2]) * clearSkyRadiation(sunDay(site.latitude, j).extraterrestrialRadiation, site.elevation),
    precipitation: wet ? Math.max(0.2, depth) : 0,
  };
}

/** χ(t) = A χ(t−1) + B ε(t). Source: Richardson (1981), Eq. for the residual series. */
function nextResidual(last: readonly number[], noise: readonly number[]): [number, number, number] {
  const row = (k: number) => [0, 1, 2].reduce((sum, m) => sum + LAG_ONE[k][m] * last[m] + DRIVE[k][m] * noise[m], 0);
  return [row(0), row(1), row(2)];
}

/** Warm half days from the harmonics; the two temperatures keep at least 2 °C apart. */
function temperatures(input: { j: number; wet: boolean; residual: readonly number[]; height: number; dew: number }) {
  const { j, wet, residual, height, dew } = input;
  const of = (normal: typeof MAXIMUM_TEMPERATURE, deviate: number) =>
    harmonicAt(normal.dry, j) + (wet ? normal.wetShift : 0) + deviate * harmonicAt(normal.deviation, j) + ELEVATION.temperature * height;
  const airTemperatureMax = of(MAXIMUM_TEMPERATURE, residual[0]);
  const airTemperatureMin = Math.min(of(MINIMUM_TEMPERATURE, residual[1]), airTemperatureMax - 2);
  const depression = wet ? DEW_POINT_DEPRESSION.wet : harmonicAt(DEW_POINT_DEPRESSION.dry, j);
  const dewPoint = airTemperatureMin - Math.max(0.1, depression + DEW_POINT_DEPRESSION.noise * dew);
  return { airTemperatureMax, airTemperatureMin, dewPoint };
}

function clearness(j: number, wet: boolean, deviate: number): number {
  const mean = harmonicAt(wet ? CLEARNESS.wet : CLEARNESS.dry, j);
  return Math.min(1, Math.max(0.15, mean + deviate * CLEARNESS.deviation[wet ? 'wet' : 'dry']));
}

/** Lognormal about the mean of the day of year. */
function windSpeed(j: number, deviate: number): number {
  const spread = Math.sqrt(Math.log(1 + WIND.variation ** 2));
  return Math.max(0.3, harmonicAt(WIND.mean, j) * Math.exp(spread * deviate - (spread * spread) / 2));
}

/**
 * Standard normal distribution function.
 *
 * Source: Abramowitz & Stegun (1964), 26.2.17, absolute error below 7.5 × 10⁻⁸.
 * @example normalShare(0) // 0.5
 */
export function normalShare(z: number): number {
  const t = 1 / (1 + 0.2316419 * Math.abs(z));
  const tail =
    (Math.exp(-(z * z) / 2) / Math.sqrt(2 * Math.PI)) *
    t *
    (0.31938153 + t * (-0.356563782 + t * (1.781477937 + t * (-1.821255978 + t * 1.330274429))));
  return z >= 0 ? 1 - tail : tail;
}

/** Written as the logger would: tenths, radiation in hundredths and never rounded up. */
function record(values: DemoValues, at: number, state: State): void {
  values.air_temperature_max_c[at] = tenths(state.airTemperatureMax);
  values.air_temperature_min_c[at] = tenths(state.airTemperatureMin);
  values.dew_point_c[at] = tenths(state.dewPoint);
  values.wind_speed_m_s[at] = tenths(state.windSpeed);
  values.solar_radiation_mj_m2_d[at] = Math.floor(state.solarRadiation * 100) / 100;
  values.precipitation_mm[at] = tenths(state.precipitation);
}

function tenths(value: number): number {
  return Math.round(value * 10) / 10;
}
