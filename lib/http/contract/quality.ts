/** Shapes of the quality desk. Values and limits of flags have the unit that `unit` names, because every variable has its own. */
import { z } from 'zod';
import { RULES, type Rule } from '../../weather/quality/rules.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../weather/variable.ts';
import { isoDate, nullableNumber as n } from './common.ts';

export const weatherVariable = z.enum(Object.keys(WEATHER_VARIABLES) as [WeatherVariable, ...WeatherVariable[]]);
export const rule = z.enum(Object.keys(RULES) as [Rule, ...Rule[]]);
export const flagState = z.enum(['open', 'accepted', 'corrected', 'rejected']);
export const severity = z.enum(['note', 'suspect', 'impossible']);
export const act = z.enum(['accept', 'factor', 'offset', 'replace', 'reject', 'aridity']);

export const flagAnswer = z
  .object({
    source: z.string(),
    site: z.string(),
    site_name: z.string(),
    variable: z.string(),
    rule: z.string(),
    rule_name: z.string(),
    first_day: isoDate,
    last_day: isoDate,
    day_count: z.number().int(),
    severity,
    value: n.meta({ description: 'what broke the rule, in `unit`' }),
    limit: n.meta({ description: 'the limit it broke, in `unit`' }),
    unit: z.string(),
    detail: z.string().meta({ description: 'what was found, with value, limit and advice' }),
    rule_source: z.string().meta({ description: 'where the rule is published' }),
    state: flagState,
    correction_id: z.string().nullable().meta({ description: 'the decision that settled it' }),
    figures: z.record(z.string(), z.unknown()).meta({ description: 'further figures of the rule' }),
  })
  .meta({ id: 'WeatherFlag' });
export type FlagAnswer = z.infer<typeof flagAnswer>;

export const correctionRequest = z
  .strictObject({
    site: z.string().min(1).max(120),
    source: z.string().min(1).max(120).optional().meta({ description: 'where several sources have a site of this code' }),
    variable: weatherVariable.optional().meta({ description: 'not needed for `aridity`' }),
    from: isoDate,
    to: isoDate,
    act: act.meta({
      description:
        'accept: the values stand; factor, offset: raw × or + amount; replace: amount, or values by day; reject: the days are gaps; ' +
        'aridity: temperature and dew point brought to a reference surface with Ko = amount (FAO-56 Annex 6)',
    }),
    amount: z.number().optional().meta({ description: 'factor, or offset or value in the unit of the variable, or Ko in °C' }),
    values: z.record(isoDate, z.number()).optional().meta({ description: 'replacement by day, for every day of the period' }),
    rule: z
      .string()
      .max(60)
      .optional()
      .meta({ description: 'rule of the flag it settles; left out: every rule on single days within the period' }),
    reason: z.string().trim().min(3, 'say why, in at least three letters').max(1000),
  })
  .meta({ id: 'WeatherCorrectionRequest' });

export const correctionAnswer = z
  .object({
    id: z.string(),
    source: z.string(),
    site: z.string(),
    site_name: z.string(),
    variable: z.string(),
    from: isoDate,
    to: isoDate,
    act,
    amount: n,
    unit: z.string().meta({ description: 'unit of `amount`' }),
    values: z.record(z.string(), z.number()).nullable(),
    rule: z.string().nullable(),
    reason: z.string(),
    created_by: z.string().nullable(),
    created_at: z.string(),
    undone_by: z.string().nullable(),
    undone_at: z.string().nullable(),
    standing: z.boolean(),
  })
  .meta({ id: 'WeatherCorrection' });
export type CorrectionAnswer = z.infer<typeof correctionAnswer>;

export const previewAnswer = z
  .object({
    variable: z.string(),
    unit: z.string(),
    day_count: z.number().int(),
    changed_days: z.number().int(),
    reference_et_before_mm: n.meta({ description: 'sum over the days that have reference ET before and after' }),
    reference_et_after_mm: n,
    truncated: z.boolean().meta({ description: 'more days than are listed; the counts and sums are of all' }),
    days: z.array(
      z.object({
        date: isoDate,
        raw: n,
        standing: n.meta({ description: 'under the decisions that stand now' }),
        corrected: n,
        reference_et_before_mm: n,
        reference_et_after_mm: n,
      }),
    ),
  })
  .meta({ id: 'WeatherCorrectionPreview' });
export type PreviewAnswer = z.infer<typeof previewAnswer>;

const named = { site: z.string() };

export const checkAnswer = z
  .object({
    source: z.string(),
    kind: z.enum(['stations', 'grid']),
    checked_at: z.string().nullable().meta({ description: 'null: not yet' }),
    checked: z.boolean().meta({ description: 'false: cells of a grid have no instruments and are not checked' }),
    first_day: isoDate.nullable(),
    last_day: isoDate.nullable(),
    sites: z.number().int(),
    open: z.object({ impossible: z.number().int(), suspect: z.number().int(), note: z.number().int() }),
    settled: z.number().int(),
    counts: z.array(z.object({ ...named, rule: z.string(), severity, state: flagState, flags: z.number().int(), days: z.number().int() })),
    pyranometers: z.array(
      z.object({
        ...named,
        clear_day_ratio: n,
        years: z.array(z.object({ year: z.number().int(), ratio: z.number(), windows: z.number().int() })),
        drift_pct_per_year: n,
        drift_error_pct_per_year: n,
        drifting: z.boolean(),
        suggested_factor: n,
      }),
    ),
    aridity_offers: z.array(
      z.object({
        ...named,
        from: isoDate,
        to: isoDate,
        months: z.number().int(),
        ko_c: z.number(),
        /** a difference of temperatures, not a temperature */
        minimum_less_dew_point_k: z.number(),
        aridity_index: z.number(),
        reference_et_before_mm: z.number(),
        reference_et_after_mm: z.number(),
        made: z.boolean().meta({ description: 'a standing correction covers it' }),
      }),
    ),
  })
  .meta({ id: 'WeatherCheck' });
export type CheckAnswer = z.infer<typeof checkAnswer>;
