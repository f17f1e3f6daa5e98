/** What an empty installation begins with: the invented demo district, or a set-up token for a district of one's own. */

import { randomUUID } from 'node:crypto';
import { setTimeout as sleep } from 'node:timers/promises';
import { listInstalledDistricts } from '../../db/installed.ts';
import { saveDistrictPresets } from '../../db/queries/district-presets.ts';
import { insertDistrict } from '../../db/queries/district-read.ts';
import { saveMembership } from '../../db/queries/memberships.ts';
import { findRun } from '../../db/queries/run-state.ts';
import { database } from '../access/database.ts';
import { allDemoSignIns, type DemoSignIn, demoToken } from '../access/demo-sign-ins.ts';
import { environment } from '../access/environment.ts';
import { createPerson } from '../access/sessions.ts';
import { createSetupToken, createToken } from '../access/tokens.ts';
import { prepareDemo } from '../jobs/demo/load-demo.ts';
import { requestRun } from '../jobs/runs.ts';
import { requestWeatherCheck } from '../jobs/weather-check.ts';

export interface FirstData {
  readonly setupToken: string | null;
  readonly districtName: string;
  readonly signIns: readonly DemoSignIn[];
  readonly token: string;
  /** settles when the runs that were asked for have ended */
  readonly computed: Promise<void>;
  readonly webEnvironment: Record<string, string>;
}

const NOTHING: FirstData = { setupToken: null, districtName: '', signIns: [], token: '', computed: Promise.resolve(), webEnvironment: {} };
/** Members of the band of the demo: enough to show one, computed in a few seconds. */
const DEMO_BAND_MEMBERS = 40;
const LOOPBACK = ['127.0.0.1', 'localhost', '::1'];

/** @param ownerUrl asked only which districts exist: the application's role sees none without being told one */
export async function prepareFirstData(ownerUrl: string): Promise<FirstData> {
  const districts = await listInstalledDistricts(ownerUrl);
  const demo = districts.find((district) => district.invented);
  if (demo) {
    await renewDemoToken(demo.districtId);
    return shown(demo.name, Promise.resolve());
  }
  if (districts.length > 0) return NOTHING;
  if (environment().TILLWATER_EMPTY) return { ...NOTHING, setupToken: await createSetupToken() };
  return makeDemo();
}

function shown(districtName: string, computed: Promise<void>): FirstData {
  const local = LOOPBACK.includes(environment().HOST);
  return {
    setupToken: null,
    districtName,
    signIns: allDemoSignIns(),
    token: demoToken(),
    computed,
    webEnvironment: local ? { TILLWATER_DEMO_SHOWN: '1' } : {},
  };
}

async function makeDemo(): Promise<FirstData> {
  const demo = prepareDemo();
  const districtId = randomUUID();
  const people = await Promise.all(allDemoSignIns().map(async (person) => ({ ...person, userId: await createPerson(person) })));
  await database().inDistrict(districtId, async (tx) => {
    await insertDistrict(tx, { districtId, ...demo.district });
    await saveDistrictPresets(tx, districtId);
    await demo.insert(tx, districtId);
    for (const { userId, role } of people) await saveMembership(tx, districtId, { userId, role });
    const grower = people.find((person) => person.role === 'grower');
    if (grower) await demo.assignGrower(tx, districtId, grower.userId);
  });
  await renewDemoToken(districtId);
  await requestWeatherCheck(districtId);
  const runs: string[] = [];
  const settings = { band_members: DEMO_BAND_MEMBERS };
  for (const season of demo.seasonCodes) runs.push(await requestRun({ districtId, userId: null }, { season, settings }));
  return shown(demo.district.name, allEnded(districtId, runs));
}

/** The demo's token is put in again at each start, so that a newly configured one works. */
async function renewDemoToken(districtId: string): Promise<void> {
  await createToken(districtId, { name: 'Demo script', scope: 'write', expiresInDays: null, token: demoToken() });
}

async function allEnded(districtId: string, runs: readonly string[]): Promise<void> {
  for (const runId of runs) {
    for (;;) {
      const run = await database().inDistrict(districtId, (tx) => findRun(tx, districtId, runId));
      if (!run || run.state === 'done') break;
      if (run.state !== 'queued' && run.state !== 'running')
        throw new Error(`the first run of the demo ended as "${run.state}": ${run.error}`);
      await sleep(250);
    }
  }
}
