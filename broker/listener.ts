import { createServer, type AddressInfo, type Server, type Socket } from 'node:net';
import { createServer as createTlsServer } from 'node:tls';

export interface ListenerOptions {
  readonly host: string;
  readonly port: number;
  readonly tls?: { readonly key: string | Buffer; readonly cert: string | Buffer };
  /** One address cannot use up every file descriptor. */
  readonly maxSocketsPerAddress: number;
  onConnection(socket: Socket): void;
  onRefused(address: string, why: string): void;
}

export interface Listener {
  readonly port: number;
  /** Takes no further connections. Those that are open stay. */
  stop(): Promise<void>;
}

/** Listens on TCP, or TLS, and hands over each socket with Nagle's delay switched off: an order is never held back. */
export async function listen(options: ListenerOptions): Promise<Listener> {
  const counts = new Map<string, number>();

  function isWithinLimit(socket: Socket): boolean {
    const address = socket.remoteAddress ?? '';
    const count = (counts.get(address) ?? 0) + 1;
    if (count > options.maxSocketsPerAddress) {
      options.onRefused(address, 'too many connections from one address');
      socket.destroy();
      return false;
    }
    counts.set(address, count);
    socket.once('close', () => {
      const left = (counts.get(address) ?? 1) - 1;
      if (left === 0) counts.delete(address);
      else counts.set(address, left);
    });
    return true;
  }

  function createListening(): Server {
    if (options.tls === undefined) {
      return createServer({ noDelay: true }, (socket) => {
        if (isWithinLimit(socket)) options.onConnection(socket);
      });
    }
    const server = createTlsServer(
      { ...options.tls, noDelay: true, minVersion: 'TLSv1.2', handshakeTimeout: 10_000 },
      options.onConnection,
    );
    // The count begins before the handshake, which is what costs.
    server.on('connection', isWithinLimit);
    server.on('tlsClientError', (error, socket) => options.onRefused(socket.remoteAddress ?? '', error.message));
    return server;
  }

  const server = createListening();
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(options.port, options.host, resolve);
  });
  server.on('error', (error) => options.onRefused('', error.message));
  const address = server.address() as AddressInfo;

  return {
    port: address.port,
    stop: () =>
      new Promise((resolve) => {
        server.close(() => resolve());
        // `close` waits for open connections; those are ended by their owner afterwards.
        resolve();
      }),
  };
}
