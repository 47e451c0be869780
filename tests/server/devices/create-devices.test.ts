import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { uuidv7 } from 'uuidv7';
import { createDevices, type Devices } from '../../../server/devices/create-devices.ts';
import { NotFoundError } from '../../../server/errors.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';
import { addPlace, addSiteRow, addSystemRow, insertRow } from '../../helpers/rows.ts';

let opened: TestCore;
let devices: Devices;
let disconnected: string[];
let place: Awaited<ReturnType<typeof addPlace>>;

beforeEach(async () => {
  opened = await openTestCore(manualClock());
  disconnected = [];
  devices = createDevices({ core: opened.core, disconnect: (deviceId) => disconnected.push(deviceId) });
  place = await addPlace(opened.core);
});

afterEach(() => opened.close());

const body = { name: 'Dosing pump', kind: 'pump' as const };

/** A device with the password that it was given. */
async function register(given: typeof body & { id?: string } = body) {
  const { value } = await devices.create({ ...place, body: given });
  return { id: value.device.id, password: value.credentials.password ?? '', username: value.credentials.username };
}

describe('a new device', () => {
  it('signs in with its id and a password of at least 128 bits, of which only the hash is kept', async () => {
    const { id, username, password } = await register();
    expect(username).toBe(id);
    expect(Buffer.from(password, 'base64url').length * 8).toBeGreaterThanOrEqual(128);
    expect(await devices.authenticateDevice(username, password)).toBe(true);
    const tables = await Promise.all([
      opened.core.reader.selectFrom('device').selectAll().execute(),
      opened.core.reader.selectFrom('audit').selectAll().execute(),
      opened.core.reader.selectFrom('change').selectAll().execute(),
    ]);
    expect(JSON.stringify(tables)).not.toContain(password);
  });

  it('is unheard, without a schedule and without rejects', async () => {
    const { id } = await register();
    expect(await devices.list(place.systemId)).toEqual([
      { id, systemId: place.systemId, ...body, state: null, publishedScheduleVersion: null, rejects: 0 },
    ]);
  });

  it('does not show its password again when the request is repeated, and keeps it', async () => {
    const id = uuidv7();
    const { password } = await register({ ...body, id });
    const again = await devices.create({ ...place, body: { ...body, id } });
    expect(again).toMatchObject({ isRepeated: true, value: { device: { id }, credentials: { username: id, password: null } } });
    expect(await devices.authenticateDevice(id, password)).toBe(true);
  });

  it('is refused with an id that is in use, here or in another site', async () => {
    const id = uuidv7();
    await register({ ...body, id });
    await expect(devices.create({ ...place, body: { ...body, id, name: 'Other' } })).rejects.toMatchObject({ rule: 'id-taken' });
    const siteId = await addSiteRow(opened.core, 'Quay Road');
    const elsewhere = { siteId, systemId: await addSystemRow(opened.core, siteId), userId: place.userId };
    await expect(devices.create({ ...elsewhere, body: { ...body, id } })).rejects.toMatchObject({ rule: 'id-taken' });
  });

  it('is refused for a system of another site', async () => {
    const siteId = await addSiteRow(opened.core, 'Quay Road');
    await expect(devices.create({ ...place, siteId, body })).rejects.toThrow(NotFoundError);
  });
});

describe('signing a device in', () => {
  it.each([
    ['a wrong password', (device: { id: string }) => [device.id, 'guess'] as const],
    ['an empty password', (device: { id: string }) => [device.id, ''] as const],
    ['an unknown device', (device: { password: string }) => [uuidv7(), device.password] as const],
    ['a name that is no id', (device: { password: string }) => ["' or 1=1", device.password] as const],
  ])('fails with %s', async (_, attempt) => {
    const device = await register();
    expect(await devices.authenticateDevice(...attempt(device))).toBe(false);
  });
});

describe('new credentials', () => {
  it('replace the old ones at once, and close what is open', async () => {
    const { id, password } = await register();
    const renewed = await devices.renewCredentials({ siteId: place.siteId, deviceId: id, userId: place.userId });
    expect(disconnected).toEqual([id]);
    expect(await devices.authenticateDevice(id, password)).toBe(false);
    expect(await devices.authenticateDevice(id, renewed.credentials.password)).toBe(true);
    const row = await opened.core.reader.selectFrom('device').select('credentialVersion').executeTakeFirstOrThrow();
    expect(row.credentialVersion).toBe(2);
  });

  it('are not given for a device of another site, which stays connected', async () => {
    const { id, password } = await register();
    const siteId = await addSiteRow(opened.core, 'Quay Road');
    await expect(devices.renewCredentials({ siteId, deviceId: id, userId: place.userId })).rejects.toThrow(NotFoundError);
    expect(disconnected).toEqual([]);
    expect(await devices.authenticateDevice(id, password)).toBe(true);
  });
});

describe('the list of devices', () => {
  it('tells what each last said of itself, its newest schedule and its refused messages', async () => {
    const { id } = await register();
    const heads = [{ head: 1, state: 'idle', odometerMl: 12.5, odometerEpoch: 0 }];
    await insertRow(opened.core, 'deviceState', {
      deviceId: id,
      online: 1,
      heardAtMs: Date.parse('2026-03-01T11:59:00Z'),
      changedAtMs: Date.parse('2026-03-01T10:00:00Z'),
      scheduleVersion: 7,
      clockOffsetMs: -1500,
      clockUnset: 0,
      heads: JSON.stringify(heads),
    });
    for (const version of [7, 8]) {
      await insertRow(opened.core, 'scheduleVersion', {
        deviceId: id,
        version,
        siteId: place.siteId,
        body: '{}',
        fromMs: 0,
        cause: 'set',
        actorKind: 'user',
        actorId: place.userId,
        publishedAtMs: null,
      });
    }
    await insertRow(opened.core, 'rejectCount', { deviceId: id, reason: 'not-json', count: 2, lastMs: 0 });
    await insertRow(opened.core, 'rejectCount', { deviceId: id, reason: 'too-big', count: 3, lastMs: 0 });
    const [device] = await devices.list(place.systemId);
    expect(device).toMatchObject({ publishedScheduleVersion: 8, rejects: 5 });
    expect(device?.state).toEqual({
      deviceId: id,
      online: true,
      heardAt: '2026-03-01T11:59:00.000Z',
      changedAt: '2026-03-01T10:00:00.000Z',
      scheduleVersion: 7,
      clockOffsetSeconds: -1.5,
      clockUnset: false,
      heads,
    });
  });
});
