import type { BodyOf } from '#shared/contract/endpoint.ts';
import type { Device, deviceEndpoints } from '#shared/contract/devices.ts';
import { recordAudit } from '../audit/record-audit.ts';
import { recordChange } from '../changes/record-change.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { readRows } from '../db/read-rows.ts';
import { NotFoundError } from '../errors.ts';
import { claimId } from '../requests/claim-id.ts';
import type { Made } from '../requests/made.ts';
import { systemOfSite } from '../systems/system-rows.ts';
import { deviceOf, deviceRows } from './device-rows.ts';
import { hashDeviceSecret, isDeviceSecret, newDeviceSecret } from './device-secret.ts';

type CreateBody = BodyOf<typeof deviceEndpoints.createDevice>;

/** A device with what it signs in with. */
export interface WithCredentials<Password> {
  device: Device;
  credentials: { username: string; password: Password };
}

export interface Devices {
  list(systemId: string): Promise<Device[]>;
  /** The password is null when the request is repeated: only its hash is kept. */
  create(input: { siteId: string; systemId: string; userId: string; body: CreateBody }): Promise<Made<WithCredentials<string | null>>>;
  renewCredentials(input: { siteId: string; deviceId: string; userId: string }): Promise<WithCredentials<string>>;
  /** Whether the broker may let this client in: the username is the device's id. */
  authenticateDevice(username: string, password: string): Promise<boolean>;
}

export interface DevicesOptions {
  core: Core;
  /** Closes the open connections of a device, whose password stopped a moment ago. */
  disconnect(deviceId: string): void;
}

export function createDevices({ core, disconnect }: DevicesOptions): Devices {
  async function get(deviceId: string): Promise<Device> {
    const [row] = await readRows(core.reader, deviceRows().where('device.id', '=', deviceId));
    if (row === undefined) throw new NotFoundError('There is no such device in your sites');
    return deviceOf(row);
  }

  return {
    async list(systemId) {
      const devices = deviceRows().where('device.systemId', '=', systemId);
      const rows = await readRows(core.reader, devices.orderBy('device.createdAtMs', 'desc').orderBy('device.id', 'desc'));
      return rows.map(deviceOf);
    },

    async create({ siteId, systemId, userId, body }) {
      const { id: givenId, ...fields } = body;
      const password = newDeviceSecret();
      const { id, isRepeated } = await core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        if (tx.first(systemOfSite(siteId, systemId)) === undefined) throw new NotFoundError('There is no such system in your sites');
        const claim = claimId(tx, { siteId, kind: `device:${systemId}`, id: givenId, body: fields, nowMs });
        if (claim.isRepeated) return claim;
        tx.run(
          query.insertInto('device').values({
            id: claim.id,
            siteId,
            systemId,
            ...fields,
            secretHash: hashDeviceSecret(password),
            credentialVersion: 1,
            createdAtMs: nowMs,
          }),
        );
        recordAudit(tx, {
          atMs: nowMs,
          siteId,
          actor: { kind: 'user', id: userId },
          action: 'create',
          entity: 'device',
          entityId: claim.id,
          after: { ...fields, systemId },
        });
        recordChange(tx, { systemId, type: 'plan', atMs: nowMs, data: { reason: 'device' } });
        return claim;
      });
      const credentials = { username: id, password: isRepeated ? null : password };
      return { value: { device: await get(id), credentials }, isRepeated };
    },

    async renewCredentials({ siteId, deviceId, userId }) {
      const password = newDeviceSecret();
      await core.writer.commit((tx) => {
        const device = tx.first(
          query.selectFrom('device').where('siteId', '=', siteId).where('id', '=', deviceId).select(['credentialVersion']),
        );
        if (device === undefined) throw new NotFoundError('There is no such device in your sites');
        const credentialVersion = device.credentialVersion + 1;
        tx.run(
          query
            .updateTable('device')
            .set({ secretHash: hashDeviceSecret(password), credentialVersion })
            .where('id', '=', deviceId),
        );
        recordAudit(tx, {
          atMs: core.clock.nowMs(),
          siteId,
          actor: { kind: 'user', id: userId },
          action: 'renew-credentials',
          entity: 'device',
          entityId: deviceId,
          before: { credentialVersion: device.credentialVersion },
          after: { credentialVersion },
        });
      });
      disconnect(deviceId);
      return { device: await get(deviceId), credentials: { username: deviceId, password } };
    },

    async authenticateDevice(username, password) {
      const [device] = await readRows(core.reader, query.selectFrom('device').where('id', '=', username).select('secretHash'));
      // A hash that no secret has keeps the work the same for a device that does not exist.
      const isRight = isDeviceSecret(password, device?.secretHash ?? hashDeviceSecret(newDeviceSecret()));
      return device !== undefined && isRight;
    },
  };
}
