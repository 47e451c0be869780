import { createTransport } from 'nodemailer';

export interface Mail {
  /** Names the mail to the receiving server, so that one sent twice after a crash shows as the same. */
  messageId: string;
  to: string;
  subject: string;
  text: string;
}

export interface Mailer {
  send(mail: Mail): Promise<void>;
  close(): void;
}

/** Mail by SMTP, as plain text only. */
export function createSmtpMailer(smtpUrl: string, from: string): Mailer {
  const transport = createTransport(smtpUrl, { from, disableFileAccess: true, disableUrlAccess: true });
  return {
    async send(mail) {
      await transport.sendMail(mail);
    },
    close: () => transport.close(),
  };
}
