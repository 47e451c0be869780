import { parseTopic, uplinks, type Uplink } from '#shared/mqtt/topics.ts';

/** Longer client ids only cost memory. */
const MAX_CLIENT_ID_LENGTH = 128;

/** A device has one main connection, whose client id is the device's id; further ones add `:` and anything. */
export function isClientIdOf(clientId: string, deviceId: string): boolean {
  return clientId.length <= MAX_CLIENT_ID_LENGTH && (clientId === deviceId || clientId.startsWith(`${deviceId}:`));
}

/**
 * What a client may publish, as the word of its own topic; null for everything else, `$SYS` included.
 * `state` belongs to the main connection alone, so that a second one cannot speak for the device.
 */
export function publishableWord(deviceId: string, clientId: string, topic: string): Uplink | null {
  const parsed = parseTopic(topic);
  if (parsed === null || parsed.deviceId !== deviceId) return null;
  const word = uplinks.find((candidate) => candidate === parsed.word);
  if (word === undefined || (word === 'state' && clientId !== deviceId)) return null;
  return word;
}

/** A device hears its own schedule and orders, by their exact names: no wildcard, nothing of another. */
export function mayHear(deviceId: string, topic: string): boolean {
  const parsed = parseTopic(topic);
  return parsed !== null && parsed.deviceId === deviceId && (parsed.word === 'schedule' || parsed.word === 'order');
}
