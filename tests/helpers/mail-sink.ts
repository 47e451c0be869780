import type { AddressInfo } from 'node:net';
import { text } from 'node:stream/consumers';
import { SMTPServer } from 'smtp-server';

export interface ReceivedMail {
  to: string[];
  /** Headers and body as they came. */
  source: string;
}

export interface MailSink {
  url: string;
  received: ReceivedMail[];
  /** While true, each mail is refused for now. */
  refuses: boolean;
  close(): Promise<void>;
}

/** A mail server that keeps what it gets. */
export async function openMailSink(): Promise<MailSink> {
  const sink: Omit<MailSink, 'url' | 'close'> = { received: [], refuses: false };
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    onData(stream, session, done) {
      text(stream).then((source) => {
        if (sink.refuses) return done(Object.assign(new Error('Not now'), { responseCode: 451 }));
        sink.received.push({ to: session.envelope.rcptTo.map((recipient) => recipient.address), source });
        done();
      }, done);
    },
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.server.address() as AddressInfo;
  return Object.assign(sink, {
    url: `smtp://127.0.0.1:${port}`,
    close: () => new Promise<void>((resolve) => server.close(resolve)),
  });
}
