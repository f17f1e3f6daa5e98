/** Puts a worker on the import queues, and settles imports whose job was given up. */
import { changeImport, type ImportState } from '../../db/queries/import-row.ts';
import { listGivenUpJobs } from '../../db/queries/queue-job.ts';
import { database } from '../access/database.ts';
import { type ImportApplyData, performAct } from './import-apply.ts';
import { type ImportReadData, performRead } from './import-read.ts';
import { addUpkeep, workOn } from './queue.ts';
import { standBy } from './reader-child.ts';
import { clearReadingFolders } from './reading-folder.ts';

const GIVEN_UP: { from: ImportState; to: ImportState; error: string }[] = [
  {
    from: 'reading',
    to: 'failed',
    error:
      'Reading was tried several times and did not end: the service stopped or ran out of memory each time. Split the file, or read it again.',
  },
  {
    from: 'applying',
    to: 'failed',
    error:
      'Applying was tried several times and did not end; nothing was changed. Read the file again and apply it anew; split it if it is large.',
  },
  { from: 'undoing', to: 'applied', error: 'Undoing was tried several times and did not end; nothing was changed. Try again.' },
];

/** Works on imports until `stopQueue`. */
export async function workOnImports(): Promise<void> {
  clearReadingFolders();
  standBy();
  await workOn<ImportReadData>('import-read', (data) => performRead(data));
  await workOn<ImportApplyData>('import-apply', (data) => performAct(data));
  addUpkeep(settleGivenUp);
}

/** No import stays "reading" or "applying" for ever: what the queue gave up is marked. */
export async function settleGivenUp(): Promise<void> {
  for (const data of await listGivenUpJobs(database().outside, ['import-read', 'import-apply'], 'importId')) {
    const { districtId, importId, revision } = data as { districtId: string; importId: string; revision?: number };
    await database().inDistrict(districtId, async (tx) => {
      for (const { from, to, error } of GIVEN_UP) {
        if ((from === 'reading') !== (revision !== undefined)) continue;
        await changeImport(tx, { districtId, importId, from: [from], revision }, { state: to, error });
      }
    });
  }
}
