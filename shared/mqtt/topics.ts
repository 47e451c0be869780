/** Last words of a device's topics. It publishes the first four and subscribes to the last two. */
export const uplinks = ['senml', 'run', 'state', 'receipt'] as const;
export const downlinks = ['schedule', 'order'] as const;
export type Uplink = (typeof uplinks)[number];
export type Downlink = (typeof downlinks)[number];

export function topicOf(deviceId: string, word: Uplink | Downlink): string {
  return `steadfall/${deviceId}/${word}`;
}

/** Reads a device's topic by exact segments; null for anything else. */
export function parseTopic(topic: string): { deviceId: string; word: Uplink | Downlink } | null {
  const segments = topic.split('/');
  if (segments.length !== 3 || segments[0] !== 'steadfall') return null;
  const [, deviceId, word] = segments;
  if (deviceId === undefined || deviceId === '') return null;
  const known = [...uplinks, ...downlinks].find((candidate) => candidate === word);
  return known === undefined ? null : { deviceId, word: known };
}
