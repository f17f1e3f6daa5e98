import { afterAll, beforeAll, it } from 'vitest';
import { performApply } from '../../lib/jobs/import-apply.ts';
import { database } from '../../lib/access/database.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { testDatabase } from '../support/database.ts';
import { inState, makeDistrict, parcel, parcels, planting, stage, stateOf } from '../support/import-district.ts';
import { openDatabase } from '../../db/connect.ts';
let t: any;
beforeAll(async () => { t = await testDatabase(); });
afterAll(async () => { await stopQueue(); await t.close(); });
it('scale', async () => {
  const d = await makeDistrict('big');
  const ring = Array.from({ length: 40 }, (_, i) => [-120 + Math.cos(i) * 0.01, 45 + Math.sin(i) * 0.01]); ring.push(ring[0]);
  const n = 12000;
  const many = Array.from({ length: n }, (_, i) => parcel(`P${i}`, { geometry: { type: 'Polygon', coordinates: [ring] } }));
  const own: any = await stage(d, parcels(many, { plantings: many.map((p) => planting(p.code)) }));
  await inState(own, 'ready', 'applying');
  const db: any = database();
  const orig = db.inDistrict;
  db.inDistrict = (id: string, work: any) => orig(id, (tx: any) => {
    const ex = tx.execute.bind(tx);
    tx.execute = async (q: any) => { const s = performance.now(); const r = await ex(q); const ms = performance.now() - s; if (ms > 100) console.log(Math.round(ms), 'ms', JSON.stringify(q.queryChunks?.map((c: any) => c.value ?? '').flat().join('').trim().slice(0, 60))); return r; };
    return work(tx);
  });
  let last = performance.now();
  await performApply(own, (s) => { console.log(s, Math.round(performance.now() - last)); last = performance.now(); });
  console.log((await stateOf(own)).state);
}, 600000);
