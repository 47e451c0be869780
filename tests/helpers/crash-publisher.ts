import { topicOf } from '#shared/mqtt/topics.ts';
import { connectFrame, openRaw, publishFrame, type RawConnection } from './raw-mqtt.ts';

/** One message that was sent: three samples of a channel, or a whole run. */
export type Sent =
  { kind: 'samples'; channel: string; samples: { tMs: number; value: number }[] } | { kind: 'run'; run: string; ml: number };

export interface CrashPublisher {
  deviceId: string;
  sent: Sent[];
  /** Numbers of the messages that were acknowledged. */
  acknowledged: Set<number>;
  /** Sends until the connection breaks, first again what was not acknowledged before. */
  publishTo(port: number): Promise<void>;
}

const WINDOW = 40;
const CHANNELS = 3;

/** A device that numbers everything it sends and writes down what was acknowledged. Every value is exact in binary. */
export function crashPublisher(deviceId: string, startMs: number): CrashPublisher {
  const sent: Sent[] = [];
  const acknowledged = new Set<number>();

  function make(number: number): Sent {
    if (number % 3 === 2) return { kind: 'run', run: `run ${number}`, ml: (number % 64) / 64 + 0.25 };
    const samples = [2, 0, 1].map((offset) => ({ tMs: startMs + number * 700 + offset * 200, value: number + offset / 4 }));
    return { kind: 'samples', channel: `c${number % CHANNELS}`, samples };
  }

  function frameOf(number: number, message: Sent): Buffer {
    const messageId = (number % 65_535) + 1;
    if (message.kind === 'run') {
      const run = { run: message.run, head: 1, phase: 'ended', atMs: startMs + number * 700, ml: message.ml, cause: 'button' };
      return publishFrame(topicOf(deviceId, 'run'), JSON.stringify(run), messageId);
    }
    const pack = message.samples.map(({ tMs, value }) => ({ n: message.channel, v: value, t: tMs / 1000 }));
    return publishFrame(topicOf(deviceId, 'senml'), JSON.stringify(pack), messageId);
  }

  async function pump(raw: RawConnection): Promise<void> {
    const open = new Map<number, number>();
    const send = (number: number) => {
      const message = sent[number] ?? make(number);
      sent[number] = message;
      open.set((number % 65_535) + 1, number);
      raw.send(frameOf(number, message));
    };
    const pending = sent.map((_, number) => number).filter((number) => !acknowledged.has(number));
    for (;;) {
      while (open.size < WINDOW) send(pending.shift() ?? sent.length);
      const { type, body } = await raw.next();
      if (type !== 4) continue;
      const number = open.get(body.readUInt16BE(0));
      if (number === undefined) throw new Error('Something was acknowledged that was not sent');
      open.delete(body.readUInt16BE(0));
      acknowledged.add(number);
    }
  }

  return {
    deviceId,
    sent,
    acknowledged,
    async publishTo(port) {
      const raw = await openRaw(port).catch(() => null);
      if (raw === null) return;
      raw.send(connectFrame({ clientId: deviceId, username: deviceId, password: 'p' }));
      await Promise.race([raw.closed, raw.next().then(() => pump(raw))]).catch((error: unknown) => {
        if (!raw.isClosed()) throw error;
      });
      raw.socket.destroy();
    },
  };
}
