/** Shapes that several answers share. Every number that leaves the process carries its unit in its name. */
import { z } from 'zod';

export const isoDate = z
  .string()
  .regex(/^\d{4}-\d{2}-\d{2}$/, 'expected YYYY-MM-DD')
  .meta({ description: 'civil date in the district’s time zone' });
export const unitSystem = z.enum(['metric', 'us']);
export const periodKind = z.enum(['day', 'week', 'month', 'season']);
export const role = z.enum(['manager', 'operator', 'regulator', 'grower']);
export const scope = z.enum(['read', 'write', 'administer']);
const severity = z.enum(['error', 'warning', 'note']);

export const finding = z
  .object({
    severity,
    code: z.string(),
    message: z.string(),
    file: z.string().optional(),
    row: z.number().int().optional(),
    column: z.string().optional(),
    value: z.string().optional(),
    limit: z.string().optional(),
    advice: z.string().optional(),
  })
  .meta({ id: 'Finding' });

export const problem = z
  .object({
    type: z.string(),
    title: z.string(),
    status: z.number().int(),
    detail: z.string(),
    instance: z.string().optional(),
    findings: z.array(finding).optional(),
  })
  .meta({ id: 'Problem', description: 'RFC 9457 problem details' });

/** A page of a list: `next_cursor` is null on the last page. */
export function pageOf<T extends z.ZodType>(item: T) {
  return z.object({ items: z.array(item), next_cursor: z.string().nullable(), total: z.number().int() });
}

const number = z.number().nullable();
export const nullableNumber = number;

/** One equation of a working with its numbers put in, as the code evaluated it. */
export const workingStep = z.object({
  part: z.string(),
  symbol: z.string(),
  name: z.string(),
  expression: z.string(),
  inputs: z.array(z.object({ symbol: z.string(), value: number, unit: z.string() })),
  result: number,
  unit: z.string(),
  source: z.string(),
  strip: z.string().optional(),
});
