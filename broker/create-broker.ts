import type { EventEmitter } from 'node:events';
import { Aedes, type Client, type ConnectPacket, type PublishPacket } from 'aedes';
import type { Broker, BrokerLog, BrokerPolicy } from './broker.ts';
import { createDeviceConnections } from './device-connections.ts';
import { isClientIdOf, mayHear, publishableWord } from './fence.ts';
import { GuardedConnection } from './guarded-connection.ts';
import { listen } from './listener.ts';
import { createTokenBucket, type TokenBucket } from './token-bucket.ts';

export interface BrokerLimits {
  /** Messages that a device may send in the long run, and at once; beyond that it is read more slowly. */
  readonly messagesPerSecond: number;
  readonly burst: number;
  readonly maxSocketsPerAddress: number;
  /** How long somebody may be connected without having sent CONNECT. */
  readonly connectTimeoutMs: number;
  /** How long a subscriber may leave its socket full. */
  readonly drainTimeoutMs: number;
}

const defaultLimits: BrokerLimits = {
  messagesPerSecond: 50,
  burst: 1_000,
  maxSocketsPerAddress: 1_024,
  connectTimeoutMs: 10_000,
  drainTimeoutMs: 30_000,
};

/** The longest keep-alive that a device may ask for, so that a silent one is noticed in 90 s (MQTT 3.1.1, [MQTT-3.1.2-24]). */
const MAX_KEEP_ALIVE_SECONDS = 60;
/** How long a stop waits for messages that are being stored. */
const DRAIN_ON_CLOSE_MS = 5_000;

export interface BrokerOptions {
  readonly host: string;
  /** 0 takes a free one. */
  readonly port: number;
  readonly tls?: { readonly key: string | Buffer; readonly cert: string | Buffer };
  readonly policy: BrokerPolicy;
  readonly log: BrokerLog;
  readonly limits?: Partial<BrokerLimits>;
}

/** Return codes of CONNACK, MQTT 3.1.1, table 3.1. */
type RefusalCode = 2 | 3 | 4 | 5;

function refusal(returnCode: RefusalCode, text: string): Error & { returnCode: RefusalCode } {
  return Object.assign(new Error(text), { returnCode });
}

/** Embeds an MQTT 3.1.1 broker that only registered devices may use, each within its own topics. */
export async function createBroker(options: BrokerOptions): Promise<Broker> {
  const { policy, log } = options;
  const limits = { ...defaultLimits, ...options.limits };
  const connections = createDeviceConnections();
  const sockets = new Set<GuardedConnection>();
  const asked = new WeakMap<Client, ConnectPacket>();
  const buckets = new Map<string, TokenBucket>();
  const revocations = new Map<string, number>();
  /** How often the device's password had been withdrawn when this client gave it. */
  const signedInAfter = new WeakMap<Client, number | undefined>();
  const receiving = new Set<Promise<void>>();
  let isStopping = false;

  function bucketOf(deviceId: string): TokenBucket {
    // Kept when the device goes, or it could have a new burst by signing in again.
    const bucket = buckets.get(deviceId) ?? createTokenBucket(limits.messagesPerSecond, limits.burst, () => performance.now());
    buckets.set(deviceId, bucket);
    return bucket;
  }

  /** Throws away what a callback throws after writing it down: an exception inside the broker would end the process. */
  function tell(what: string, callback: () => void): void {
    try {
      callback();
    } catch (error) {
      log.warn({ error: String(error) }, `The ${what} callback failed`);
    }
  }

  async function isGenuine(username: string, password: string): Promise<boolean> {
    for (;;) {
      const revoked = revocations.get(username);
      const isRight = await policy.authenticate(username, password);
      // A password that was withdrawn meanwhile was perhaps compared with the one of before: look again.
      if (!isRight || revocations.get(username) === revoked) return isRight;
    }
  }

  async function signIn(client: Client, username: string | undefined, password: Buffer | undefined): Promise<void> {
    const packet = asked.get(client);
    if (username === undefined || password === undefined || packet === undefined) throw refusal(4, 'no username or password');
    if (!isClientIdOf(client.id, username)) throw refusal(2, 'the client id is neither the device id nor begins with it and a colon');
    if (!(await isGenuine(username, password.toString('utf8')))) throw refusal(4, 'wrong username or password');
    const { keepalive = 0, will } = packet;
    if (keepalive === 0 || keepalive > MAX_KEEP_ALIVE_SECONDS) throw refusal(5, `the keep-alive of ${keepalive} s is not within 1 to 60 s`);
    if (will !== undefined && publishableWord(username, client.id, will.topic) === null) {
      throw refusal(5, `the last will goes to ${will.topic}, outside the device's topics`);
    }
    signedInAfter.set(client, revocations.get(username));
    connections.signIn(username, client);
  }

  async function receive(client: Client, packet: PublishPacket): Promise<void> {
    const deviceId = connections.deviceOf(client);
    const word = deviceId === undefined ? null : publishableWord(deviceId, client.id, packet.topic);
    if (deviceId === undefined || word === null) throw new Error(`not allowed to publish to ${packet.topic}`);
    const isWill = packet === asked.get(client)?.will;
    // Closing the broker sends the will of every client, and so does a takeover: both say nothing of the device.
    if (isWill && (isStopping || connections.isReplaced(client))) throw new Error('a stale last will');
    if (isStopping) throw new Error('stopping');
    if (word !== 'state') packet.retain = false;
    const payload = typeof packet.payload === 'string' ? Buffer.from(packet.payload) : packet.payload;
    await policy.receive({ deviceId, word, payload, retained: false, isWill });
  }

  const aedes = await Aedes.createBroker({
    // With a bound, a flood whose subscriber leaves overflows the stack in the emitter.
    concurrency: 0,
    connectTimeout: limits.connectTimeoutMs,
    drainTimeout: limits.drainTimeoutMs,
    maxTopicLevels: 8,
    preConnect(client, packet, done) {
      // Sessions are kept in memory and never expire: of a device only the main one is, or ever new names would fill it.
      if (packet.clientId !== packet.username) packet.clean = true;
      asked.set(client, packet);
      done(null, !isStopping);
    },
    authenticate(client, username, password, done) {
      signIn(client, username, password).then(
        () => done(null, true),
        (error: unknown) => {
          const isRefusal = error instanceof Error && 'returnCode' in error;
          if (!isRefusal) log.warn({ username, error: String(error) }, 'A sign-in could not be checked');
          done(isRefusal ? (error as ReturnType<typeof refusal>) : refusal(3, 'the sign-in could not be checked'), null);
        },
      );
    },
    authorizePublish(client, packet, done) {
      if (client === null) return done(new Error('a last will without its client'));
      const stored = receive(client, packet);
      receiving.add(stored);
      stored
        .then(
          () => done(null),
          (error: unknown) => done(error instanceof Error ? error : new Error(String(error))),
        )
        .finally(() => receiving.delete(stored))
        .catch((error: unknown) => log.warn({ error: String(error) }, 'An acknowledgement failed'));
    },
    authorizeSubscribe(client, subscription, done) {
      const deviceId = connections.deviceOf(client);
      const isAllowed = deviceId !== undefined && mayHear(deviceId, subscription.topic);
      if (!isAllowed) log.warn({ deviceId, topic: subscription.topic }, 'A device may not subscribe to this topic');
      done(null, isAllowed ? subscription : null);
    },
    // The last gate: a refused subscription of a kept session is remembered by the broker all the same.
    authorizeForward(client, packet) {
      const deviceId = connections.deviceOf(client);
      return deviceId !== undefined && mayHear(deviceId, packet.topic) ? packet : null;
    },
  });

  aedes.on('connackSent', (connack, client) => {
    const deviceId = connections.deviceOf(client);
    const { conn } = client;
    if (connack.returnCode !== 0 || deviceId === undefined || !(conn instanceof GuardedConnection) || conn.destroyed) return;
    // The password was withdrawn after it was checked, when this client could not yet be found among the open ones.
    if (signedInAfter.get(client) !== revocations.get(deviceId)) {
      conn.destroy();
      return;
    }
    conn.once('close', () => {
      if (connections.close(client)) tell('disconnected', () => policy.disconnected(deviceId));
    });
    if (connections.open(deviceId, client)) tell('connected', () => policy.connected(deviceId));
    conn.accept(bucketOf(deviceId));
    // A kept session comes back with its subscriptions and does not send them again.
    if (connack.sessionPresent) tell('listening', () => policy.listening?.(deviceId));
  });
  aedes.on('subscribe', (subscriptions, client) => {
    const deviceId = connections.deviceOf(client);
    if (deviceId === undefined || client.closed) return;
    const hearsOrders = subscriptions.some(({ topic, qos }) => Number(qos) < 128 && topic.endsWith('/order'));
    if (hearsOrders) tell('listening', () => policy.listening?.(deviceId));
  });
  const describe = (client: Client) => ({
    clientId: client.id,
    address: client.conn instanceof GuardedConnection ? client.conn.remoteAddress : '',
  });
  aedes.on('clientError', (client, error) => log.info({ ...describe(client), error: error.message }, 'A device connection failed'));
  aedes.on('connectionError', (client, error) => log.info({ ...describe(client), error: error.message }, 'A connection was refused'));
  const emitter: EventEmitter = aedes;
  emitter.on('error', (error: Error) => log.warn({ error: error.message }, 'The broker failed to keep a message'));

  const listener = await listen({
    host: options.host,
    port: options.port,
    ...(options.tls === undefined ? {} : { tls: options.tls }),
    maxSocketsPerAddress: limits.maxSocketsPerAddress,
    onConnection(socket) {
      const connection = new GuardedConnection(socket);
      sockets.add(connection);
      connection.once('close', () => sockets.delete(connection));
      aedes.handle(connection);
    },
    onRefused: (address, why) => log.warn({ address, why }, 'A connection was refused'),
  });

  return {
    port: listener.port,
    publish(topic, payload, { retain, qos }) {
      if (isStopping) return Promise.reject(new Error('The broker is stopping'));
      return new Promise((resolve, reject) => {
        const packet: PublishPacket = { cmd: 'publish', topic, payload, retain, qos, dup: false };
        aedes.publish(packet, (error) => (error ? reject(error) : resolve()));
      });
    },
    isConnected: connections.isConnected,
    disconnect(deviceId) {
      revocations.set(deviceId, (revocations.get(deviceId) ?? 0) + 1);
      for (const client of connections.clientsOf(deviceId)) client.close();
    },
    async close() {
      if (isStopping) return;
      isStopping = true;
      await listener.stop();
      const patience = new Promise<void>((resolve) => setTimeout(resolve, DRAIN_ON_CLOSE_MS).unref());
      await Promise.race([Promise.allSettled(receiving), patience]);
      // The acknowledgements are written when the event loop comes round.
      await new Promise((resolve) => setImmediate(resolve));
      await new Promise<void>((resolve) => aedes.close(resolve));
      for (const socket of sockets) socket.destroy();
    },
  };
}
