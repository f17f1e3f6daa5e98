/** The one driver handle of a process, and the only ways into it: as a district, as a person, or by a token. */
import { sql } from 'drizzle-orm';
import { drizzle, type PostgresJsDatabase } from 'drizzle-orm/postgres-js';
import postgres from 'postgres';

export type Tx = Parameters<Parameters<PostgresJsDatabase['transaction']>[0]>[0];

export interface Database {
  /**
   * Runs `work` in a transaction that sees one district's rows only. A query that forgets its `where` still sees nothing else.
   */
  inDistrict<T>(districtId: string, work: (tx: Tx) => Promise<T>): Promise<T>;
  /** Runs `work` seeing the memberships of one person and no district's rows. */
  asPerson<T>(userId: string, work: (tx: Tx) => Promise<T>): Promise<T>;
  /** Runs `work` seeing the one API token with this hash and no district's rows. */
  byTokenHash<T>(hash: string, work: (tx: Tx) => Promise<T>): Promise<T>;
  /** Outside every district: only the tables of the `auth` schema answer. */
  readonly outside: PostgresJsDatabase;
  /** LISTEN on a channel; answers a function that stops listening. */
  listen(channel: string, heard: (payload: string) => void): Promise<() => Promise<void>>;
  /** True when the database answers. */
  ping(): Promise<boolean>;
  close(): Promise<void>;
}

/** @param url address of the application's role, never the owner's */
export function openDatabase(url: string, connections: number): Database {
  const client = postgres(url, { max: connections, onnotice: () => {}, idle_timeout: 60, connect_timeout: 10 });
  const db = drizzle(client);
  const withSetting = <T>(name: string, value: string, work: (tx: Tx) => Promise<T>) =>
    db.transaction(async (tx) => {
      await tx.execute(sql`select set_config(${name}, ${value}, true)`);
      return work(tx);
    });
  let listener: ReturnType<typeof postgres> | null = null;
  return {
    inDistrict: (districtId, work) => withSetting('app.district', districtId, work),
    asPerson: (userId, work) => withSetting('app.person', userId, work),
    byTokenHash: (hash, work) => withSetting('app.token_hash', hash, work),
    outside: db,
    async listen(channel, heard) {
      listener ??= postgres(url, { max: 1, onnotice: () => {} });
      const subscription = await listener.listen(channel, heard);
      return () => subscription.unlisten();
    },
    async ping() {
      await db.execute(sql`select 1`);
      return true;
    },
    async close() {
      await Promise.all([client.end({ timeout: 3 }), listener?.end({ timeout: 3 })]);
    },
  };
}
