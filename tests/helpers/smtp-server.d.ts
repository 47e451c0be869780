/** The package comes without types: what the tests use of it. */
declare module 'smtp-server' {
  import type { Readable } from 'node:stream';
  import type { Server } from 'node:net';

  export interface SMTPServerOptions {
    authOptional?: boolean;
    disabledCommands?: string[];
    logger?: boolean;
    onData(stream: Readable, session: { envelope: { rcptTo: { address: string }[] } }, done: (error?: Error) => void): void;
  }

  export class SMTPServer {
    constructor(options: SMTPServerOptions);
    readonly server: Server;
    listen(port: number, host: string, ready: () => void): Server;
    close(done: () => void): void;
  }
}
