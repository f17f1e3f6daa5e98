/**
 * One night at one station: from the evening to the lowest air temperature, with its error. The same code computes and writes the working.
 */
import { quantity, type Trace } from '../base/working.ts';
import { atmosphericPressure } from './air.ts';
import { bruntMinimum, condensationShare, FROST_GROUNDS, type FrostGroundName, thermalAdmittance } from './frost-cooling.ts';
import { saturationPoint } from './frost-humidity.ts';
import { type MinimumLine, minimumByLine } from './frost-regression.ts';
import { clearNightNetRadiation, type SkyFormula } from './frost-sky.ts';
import { traceSky } from './frost-sky-working.ts';
import { actualVapourPressureFromDewPoint } from './humidity.ts';

/** What is known at sunset. */
export interface Evening {
  /** [°C] */
  readonly airTemperature: number;
  /** over water [°C] */
  readonly dewPoint: number;
  /** of the night, at 2 m [m s⁻¹] */
  readonly windSpeed: number;
  /** what cloud leaves of the loss under a clear sky, 0–1 */
  readonly cloudFactor: number;
}

/** Least cloud factor and most wind of a clear, calm night; nights of either kind are learnt from apart. Choice of ours. */
export const CLEAR_NIGHT = { cloudFactor: 0.6, windSpeed: 3 } as const;
/**
 * Error where a station has too short a record to tell it [°C]. Source: the square-root law against fourteen stations of the U.S. Climate Reference
 * Network in spring 2020, median of their errors, rounded (own comparison, shown under Methods).
 */
export const ASSUMED_ERROR = 4;
export type MinimumMethod = 'brunt' | 'regression';

/** How a night is computed. */
export interface NightOptions {
  readonly sky: SkyFormula;
  readonly ground: FrostGroundName;
  /** `auto`: the station's own line where there is one, else the square-root law */
  readonly method: 'auto' | 'brunt';
}

/** What a station's record adds. */
export interface StationRecord {
  readonly line: MinimumLine | null;
  /** root mean squared error of the square-root law on past nights of the same kind [°C]; NaN without them */
  readonly bruntError: number;
}

/** The night as it is expected. */
export interface NightEstimate {
  /** [W m⁻²] */
  readonly netRadiation: number;
  /** by the square-root law [°C] */
  readonly brunt: number;
  /** by the station's own line [°C]; NaN without one */
  readonly regression: number;
  readonly method: MinimumMethod;
  /** [°C] */
  readonly minimum: number;
  /** root mean squared error of the method [°C] */
  readonly error: number;
  /** `record`: of past nights; `assumed`: none to tell it */
  readonly errorFrom: 'record' | 'assumed';
}

/** A night with no cloud to speak of and little wind. @example isClearNight({ airTemperature: 5, dewPoint: 0, windSpeed: 1, cloudFactor: 1 }) // true */
export function isClearNight({ windSpeed, cloudFactor }: Evening): boolean {
  return cloudFactor >= CLEAR_NIGHT.cloudFactor && windSpeed <= CLEAR_NIGHT.windSpeed;
}

/**
 * Net radiation at sunset: clear-sky loss times the cloud factor.
 *
 * @returns Rn [W m⁻²]
 * @example eveningNetRadiation({ airTemperature: 0, dewPoint: 0, windSpeed: 1, cloudFactor: 0.5 }, 'fao56') // -36.4
 * Source: as `clearNightNetRadiation`; cloud factor FAO-56 Eq. 39.
 */
export function eveningNetRadiation({ airTemperature, dewPoint, cloudFactor }: Evening, sky: SkyFormula): number {
  return clearNightNetRadiation(sky, airTemperature, actualVapourPressureFromDewPoint(dewPoint)) * cloudFactor;
}

/**
 * The minimum of the night at a station.
 *
 * Missing: NaN in the evening gives NaN out.
 *
 * @param place elevation [m] and length of the night [h]
 * @param trace takes the steps when the working is asked for
 * @param strip name of the station in the working
 */
export function nightEstimate(
  evening: Evening,
  place: { readonly elevation: number; readonly nightLength: number },
  record: StationRecord,
  options: NightOptions,
  trace: Trace | null = null,
  strip?: string,
): NightEstimate {
  const { airTemperature, dewPoint } = evening;
  const netRadiation = eveningNetRadiation(evening, options.sky);
  const pressure = atmosphericPressure(place.elevation);
  const admittance = thermalAdmittance(FROST_GROUNDS[options.ground]);
  const brunt = bruntMinimum({ airTemperature, dewPoint, netRadiation, admittance, nightLength: place.nightLength, pressure });
  const regression = record.line ? minimumByLine(record.line, airTemperature, dewPoint) : Number.NaN;
  const method = record.line && options.method === 'auto' ? 'regression' : 'brunt';
  const known = method === 'regression' ? (record.line?.error ?? Number.NaN) : record.bruntError;
  const estimate: NightEstimate = {
    ...{ netRadiation, brunt, regression, method },
    minimum: method === 'regression' ? regression : brunt,
    error: Number.isNaN(known) ? ASSUMED_ERROR : known,
    errorFrom: Number.isNaN(known) ? 'assumed' : 'record',
  };
  if (trace) traceNight(trace, { evening, place, record, options, estimate, pressure, admittance, strip });
  return estimate;
}

interface Told {
  readonly evening: Evening;
  readonly place: { readonly nightLength: number };
  readonly record: StationRecord;
  readonly options: NightOptions;
  readonly estimate: NightEstimate;
  readonly pressure: number;
  readonly admittance: number;
  readonly strip?: string;
}

function traceNight(trace: Trace, told: Told): void {
  const { evening, options, estimate, strip } = told;
  const vapour = actualVapourPressureFromDewPoint(evening.dewPoint);
  trace.step({
    ...{ part: 'evening', symbol: 'ea', name: 'vapour pressure at sunset' },
    expression: '0.6108 exp[17.27 Td / (Td + 237.3)]',
    inputs: [quantity('Td', evening.dewPoint, '°C')],
    ...{ result: vapour, unit: 'kPa', source: 'FAO-56 Eq. 14', strip },
  });
  traceSky(trace, {
    ...{ part: 'evening', when: 'at sunset', formula: options.sky, symbol: 'T0', strip },
    ...{ airTemperature: evening.airTemperature, vapourPressure: vapour, cloudFactor: evening.cloudFactor },
    netRadiation: estimate.netRadiation,
  });
  if (estimate.method === 'brunt') traceBrunt(trace, told);
  else traceLine(trace, told);
}

function traceBrunt(trace: Trace, { evening, place, estimate, options, pressure, admittance, strip }: Told): void {
  const saturation = Math.min(saturationPoint(evening.dewPoint), evening.airTemperature);
  const fall = ((2 / Math.sqrt(Math.PI)) * Math.max(0, -estimate.netRadiation) * Math.sqrt(place.nightLength * 3600)) / admittance;
  const common = { part: 'night', strip };
  trace.step({
    ...{ ...common, symbol: 'μ', name: `thermal admittance of the ground, ${FROST_GROUNDS[options.ground].name}` },
    expression: 'C √κ',
    inputs: [
      quantity('C', FROST_GROUNDS[options.ground].heatCapacity * 1e6, 'J m⁻³ °C⁻¹'),
      quantity('κ', FROST_GROUNDS[options.ground].diffusivity, 'm² s⁻¹'),
    ],
    ...{ result: admittance, unit: 'J m⁻² °C⁻¹ s⁻⁰·⁵', source: FROST_GROUNDS[options.ground].source },
  });
  trace.step({
    ...{ ...common, symbol: 'ΔT', name: 'fall of temperature if all heat comes from the ground' },
    expression: '(2 / √π) |Rn| √(3600 h) / μ',
    inputs: [
      quantity('Rn', estimate.netRadiation, 'W m⁻²'),
      quantity('h', place.nightLength, 'h'),
      quantity('μ', admittance, 'J m⁻² °C⁻¹ s⁻⁰·⁵'),
    ],
    ...{ result: fall, unit: '°C', source: 'Brunt (1941), square-root law (recalled)' },
  });
  trace.step({
    ...{ ...common, symbol: 'Tf', name: evening.dewPoint < 0 ? 'frost point' : 'dew point' },
    expression: evening.dewPoint < 0 ? '265.5 x / (21.875 − x), x = ln(ea / 0.6108), at most T0' : 'Td, at most T0',
    inputs: [quantity('ea', actualVapourPressureFromDewPoint(evening.dewPoint), 'kPa'), quantity('T0', evening.airTemperature, '°C')],
    ...{ result: saturation, unit: '°C', source: 'Murray (1967) (recalled)' },
  });
  const slowed = evening.airTemperature - fall < saturation;
  const share = condensationShare(saturation, pressure);
  if (slowed) {
    trace.step({
      ...{ ...common, symbol: 's', name: 'share of the cooling left once dew or frost forms' },
      expression: 'γ / (γ + Δ(Tf))',
      inputs: [quantity('P', pressure, 'kPa'), quantity('Tf', saturation, '°C')],
      ...{ result: share, unit: '1', source: 'FAO-56 Eq. 8, 13; Monteith & Unsworth (1990) (recalled)' },
    });
  }
  trace.step({
    ...{ ...common, symbol: 'Tmin', name: 'minimum at the station' },
    expression: slowed ? 'Tf − s [ΔT − (T0 − Tf)]' : 'T0 − ΔT',
    inputs: [
      quantity('T0', evening.airTemperature, '°C'),
      quantity('ΔT', fall, '°C'),
      ...(slowed ? [quantity('Tf', saturation, '°C'), quantity('s', share, '1')] : []),
    ],
    ...{ result: estimate.minimum, unit: '°C', source: 'Brunt (1941), square-root law (recalled)' },
  });
}

function traceLine(trace: Trace, { evening, record, estimate, strip }: Told): void {
  if (!record.line) return;
  const { ofAirTemperature, ofDewPoint, constant, nights } = record.line;
  trace.step({
    ...{
      part: 'night',
      symbol: 'Tmin',
      name: `minimum at the station, line fitted to ${nights} of its ${isClearNight(evening) ? 'clear, calm' : 'cloudy or windy'} nights, not above T0`,
    },
    expression: 'a T0 + b Td + c',
    inputs: [
      quantity('a', ofAirTemperature, '1'),
      quantity('T0', evening.airTemperature, '°C'),
      quantity('b', ofDewPoint, '1'),
      quantity('Td', evening.dewPoint, '°C'),
      quantity('c', constant, '°C'),
    ],
    ...{ result: estimate.minimum, unit: '°C', source: 'form after Allen (1957), Snyder & de Melo-Abreu (2005) (recalled)', strip },
  });
}
