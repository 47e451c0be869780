import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import { createWorkLoop } from '../orders/work-loop.ts';
import { insertNotice, type Notice } from './insert-notice.ts';
import type { Mailer } from './mailer.ts';

const LOOK_EVERY_MS = 15_000;
/** A sender that died in the middle gives its mail back after this long. */
const LEASE_MS = 60_000;
const MOST_ATTEMPTS = 8;

export interface Notify {
  /** Writes a mail into the outbox, in the same unit as what it tells of; it goes out after the commit. */
  enqueue(tx: Transaction, notice: Notice): void;
  /** Works through what is due now; resolves when nothing is. */
  deliver(): Promise<void>;
  close(): Promise<void>;
}

/** Sends the outbox. Without a mailer a notice is kept where the app shows it. */
export function createNotify(core: Core, mailer: Mailer | null): Notify {
  const { clock, writer, log } = core;

  /** Takes one due notice under a lease, in the same unit that looks for it. */
  function lease(): Promise<Row<'notice'> | undefined> {
    return writer.commit((tx) => {
      const nowMs = clock.nowMs();
      const due = tx.first(
        query.selectFrom('notice').selectAll().where('state', '=', 'waiting').where('leaseUntilMs', '<=', nowMs).orderBy('id').limit(1),
      );
      if (due === undefined) return undefined;
      const attempts = due.attempts + 1;
      tx.run(
        query
          .updateTable('notice')
          .set({ attempts, leaseUntilMs: nowMs + LEASE_MS })
          .where('id', '=', due.id),
      );
      return { ...due, attempts };
    });
  }

  function settle(id: string, change: Partial<Pick<Row<'notice'>, 'state' | 'leaseUntilMs' | 'sentAtMs'>>): Promise<unknown> {
    return writer.commit((tx) => tx.run(query.updateTable('notice').set(change).where('id', '=', id)));
  }

  async function send(notice: Row<'notice'>): Promise<void> {
    if (mailer === null) {
      await settle(notice.id, { state: 'kept' });
      return;
    }
    try {
      const messageId = `<${notice.id}@steadfall.invalid>`;
      await mailer.send({ messageId, to: notice.toAddress, subject: notice.subject, text: notice.body });
      await settle(notice.id, { state: 'sent', sentAtMs: clock.nowMs() });
    } catch (error) {
      log.warn({ err: error, notice: notice.id, attempts: notice.attempts }, 'a mail could not be sent');
      const retryMs = Math.min(3_600_000, 15_000 * 2 ** notice.attempts);
      const isLast = notice.attempts >= MOST_ATTEMPTS;
      await settle(notice.id, isLast ? { state: 'failed' } : { leaseUntilMs: clock.nowMs() + retryMs });
    }
  }

  const loop = createWorkLoop({
    name: 'Sending mail',
    writer,
    log,
    everyMs: LOOK_EVERY_MS,
    async work() {
      for (let notice = await lease(); notice !== undefined; notice = await lease()) await send(notice);
    },
  });

  return {
    enqueue(tx, notice) {
      insertNotice(tx, notice);
      loop.request();
    },
    deliver: () => loop.run(),
    async close() {
      await loop.close();
      mailer?.close();
    },
  };
}
