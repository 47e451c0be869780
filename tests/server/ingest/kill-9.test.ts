import { afterAll, beforeAll, expect, it } from 'vitest';
import { openWritingConnection } from '../../../server/db/open.ts';
import { openCore } from '../../../server/open-core.ts';
import { manualClock, openTestCore } from '../../helpers/core.ts';
import { type CrashFindings, findings } from '../../helpers/crash-oracle.ts';
import { crashPublisher } from '../../helpers/crash-publisher.ts';
import { buildCrashServers, type CrashServer, type CrashServers } from '../../helpers/crash-server.ts';
import { eventually } from '../../helpers/eventually.ts';
import { addDeviceRow } from '../../helpers/ingest-scene.ts';
import { addSiteRow, addSystemRow } from '../../helpers/rows.ts';

const DEVICES = 4;
let servers: CrashServers;

beforeAll(async () => {
  servers = await buildCrashServers();
}, 60_000);

afterAll(() => servers.close());

/** Lets devices send while the server is killed again and again, until `isEnough`, and looks at what is left. */
async function crash(build: 'right' | 'acknowledges-first', kills: number): Promise<CrashFindings & { kills: number; integrity: unknown }> {
  const opened = await openTestCore(manualClock(Date.now()));
  const { core, folder } = opened;
  const systemId = await addSystemRow(core, await addSiteRow(core));
  const { siteId } = await core.reader.selectFrom('system').select('siteId').where('id', '=', systemId).executeTakeFirstOrThrow();
  const startMs = Math.floor(Date.now() / 1000) * 1000 - 20 * 86_400_000;
  const deviceIds = await Promise.all(Array.from({ length: DEVICES }, () => addDeviceRow(core, siteId, systemId)));
  const publishers = deviceIds.map((deviceId) => crashPublisher(deviceId, startMs));

  const acknowledged = () => publishers.reduce((sum, publisher) => sum + publisher.acknowledged.size, 0);

  let next: CrashServer = servers.start();
  try {
    for (let kill = 0; kill < kills; kill++) {
      const server = next;
      next = servers.start();
      await server.loaded;
      const listening = server.serve(folder, build);
      // One in five is killed while it opens the database, the others at any moment of the first messages.
      if (kill % 5 === 4) {
        await new Promise((resolve) => setTimeout(resolve, Math.random() * 60));
        await server.kill();
        await listening;
        continue;
      }
      const port = await listening;
      if (port === null) throw new Error('The server did not listen');
      const publishing = Promise.all(publishers.map((publisher) => publisher.publishTo(port)));
      const target = acknowledged() + Math.floor(Math.random() * 250);
      await eventually(() => acknowledged() > target, 'messages are acknowledged', 30_000);
      await server.kill();
      await publishing;
    }
  } finally {
    await next.kill();
  }

  const connection = openWritingConnection(core.databaseFile);
  const integrity = connection.pragma('integrity_check', { simple: true });
  connection.close();
  const reopened = await openCore(core.config, core.clock, core.log);
  try {
    return { kills, integrity, ...(await findings(reopened.core, publishers)) };
  } finally {
    await reopened.close();
    await opened.close();
  }
}

it('keeps everything that it acknowledged, once, through 21 kills at random moments', async () => {
  const found = await crash('right', 21);
  expect(found.acknowledged).toBeGreaterThan(500);
  expect({ ...found, lost: found.lost.length, phantoms: found.phantoms.length }).toMatchObject({
    lost: 0,
    phantoms: 0,
    doubled: [],
    areRollupsRight: true,
    integrity: 'ok',
  });
}, 120_000);

it('would notice a build that acknowledges before it stores', async () => {
  const found = await crash('acknowledges-first', 4);
  expect(found.lost.length).toBeGreaterThan(0);
}, 60_000);
