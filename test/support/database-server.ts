/** One throw-away PostgreSQL for the whole test run, with a migrated template that each test file clones. */
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { TestProject } from 'vitest/node';
import { startEmbedded } from '../../db/embedded.ts';
import { migrateDatabase } from '../../db/migrate.ts';

declare module 'vitest' {
  export interface ProvidedContext {
    templateUrl: string;
  }
}

export default async function setup(project: TestProject) {
  const folder = mkdtempSync(join(tmpdir(), 'tillwater-test-'));
  const server = await startEmbedded({ folder, database: 'template', forTests: true });
  await migrateDatabase(server.ownerUrl, 'db/migrations');
  project.provide('templateUrl', server.ownerUrl);
  return async () => {
    await server.stop();
    rmSync(folder, { recursive: true, force: true });
  };
}
