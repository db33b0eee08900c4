import type { TestProject } from 'vitest/node';
import { openThrowaway } from '../../server/commands/cluster.mjs';
import { ensureDatabase, migrate } from '../../server/commands/migrate.mjs';
import { template } from './database.ts';

declare module 'vitest' {
  interface ProvidedContext {
    /** The maintenance database of the throwaway cluster; `database.ts` makes databases with it. */
    readonly pgUrl: string;
  }
}

/** One cluster for a project's whole run, with a migrated database that the tests' own are copied from. */
export default async function setup(project: TestProject): Promise<() => void> {
  const cluster = await openThrowaway();
  try {
    await migrate(await ensureDatabase(cluster.url, template));
  } catch (error) {
    cluster.stop();
    throw error;
  }
  project.provide('pgUrl', cluster.url);
  return cluster.stop;
}
