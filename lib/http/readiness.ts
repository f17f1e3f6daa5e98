/** Whether this process can answer: the database is there and has the newest schema. */
import { hasNewestSchema } from '../../db/queries/schema-state.ts';
import { database } from '../access/database.ts';
import { log } from '../access/log.ts';

export async function readiness(): Promise<{ ready: boolean; database: 'answers' | 'silent'; schema: 'newest' | 'older' | 'unknown' }> {
  try {
    const newest = await hasNewestSchema(database().outside);
    return { ready: newest, database: 'answers', schema: newest ? 'newest' : 'older' };
  } catch (error) {
    log().warn({ err: error }, 'the database does not answer');
    return { ready: false, database: 'silent', schema: 'unknown' };
  }
}
