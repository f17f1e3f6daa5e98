/** The environment, read once through a schema. Nothing else in the product looks at process.env. */
import { z } from 'zod';

const flag = z
  .enum(['', '0', '1', 'true', 'false'])
  .default('')
  .transform((text) => text === '1' || text === 'true');

const schema = z.object({
  NODE_ENV: z.enum(['development', 'production', 'test']).default('production'),
  DATABASE_URL: z.url({ protocol: /^postgres(ql)?$/ }).optional(),
  TILLWATER_DATA: z.string().default('.tillwater'),
  TILLWATER_EMPTY: flag,
  /** set by the launcher for its web process */
  TILLWATER_DEMO_SHOWN: flag,
  TILLWATER_DEMO_TOKEN: z.string().min(20, 'TILLWATER_DEMO_TOKEN must have at least 20 characters').optional(),
  TILLWATER_DEMO_PASSWORD: z.string().min(10, 'TILLWATER_DEMO_PASSWORD must have at least 10 characters').optional(),
  TILLWATER_SECRET: z.string().min(32, 'TILLWATER_SECRET must have at least 32 characters').optional(),
  TILLWATER_URL: z.url().optional(),
  TILLWATER_WORKERS: z.coerce.number().int().min(0).max(64).default(1),
  TILLWATER_THREADS: z.coerce.number().int().min(1).max(64).optional(),
  TILLWATER_UPLOAD_LIMIT_MB: z.coerce.number().int().min(1).max(2000).default(200),
  /** memory a reader of one import may take */
  TILLWATER_READER_MEMORY_MB: z.coerce.number().int().min(128).max(65536).default(900),
  /** hosts and address ranges inside private networks that feeds may ask, with commas between */
  TILLWATER_FEED_HOSTS: z
    .string()
    .default('')
    .transform((text) =>
      text
        .split(',')
        .map((entry) => entry.trim())
        .filter((entry) => entry !== ''),
    ),
  /** folder whose subfolders, named by district code, feeds may watch */
  TILLWATER_FEED_FOLDER: z.string().optional(),
  HOST: z.string().default('127.0.0.1'),
  PORT: z.coerce.number().int().min(0).max(65535).default(3000),
  LOG_LEVEL: z.enum(['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent']).default('info'),
});

type Environment = z.infer<typeof schema>;

/**
 * Reads a set of variables.
 *
 * @throws Error naming each variable at fault, its value's fault and what is allowed.
 */
export function readEnvironment(source: Record<string, string | undefined>): Environment {
  const known = Object.fromEntries(Object.keys(schema.shape).map((key) => [key, source[key] === '' ? undefined : source[key]]));
  const result = schema.safeParse(known);
  if (result.success) return result.data;
  const lines = result.error.issues.map((issue) => `  ${issue.path.join('.')}: ${issue.message}`);
  throw new Error(`The environment cannot be used:\n${lines.join('\n')}\nSee the configuration table in README.md.`);
}

const held = globalThis as unknown as { tillwaterEnvironment?: Environment };

/** Has the environment read again at its next use: for the launcher, which adds to it, and for tests. */
export function rereadEnvironment(): void {
  held.tillwaterEnvironment = undefined;
}

/** The process's environment, read at first use. */
export function environment(): Environment {
  held.tillwaterEnvironment ??= readEnvironment(process.env);
  return held.tillwaterEnvironment;
}

/** What a process that handles foreign files is told of the environment: where programs are, and nothing secret. */
export function childEnvironment(more: Record<string, string>): NodeJS.ProcessEnv {
  return { PATH: process.env.PATH ?? '', NODE_ENV: environment().NODE_ENV, ...more };
}
