import { existsSync } from 'node:fs';
import type { Browser } from 'playwright-core';
import type { Role } from '#shared/domain/role.ts';
import { launchChromium } from '../../scripts/screenshots/browser.ts';
import { createPasswordHasher } from '../../server/auth/password-hasher.ts';
import { query } from '../../server/db/open.ts';
import { openPage, signIn, type WatchedPage, type Width } from './browser.ts';
import { type DeviceProcess, startDeviceProcess } from './device-process.ts';
import { startTestServer, type TestPerson, type TestServer } from './server.ts';

const password = 'steady drops only';

export interface Credentials {
  username: string;
  password: string;
}

/** A system with a carbon pump and probes that are registered and ready to connect. */
export interface EquippedSystem {
  owner: TestPerson;
  siteId: string;
  systemId: string;
  headId: string;
  productId: string;
  pump: Credentials;
  probe: Credentials;
}

export interface Journey {
  server: TestServer;
  browser: Browser;
  equip(): Promise<EquippedSystem>;
  /** Somebody with this role, signed in through the screen. */
  signedIn(equipped: EquippedSystem, role: Role, width: Width): Promise<WatchedPage>;
  startDevice(credentials: Credentials, kind: 'pump' | 'probe', stateFolder?: string): DeviceProcess;
  close(): Promise<void>;
}

function shownOnce(credentials: { username: string; password: string | null }): Credentials {
  if (credentials.password === null) throw new Error('The password of a new device was not shown');
  return { username: credentials.username, password: credentials.password };
}

/** The real server with the built app, a real browser, and device processes; `close()` ends all of them. */
export async function startJourney(): Promise<Journey> {
  if (!existsSync('dist/index.html')) throw new Error('The app is not built: node scripts/setup/build-web-main.mjs');
  const server = await startTestServer();
  const browser = await launchChromium();
  const passwordHash = await createPasswordHasher().hash(password);
  const devices: DeviceProcess[] = [];

  async function equip(): Promise<EquippedSystem> {
    const { owner, siteId, systemId } = await server.household();
    const product = await owner.api('createProduct', {
      params: { siteId },
      body: {
        name: 'Carbon blend A',
        form: 'liquid',
        composition: [{ substance: 'ethanol', percentByVolume: 40 }],
        label: { ml: 2, perLitres: 100, perDays: 1 },
      },
    });
    const params = { systemId };
    const reservoir = await owner.api('createReservoir', { params, body: { name: 'Carbon bottle', capacityMl: 500 } });
    await owner.api('createRefill', {
      params: { reservoirId: reservoir.id },
      body: { productId: product.id, at: new Date().toISOString(), ml: 500 },
    });
    const pump = await owner.api('createDevice', { params, body: { name: 'Doser', kind: 'pump' } });
    const probe = await owner.api('createDevice', { params, body: { name: 'Probes', kind: 'probe' } });
    const head = await owner.api('createHead', {
      params,
      body: {
        deviceId: pump.device.id,
        head: 1,
        kind: 'carbon',
        productId: product.id,
        reservoirId: reservoir.id,
        mlPerSecond: 1.1,
        smallestMl: 0.2,
      },
    });
    const ids = { siteId, systemId, headId: head.id, productId: product.id };
    return { owner, ...ids, pump: shownOnce(pump.credentials), probe: shownOnce(probe.credentials) };
  }

  return {
    server,
    browser,
    equip,
    async signedIn(equipped, role, width) {
      const person = role === 'owner' ? equipped.owner : await server.member(equipped.siteId, role);
      await server.core.writer.commit((tx) => tx.run(query.updateTable('user').set({ passwordHash }).where('id', '=', person.id)));
      const watched = await openPage(browser, server.url, width);
      await signIn(watched.page, person.email, password);
      return watched;
    },
    startDevice(credentials, kind, stateFolder) {
      const device = startDeviceProcess({ mqttPort: server.mqttPort, ...credentials, kind, stateFolder });
      devices.push(device);
      return device;
    },
    async close() {
      await browser.close();
      await Promise.all(devices.map((device) => device.close()));
      await server.close();
    },
  };
}

/** The next `count` whole minutes of the UTC day, from the one after next: ascending and unique, also around midnight. */
export function comingMinutesUtc(count: number, nowMs = Date.now()): number[] {
  const first = Math.floor(nowMs / 60_000) + 1;
  return Array.from({ length: count }, (_, index) => (first + index) % 1440).sort((a, b) => a - b);
}
