import type { Devices } from '../devices/create-devices.ts';
import { pageOfWhole } from './page.ts';
import { handlers } from './route.ts';

/** Raw messages and rejects of a device are in `messages.ts`. */
export function deviceHandlers(devices: Devices) {
  return handlers({
    listDevices: async ({ params, query }) => pageOfWhole(await devices.list(params.systemId), query),
    createDevice: async ({ site, person, params, body, repeated }) => {
      const made = await devices.create({ siteId: site.id, systemId: params.systemId, userId: person.userId, body });
      if (made.isRepeated) repeated();
      return made.value;
    },
    renewCredentials: ({ site, person, params }) =>
      devices.renewCredentials({ siteId: site.id, deviceId: params.deviceId, userId: person.userId }),
  });
}
