import { resolveSenml } from '#shared/mqtt/senml.ts';
import { type KeptAs, keptAs, toKept } from '#shared/mqtt/senml-units.ts';
import { EARLIEST_MS, FARTHEST_AHEAD_MS } from './plausible-time.ts';
import { Refusal } from './refusal.ts';

/** How long raw samples are kept, and so how late one may come. */
export const RAW_RETENTION_MS = 400 * 86_400_000;
/** Beyond this no probe measures anything, and sums of many would overflow. */
const MAX_VALUE = 1e100;

export interface DecodedSample {
  tMs: number;
  value: number;
}

export interface DecodedChannel {
  channel: string;
  as: KeptAs;
  /** In chronological order. */
  samples: DecodedSample[];
}

export interface DecodedSenml {
  channels: DecodedChannel[];
  /** How often each field came that is not kept: `vs`, `vb`, `vd`, and `s` without a value. */
  ignored: Record<string, number>;
}

const channelPattern = /^[A-Za-z0-9][A-Za-z0-9:./_-]{0,63}$/;

/** A leading `<device>:`, or a device's own URN (RFC 9039), only repeats who sends. */
function channelOf(name: string, deviceId: string): string {
  if (name.startsWith(`${deviceId}:`)) return name.slice(deviceId.length + 1);
  return name.replace(/^urn:dev:[^:]+:[^:]+:(?=.)/, '');
}

/** @throws {Refusal} when anything in the pack does not fit: it is stored whole or not at all. */
export function decodeSenml(json: unknown, deviceId: string, receivedMs: number): DecodedSenml {
  const resolution = resolveSenml(json, receivedMs / 1000);
  if (!resolution.isResolved) throw new Refusal(resolution.reason);

  const channels = new Map<string, DecodedChannel>();
  const channelByName = new Map<string, string>();
  const ignored: Record<string, number> = {};
  const ignore = (field: string) => (ignored[field] = (ignored[field] ?? 0) + 1);

  for (const record of resolution.records) {
    if (record.value === null) {
      if (record.stringValue !== null) ignore('vs');
      else if (record.booleanValue !== null) ignore('vb');
      else if (record.dataValue !== null) ignore('vd');
      else ignore('s');
      continue;
    }
    const tMs = Math.round(record.timeSeconds * 1000);
    if (tMs > receivedMs + FARTHEST_AHEAD_MS) throw new Refusal('too-far-ahead');
    if (tMs < EARLIEST_MS) throw new Refusal('too-early');
    if (tMs < receivedMs - RAW_RETENTION_MS) throw new Refusal('too-old');

    let channel = channelByName.get(record.name);
    if (channel === undefined) {
      channel = channelOf(record.name, deviceId);
      if (!channelPattern.test(channel)) throw new Refusal('bad-channel');
      channelByName.set(record.name, channel);
    }
    const as = keptAs(record.unit, channel);
    const decoded = channels.get(channel) ?? { channel, as, samples: [] };
    channels.set(channel, decoded);
    if (as.unit !== decoded.as.unit) throw new Refusal('unit-changed');
    const value = toKept(record.value, as);
    if (Math.abs(value) > MAX_VALUE) throw new Refusal('out-of-range');
    decoded.samples.push({ tMs, value });
  }
  return { channels: [...channels.values()], ignored };
}
