import { z } from 'zod';

const text = (most: number) => z.string().trim().min(1).max(most);

export const feedRequest = z
  .strictObject({
    name: text(120).meta({ description: 'also the name of the weather source it fills, unless the options name another' }),
    kind: z.enum(['weather', 'stations']).default('weather'),
    from: z.enum(['url', 'folder']),
    template: text(1000).meta({
      description: 'address, or file pattern inside the district’s watched folder; {YYYY} {YY} {MM} {DD} {DDD} stand for the day asked for',
    }),
    options: z.record(z.string(), z.unknown()).default({}).meta({ description: 'ImportOptions of every file it brings' }),
    schedule: text(60).meta({ description: 'five fields of cron in the district’s zone: minute, hour, day of month, month, weekday' }),
    look_back_days: z.number().int().min(0).max(60).default(3).meta({ description: 'days before today that are asked for again' }),
    enabled: z.boolean().default(true),
    apply_automatically: z.boolean().default(true).meta({ description: 'files without errors are applied at once' }),
  })
  .meta({ id: 'FeedRequest' });
export type FeedRequest = z.infer<typeof feedRequest>;

export const feedPatch = z
  .strictObject({
    name: text(120),
    template: text(1000),
    options: z.record(z.string(), z.unknown()),
    schedule: text(60),
    look_back_days: z.number().int().min(0).max(60),
    enabled: z.boolean(),
    apply_automatically: z.boolean(),
  })
  .partial()
  .meta({ id: 'FeedPatch' });
export type FeedPatch = z.infer<typeof feedPatch>;

export const feedAnswer = z
  .object({
    id: z.string(),
    name: z.string(),
    kind: z.enum(['weather', 'stations']),
    from: z.enum(['url', 'folder']),
    template: z.string(),
    options: z.record(z.string(), z.unknown()),
    schedule: z.string(),
    look_back_days: z.number().int(),
    enabled: z.boolean(),
    apply_automatically: z.boolean(),
    next_at: z.string().nullable(),
    failures: z.number().int().meta({ description: 'turns in a row with a fault' }),
    /** the last thing that happened */
    last_at: z.string().nullable(),
    last_outcome: z.string().nullable(),
    last_error: z.string().nullable(),
    created_by: z.string().nullable(),
  })
  .meta({ id: 'Feed' });
export type FeedAnswer = z.infer<typeof feedAnswer>;

export const fetchAnswer = z
  .object({
    id: z.string(),
    address: z.string(),
    at: z.string(),
    outcome: z.enum(['new', 'changed', 'unchanged', 'absent', 'failed', 'refused']),
    status: z.number().int().nullable(),
    size_bytes: z.number().nullable(),
    sha256: z.string().nullable(),
    import_id: z.string().nullable(),
    import_state: z.string().nullable().meta({ description: 'what has become of the import; "ready" waits for a person' }),
    error: z.string().nullable(),
  })
  .meta({ id: 'FeedFetch' });
export type FetchAnswer = z.infer<typeof fetchAnswer>;
