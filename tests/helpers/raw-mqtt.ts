import { once } from 'node:events';
import { connect, type Socket } from 'node:net';

/** The bytes of MQTT 3.1.1 by hand, for what no client library would send. */

export function frame(firstByte: number, body: Buffer): Buffer {
  const length: number[] = [];
  let rest = body.length;
  do {
    const digit = rest % 128;
    rest = Math.floor(rest / 128);
    length.push(rest > 0 ? digit | 128 : digit);
  } while (rest > 0);
  return Buffer.concat([Buffer.from([firstByte, ...length]), body]);
}

export function text(value: string): Buffer {
  const bytes = Buffer.from(value);
  return Buffer.concat([Buffer.from([bytes.length >> 8, bytes.length & 255]), bytes]);
}

export interface ConnectFields {
  clientId: string;
  username?: string;
  password?: string;
  clean?: boolean;
  keepAlive?: number;
  protocol?: { name: string; level: number };
}

export function connectFrame({
  clientId,
  username,
  password,
  clean = true,
  keepAlive = 60,
  protocol = { name: 'MQTT', level: 4 },
}: ConnectFields): Buffer {
  const flags = (username === undefined ? 0 : 128) | (password === undefined ? 0 : 64) | (clean ? 2 : 0);
  return frame(
    0x10,
    Buffer.concat([
      text(protocol.name),
      Buffer.from([protocol.level, flags, keepAlive >> 8, keepAlive & 255]),
      text(clientId),
      ...(username === undefined ? [] : [text(username)]),
      ...(password === undefined ? [] : [text(password)]),
    ]),
  );
}

/** QoS 1 unless told otherwise; QoS 0 has no message id. */
export function publishFrame(
  topic: string,
  payload: Buffer | string,
  messageId: number,
  { qos = 1, retain = false, dup = false } = {},
): Buffer {
  const id = qos === 0 ? [] : [Buffer.from([messageId >> 8, messageId & 255])];
  return frame(0x30 | (dup ? 8 : 0) | (qos << 1) | (retain ? 1 : 0), Buffer.concat([text(topic), ...id, Buffer.from(payload)]));
}

export const subscribeFrame = (messageId: number, topics: { topic: string; qos: number }[]) =>
  frame(
    0x82,
    Buffer.concat([
      Buffer.from([messageId >> 8, messageId & 255]),
      ...topics.flatMap(({ topic, qos }) => [text(topic), Buffer.from([qos])]),
    ]),
  );

export const disconnectFrame = Buffer.from([0xe0, 0]);
export const pingFrame = Buffer.from([0xc0, 0]);

export interface RawConnection {
  socket: Socket;
  isClosed(): boolean;
  closed: Promise<void>;
  send(...frames: Buffer[]): void;
  /** The next frame that came in. */
  next(): Promise<{ type: number; flags: number; body: Buffer }>;
  /** Ids of the PUBACKs among what has come in and was not asked for by `next`. */
  acknowledged(): number[];
}

export async function openRaw(port: number): Promise<RawConnection> {
  const socket = connect({ port, host: '127.0.0.1', noDelay: true });
  let pending = Buffer.alloc(0);
  let isClosed = false;
  const frames: { type: number; flags: number; body: Buffer }[] = [];
  const waiting: (() => void)[] = [];
  const acknowledged: number[] = [];
  const closed = new Promise<void>((resolve) => {
    socket.once('close', () => {
      isClosed = true;
      resolve();
      for (const wake of waiting.splice(0)) wake();
    });
  });
  socket.on('error', () => socket.destroy());
  socket.on('data', (data: Buffer) => {
    pending = Buffer.concat([pending, data]);
    for (;;) {
      let length = 0;
      let at = 1;
      for (let shift = 1; ; shift *= 128) {
        const digit = pending[at++];
        if (digit === undefined) return;
        length += (digit & 127) * shift;
        if (digit < 128) break;
      }
      if (pending.length < at + length) return;
      const first = pending[0] ?? 0;
      const body = pending.subarray(at, at + length);
      pending = pending.subarray(at + length);
      if (first >> 4 === 4) acknowledged.push(body.readUInt16BE(0));
      frames.push({ type: first >> 4, flags: first & 15, body });
      waiting.shift()?.();
    }
  });
  await once(socket, 'connect');
  return {
    socket,
    closed,
    isClosed: () => isClosed,
    send: (...parts) => void socket.write(Buffer.concat(parts)),
    async next() {
      if (frames.length === 0 && !isClosed) await new Promise<void>((resolve) => waiting.push(resolve));
      const found = frames.shift();
      if (found === undefined) throw new Error('The connection was closed');
      return found;
    },
    acknowledged: () => [...acknowledged],
  };
}

/** Connects and reads CONNACK; gives its return code with the connection. */
export async function connectRaw(
  port: number,
  fields: ConnectFields,
): Promise<{ raw: RawConnection; returnCode: number | undefined; sessionPresent: boolean }> {
  const raw = await openRaw(port);
  raw.send(connectFrame(fields));
  const { body } = await raw.next();
  return { raw, returnCode: body[1], sessionPresent: body[0] === 1 };
}
