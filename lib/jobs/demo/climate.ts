/**
 * The climate the demo weather is drawn from: invented numbers for a cool semi-arid valley. All harmonics peak in late July unless said.
 */

/** Mean and amplitude of a yearly cosine with its peak on a day of the year. */
interface Harmonic {
  readonly mean: number;
  readonly amplitude: number;
  readonly peakDay: number;
}

const SUMMER = 203;
const WINTER = 20;
const SPRING = 110;

/** °C at the reference elevation, on dry days; wet days are cooler by day and milder by night. */
export const MAXIMUM_TEMPERATURE = {
  dry: { mean: 20.3, amplitude: 14.2, peakDay: SUMMER },
  wetShift: -4.2,
  deviation: { mean: 3.7, amplitude: 1.1, peakDay: WINTER },
};
export const MINIMUM_TEMPERATURE = {
  dry: { mean: 2.9, amplitude: 11, peakDay: SUMMER },
  wetShift: 1.2,
  deviation: { mean: 3.7, amplitude: 0.9, peakDay: WINTER },
};
/** Solar radiation over clear-sky radiation. */
export const CLEARNESS = {
  dry: { mean: 0.87, amplitude: 0.05, peakDay: SUMMER },
  wet: { mean: 0.56, amplitude: 0.06, peakDay: SUMMER },
  deviation: { dry: 0.1, wet: 0.17 },
};

/** Chance of a wet day after a dry and after a wet day; mean depth of a wet day [mm]. */
export const RAIN = {
  wetAfterDry: { mean: 0.105, amplitude: 0.04, peakDay: WINTER },
  wetAfterWet: { mean: 0.4, amplitude: 0.06, peakDay: WINTER },
  meanDepth: { mean: 4.4, amplitude: 0.6, peakDay: SUMMER },
};

/** m s⁻¹ at 2 m; coefficient of variation and day-to-day correlation of the logarithm. */
export const WIND = { mean: { mean: 2.05, amplitude: 0.55, peakDay: SPRING }, variation: 0.26, persistence: 0.35 };

/** Dew point below the minimum temperature [°C]: least in winter, most in summer; almost none on wet days. */
export const DEW_POINT_DEPRESSION = { dry: { mean: 2.2, amplitude: 1.3, peakDay: SUMMER }, wet: 0.4, noise: 1.1 };

/** Elevation the harmonics hold for [m], change of temperature [°C m⁻¹] (ISA) and of mean rain depth [m⁻¹] with height. */
export const ELEVATION = { reference: 1450, temperature: -0.0065, rain: 0.0004 };

/** Correlation of the driving noise between two stations. */
export const BETWEEN_STATIONS = { rain: 0.92, residual: 0.96, wind: 0.8 };

/** @example harmonicAt({ mean: 10, amplitude: 5, peakDay: 203 }, 203) // 15 */
export function harmonicAt({ mean, amplitude, peakDay }: Harmonic, dayOfYear: number): number {
  return mean + amplitude * Math.cos((2 * Math.PI * (dayOfYear - peakDay)) / 365);
}
