/**
 * One night at the plants of a parcel: leaf temperature, when sprinkling would start, and the water it would take. The same code computes and
 * writes the working.
 */
import { STEFAN_BOLTZMANN_SI } from '../base/constants.ts';
import { quantity, type Trace } from '../base/working.ts';
import { atmosphericPressure } from './air.ts';
import { hoursUntil } from './frost-cooling.ts';
import { airTemperatureOfWetBulb } from './frost-humidity.ts';
import {
  AIR_MOLAR_HEAT,
  LEAST_LEAF_WIND,
  leafHeatConductance,
  leafTemperature,
  radiativeConductance,
  USUAL_LEAF_WIDTH,
} from './frost-leaf.ts';
import {
  applicationRate,
  type CropHeight,
  flowOfRate,
  heatOfFreezing,
  MELTING_HOURS,
  RATE_SOURCE,
  type Rotation,
  sprinklingHours,
} from './frost-protection.ts';
import { clearNightNetRadiation, type SkyFormula } from './frost-sky.ts';
import { traceSky } from './frost-sky-working.ts';
import { TENTH_DEVIATE } from './frost-stage.ts';
import { actualVapourPressureFromDewPoint, saturationVapourPressure } from './humidity.ts';

/** The night as it reaches the parcel from the stations. */
export interface ParcelNight {
  /** at sunset [°C] */
  readonly airTemperature: number;
  /** at sunset, over water [°C] */
  readonly dewPoint: number;
  /** of the night [m s⁻¹] */
  readonly windSpeed: number;
  readonly cloudFactor: number;
  /** lowest air temperature [°C] */
  readonly minimum: number;
  /** of the minimum [°C] */
  readonly error: number;
  /** [h] */
  readonly nightLength: number;
  /** [m] */
  readonly elevation: number;
}

/** Temperatures at the plants [°C]. */
export interface PlantNight {
  /** net radiation at the coldest hour [W m⁻²] */
  readonly netRadiation: number;
  readonly leaf: number;
  /** ends of the band: nine nights in ten are above the low end, one in ten above the high end */
  readonly low: number;
  readonly high: number;
  readonly leafLow: number;
  /** air temperature at which sprinkling starts and may stop */
  readonly start: number;
}

/**
 * Leaf temperature at the coldest hour with its band, and the start temperature of sprinkling.
 *
 * By then the air holds no more vapour than at saturation, so ea is that of the evening or e°(Tmin), whichever is less.
 *   band: Tmin ± 1.2816 × error, the same for leaf and air
 *
 * Missing: NaN in gives NaN out.
 *
 * Source: as `leafTemperature`, `clearNightNetRadiation` and `airTemperatureOfWetBulb`.
 */
export function plantNight(night: ParcelNight, sky: SkyFormula, trace: Trace | null = null): PlantNight {
  const { minimum, dewPoint, cloudFactor, windSpeed, error } = night;
  const vapour = Math.min(actualVapourPressureFromDewPoint(dewPoint), saturationVapourPressure(minimum));
  const netRadiation = clearNightNetRadiation(sky, minimum, vapour) * cloudFactor;
  const leaf = leafTemperature({ airTemperature: minimum, netRadiation, windSpeed, width: USUAL_LEAF_WIDTH });
  const half = TENTH_DEVIATE * error;
  const pressure = atmosphericPressure(night.elevation);
  // air with a dew point above freezing has wet surfaces at 0 °C only when it is at 0 °C itself
  const start = dewPoint >= 0 ? 0 : airTemperatureOfWetBulb(0, dewPoint, pressure);
  const found = { netRadiation, leaf, low: minimum - half, high: minimum + half, leafLow: leaf - half, start };
  if (trace) tracePlant(trace, night, { ...found, sky, vapour, pressure });
  return found;
}

/** Water for the night. */
export interface PlantProtection {
  /** [mm h⁻¹]; NaN beyond the table */
  readonly rate: number;
  /** [W m⁻²] */
  readonly heat: number;
  /** [L s⁻¹] */
  readonly flow: number;
  /** [h] */
  readonly hours: number;
  /** [m³] */
  readonly volume: number;
}

/**
 * Rate, flow and water of a night's sprinkling.
 *
 * @param area [m²]
 * Source: as `applicationRate`, `sprinklingHours` and `flowOfRate`.
 */
export function plantProtection(
  night: ParcelNight,
  start: number,
  given: { readonly area: number; readonly height: CropHeight; readonly rotation: Rotation },
  trace: Trace | null = null,
): PlantProtection {
  const rate = applicationRate({ minimum: night.minimum, windSpeed: night.windSpeed, height: given.height, rotation: given.rotation });
  const flow = flowOfRate(rate, given.area);
  const startHours = hoursUntil(night, start);
  const hours = sprinklingHours(startHours, night.nightLength);
  const found = { rate, heat: heatOfFreezing(rate), flow, hours, volume: (flow * 3600 * hours) / 1000 };
  if (trace) traceProtection(trace, night, { ...found, ...given, start, startHours });
  return found;
}

function tracePlant(trace: Trace, night: ParcelNight, found: PlantNight & { sky: SkyFormula; vapour: number; pressure: number }): void {
  const conductance = leafHeatConductance(night.windSpeed, USUAL_LEAF_WIDTH);
  const part = 'plant';
  trace.step({
    ...{ part, symbol: 'ea', name: 'vapour pressure at the coldest hour' },
    expression: 'the lesser of e°(Td) and e°(Tmin)',
    inputs: [quantity('Td', night.dewPoint, '°C'), quantity('Tmin', night.minimum, '°C')],
    ...{ result: found.vapour, unit: 'kPa', source: 'FAO-56 Eq. 11, 14' },
  });
  traceSky(trace, {
    ...{ part, when: 'at the coldest hour', formula: found.sky, symbol: 'Tmin' },
    ...{ airTemperature: night.minimum, vapourPressure: found.vapour, cloudFactor: night.cloudFactor },
    netRadiation: found.netRadiation,
  });
  trace.step({
    ...{ part, symbol: 'gHa', name: 'conductance of the air at one side of the leaf, wind taken as at least 0.2 m s⁻¹' },
    expression: '1.4 × 0.135 √(u / (0.72 w))',
    inputs: [quantity('u', Math.max(LEAST_LEAF_WIND, night.windSpeed), 'm s⁻¹'), quantity('w', USUAL_LEAF_WIDTH, 'm')],
    ...{ result: conductance, unit: 'mol m⁻² s⁻¹', source: 'Campbell & Norman (1998), Table 7.6 (recalled)' },
  });
  trace.step({
    ...{ part, symbol: 'gr', name: 'radiative conductance of one side' },
    expression: '4 σ (Tmin + 273.15)³ / cp',
    inputs: [
      quantity('σ', STEFAN_BOLTZMANN_SI, 'W m⁻² K⁻⁴'),
      quantity('Tmin', night.minimum, '°C'),
      quantity('cp', AIR_MOLAR_HEAT, 'J mol⁻¹ °C⁻¹'),
    ],
    ...{ result: radiativeConductance(night.minimum), unit: 'mol m⁻² s⁻¹', source: 'Campbell & Norman (1998), chapter 12 (recalled)' },
  });
  trace.step({
    ...{ part, symbol: 'Tl', name: 'temperature of a dry leaf or bud open to the sky' },
    expression: 'Tmin + Rn / [2 cp (gHa + gr)]',
    inputs: [
      quantity('Tmin', night.minimum, '°C'),
      quantity('Rn', found.netRadiation, 'W m⁻²'),
      quantity('cp', AIR_MOLAR_HEAT, 'J mol⁻¹ °C⁻¹'),
      quantity('gHa', conductance, 'mol m⁻² s⁻¹'),
      quantity('gr', radiativeConductance(night.minimum), 'mol m⁻² s⁻¹'),
    ],
    ...{ result: found.leaf, unit: '°C', source: 'Campbell & Norman (1998), chapter 14, no latent heat (recalled)' },
  });
  trace.step({
    ...{ part, symbol: 'Tl,low', name: 'low end of the band of the leaf: one night in ten is colder' },
    expression: 'Tl − 1.2816 E',
    inputs: [quantity('Tl', found.leaf, '°C'), quantity('E', night.error, '°C')],
    ...{ result: found.leafLow, unit: '°C', source: 'normal distribution of the error' },
  });
}

function traceProtection(
  trace: Trace,
  night: ParcelNight,
  found: PlantProtection & { area: number; height: CropHeight; rotation: Rotation; start: number; startHours: number },
): void {
  const part = 'protection';
  trace.step({
    ...{ part, symbol: 'Ts', name: 'air temperature at which sprinkling starts and may stop: wet bulb 0 °C' },
    expression: night.dewPoint >= 0 ? '0' : '[e°(0) − e°(Td)] / (0.00066 P)',
    inputs: [quantity('Td', night.dewPoint, '°C'), quantity('P', atmosphericPressure(night.elevation), 'kPa')],
    ...{ result: found.start, unit: '°C', source: 'psychrometer equation, FAO-56 Eq. 15' },
  });
  trace.step({
    ...{ part, symbol: 'r', name: `application rate, ${found.height} crop, sprinkler turning once in ${found.rotation} s` },
    expression: 'printed table at Tmin, straight lines between −2, −4, −6 °C',
    inputs: [quantity('Tmin', night.minimum, '°C'), quantity('u', night.windSpeed, 'm s⁻¹')],
    ...{ result: found.rate, unit: 'mm h⁻¹', source: RATE_SOURCE },
  });
  trace.step({
    ...{ part, symbol: 'q', name: 'heat given off while it freezes' },
    expression: 'Lf r / 3.6',
    inputs: [quantity('Lf', 334.5, 'kJ kg⁻¹'), quantity('r', found.rate, 'mm h⁻¹')],
    ...{ result: found.heat, unit: 'W m⁻²', source: 'latent heat of fusion' },
  });
  trace.step({
    ...{ part, symbol: 'Q', name: 'flow for the area' },
    expression: 'r A / 3600',
    inputs: [quantity('r', found.rate, 'mm h⁻¹'), quantity('A', found.area, 'm²')],
    ...{ result: found.flow, unit: 'L s⁻¹', source: 'definition' },
  });
  trace.step({
    ...{ part, symbol: 't', name: 'when the air reaches the start temperature, after sunset' },
    expression: 'h [(T0 − Ts) / (T0 − Tmin)]²',
    inputs: [
      quantity('h', night.nightLength, 'h'),
      quantity('T0', night.airTemperature, '°C'),
      quantity('Ts', found.start, '°C'),
      quantity('Tmin', night.minimum, '°C'),
    ],
    ...{ result: found.startHours, unit: 'h', source: 'square-root trend, Snyder & de Melo-Abreu (2005) (recalled)' },
  });
  trace.step({
    ...{ part, symbol: 'V', name: 'water of the night; none when the start temperature is not reached' },
    expression: '3.6 Q (h − t + m)',
    inputs: [
      quantity('Q', found.flow, 'L s⁻¹'),
      quantity('h', night.nightLength, 'h'),
      quantity('t', found.startHours, 'h'),
      quantity('m', MELTING_HOURS, 'h'),
    ],
    ...{ result: found.volume, unit: 'm³', source: 'm: common practice, no source' },
  });
}
