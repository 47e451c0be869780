import { query } from '../../db/open.ts';
import type { AlarmRuleModule } from '../finding.ts';

/** A device that was heard before has sent its last will, or has been silent for too long. */
export const deviceOffline: AlarmRuleModule = {
  code: 'device-offline',
  windowMs: 0,
  evaluate({ tx, systemId }) {
    const devices = tx.all(
      query
        .selectFrom('device')
        .innerJoin('deviceState', 'deviceState.deviceId', 'device.id')
        .select(['device.id', 'device.name', 'device.kind', 'online', 'heardAtMs', 'changedAtMs', 'scheduleVersion'])
        .where('device.systemId', '=', systemId),
    );
    return devices.map((device) => ({
      target: `device:${device.id}`,
      limitKind: 'soft',
      excess: device.online === 1 ? -Infinity : Infinity,
      value: null,
      limit: null,
      unit: 's',
      trip: null,
      headConcerned: null,
      evidence: () => ({
        deviceId: device.id,
        deviceName: device.name,
        deviceKind: device.kind,
        offlineSince: new Date(device.changedAtMs).toISOString(),
        heardAt: new Date(device.heardAtMs).toISOString(),
        scheduleVersion: device.scheduleVersion,
      }),
    }));
  },
};
