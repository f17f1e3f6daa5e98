/** Answers about how weather is carried from stations to parcels, and how far off that is. */
import { z } from 'zod';
import { isoDate, nullableNumber as n } from './common.ts';

/** What is carried: name in the answers, term, and unit of every error of it. */
export const CARRIED_VARIABLES = {
  air_temperature_max_c: { series: 'airTemperatureMax', term: 'Maximum air temperature', unit: '°C' },
  air_temperature_min_c: { series: 'airTemperatureMin', term: 'Minimum air temperature', unit: '°C' },
  vapour_pressure_kpa: { series: 'actualVapourPressure', term: 'Actual vapour pressure', unit: 'kPa' },
  solar_radiation_mj_m2_d: { series: 'solarRadiation', term: 'Solar radiation', unit: 'MJ m⁻² d⁻¹' },
  wind_speed_2m_m_s: { series: 'windSpeed2m', term: 'Wind speed at 2 m', unit: 'm/s' },
  precipitation_mm: { series: 'precipitation', term: 'Rain', unit: 'mm' },
  reference_et_mm: { series: 'referenceEt', term: 'Reference ET', unit: 'mm' },
} as const;
export type CarriedVariable = keyof typeof CARRIED_VARIABLES;
export const CARRIED_NAMES = Object.keys(CARRIED_VARIABLES) as [CarriedVariable, ...CarriedVariable[]];

const errors = {
  n: z.number().int().meta({ description: 'measured values that were held against an estimate' }),
  bias: n.meta({ description: 'mean of estimate less measurement, in the unit of the variable' }),
  rmse: n.meta({ description: 'root of the mean squared error, in the unit of the variable' }),
};

const methodErrors = z.object({
  method: z.string(),
  name: z.string(),
  chosen: z.boolean().meta({ description: 'lowest RMSE: what a run with automatic interpolation takes' }),
  ...errors,
  mae: n.meta({ description: 'mean absolute error, in the unit of the variable' }),
  msdr: n.meta({ description: 'kriging: mean of squared error over kriging variance; 1 where the variance tells the error rightly' }),
});
export type MethodErrors = z.infer<typeof methodErrors>;

const variogram = z
  .object({
    trend: z.string().meta({ description: 'elevation trend taken off before: none, lapse-rate or fitted' }),
    model: z.enum(['nugget', 'linear', 'spherical', 'exponential', 'gaussian']),
    nugget: z.number().meta({ description: 'in the square of the unit of the variable, as every semivariance here' }),
    partial_sill: z.number(),
    range_km: n.meta({ description: 'the parameter a: 1 − exp(−h/a), 1 − exp(−(h/a)²); a linear model rises by the partial sill over it' }),
    classes: z.array(z.object({ pair_count: z.number().int(), distance_km: z.number(), semivariance: z.number() })),
  })
  .meta({ id: 'Semivariogram' });
export type Semivariogram = z.infer<typeof variogram>;

export const carriedVariable = z
  .object({
    variable: z.enum(CARRIED_NAMES),
    term: z.string(),
    unit: z.string(),
    gradient_per_km: n.meta({ description: 'fitted change with elevation, unit of the variable per 1000 m' }),
    methods: z.array(methodErrors),
    variograms: z.array(variogram),
    shown_method: z.string().nullable().meta({ description: 'method of the errors by site: the one asked for, else the chosen one' }),
    site_errors: z.array(z.object({ site: z.string(), ...errors })),
  })
  .meta({ id: 'CarriedVariable' });
export type CarriedVariableAnswer = z.infer<typeof carriedVariable>;

export const interpolationAnswer = z
  .object({
    source: z.string(),
    from: isoDate,
    to: isoDate,
    computed_at: z.string(),
    sites: z.array(z.object({ code: z.string(), name: z.string(), longitude: z.number(), latitude: z.number(), elevation_m: n })),
    items: z.array(carriedVariable),
  })
  .meta({ id: 'InterpolationCheck' });
export type InterpolationAnswer = z.infer<typeof interpolationAnswer>;

/** One method of one variable as a flat row: what CSV holds. */
export const interpolationRow = z.object({
  variable: z.string(),
  unit: z.string(),
  ...methodErrors.shape,
  variogram_model: z.string().nullable(),
  nugget: n,
  partial_sill: n,
  range_km: n,
});

export function interpolationRows({ items }: InterpolationAnswer): z.infer<typeof interpolationRow>[] {
  return items.flatMap(({ variable, unit, methods, variograms }) =>
    methods.map((method) => {
      const fitted = method.method.startsWith('kriging') ? variograms.find(({ trend }) => trend === trendOf(method.method)) : undefined;
      return {
        ...{ variable, unit, ...method },
        variogram_model: fitted?.model ?? null,
        nugget: fitted?.nugget ?? null,
        partial_sill: fitted?.partial_sill ?? null,
        range_km: fitted?.range_km ?? null,
      };
    }),
  );
}

/** Elevation trend in the name of a method. @example trendOf('kriging-fitted') // 'fitted' */
export function trendOf(method: string): 'none' | 'lapse-rate' | 'fitted' {
  if (method.endsWith('-lapse-rate')) return 'lapse-rate';
  return method.endsWith('-fitted') ? 'fitted' : 'none';
}
