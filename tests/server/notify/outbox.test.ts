import { afterEach, beforeEach, expect, it } from 'vitest';
import { createNotify, type Notify } from '../../../server/notify/create-notify.ts';
import type { Notice } from '../../../server/notify/insert-notice.ts';
import { createSmtpMailer } from '../../../server/notify/mailer.ts';
import { manualClock, type ManualClock, openTestCore, type TestCore } from '../../helpers/core.ts';
import { type MailSink, openMailSink } from '../../helpers/mail-sink.ts';

let clock: ManualClock;
let core: TestCore;
let sink: MailSink;
let notify: Notify;

beforeEach(async () => {
  clock = manualClock();
  core = await openTestCore(clock);
  sink = await openMailSink();
  notify = createNotify(core.core, createSmtpMailer(sink.url, 'Steadfall <steadfall@reef.example>'));
});

afterEach(async () => {
  await notify.close();
  await sink.close();
  await core.close();
});

function notice(change: Partial<Notice> = {}): Notice {
  const plain = { dedupeKey: 'a', siteId: null, toAddress: 'keeper@reef.example', subject: 'Look', body: 'At the pump.' };
  return { ...plain, nowMs: clock.nowMs(), ...change };
}

const enqueue = (...notices: Notice[]) => core.core.writer.commit((tx) => notices.forEach((one) => notify.enqueue(tx, one)));
const states = async () => (await core.core.reader.selectFrom('notice').select('state').orderBy('id').execute()).map((row) => row.state);

it('sends what was committed, and notes that it did', async () => {
  await enqueue(notice());
  await expect.poll(states).toEqual(['sent']);
  expect(sink.received).toHaveLength(1);
  expect(sink.received[0]?.to).toEqual(['keeper@reef.example']);
  expect(sink.received[0]?.source).toMatch(/^Subject: Look\r$/m);
  expect(sink.received[0]?.source).toContain('At the pump.');
});

it('sends one mail for one occasion', async () => {
  await enqueue(notice(), notice({ body: 'Again.' }));
  await enqueue(notice({ body: 'And again.' }));
  await notify.deliver();
  expect(sink.received).toHaveLength(1);
});

it('tries again later when the mail server refuses, and gives up in the end', async () => {
  sink.refuses = true;
  await enqueue(notice());
  await notify.deliver();
  expect(await states()).toEqual(['waiting']);
  sink.refuses = false;
  await notify.deliver();
  expect(sink.received).toHaveLength(0);
  clock.advance(30_000);
  await notify.deliver();
  expect(sink.received).toHaveLength(1);

  sink.refuses = true;
  await enqueue(notice({ dedupeKey: 'b' }));
  for (let attempt = 0; attempt < 8; attempt += 1) {
    await notify.deliver();
    clock.advance(3_600_000);
  }
  expect(await states()).toEqual(['sent', 'failed']);
});

it('takes up what a process left that died while sending, once its lease is over', async () => {
  const dead = createNotify(core.core, { send: () => new Promise(() => {}), close: () => {} });
  await core.core.writer.commit((tx) => dead.enqueue(tx, notice()));
  const attempts = () => core.core.reader.selectFrom('notice').select('attempts').executeTakeFirstOrThrow();
  await expect.poll(attempts).toEqual({ attempts: 1 });
  await notify.deliver();
  expect(sink.received).toHaveLength(0);
  clock.advance(60_000);
  await notify.deliver();
  expect(sink.received).toHaveLength(1);
});

it('lets no line break of a subject or an address start a header', async () => {
  await enqueue(
    notice({ subject: 'Look\r\nBcc: everybody@elsewhere.example', toAddress: 'keeper@reef.example\r\nBcc: x@elsewhere.example' }),
  );
  await notify.deliver();
  for (const { source } of sink.received) expect(source).not.toMatch(/^Bcc:/m);
  const row = await core.core.reader.selectFrom('notice').select(['subject', 'toAddress']).executeTakeFirstOrThrow();
  expect(row.subject).toBe('Look Bcc: everybody@elsewhere.example');
  expect(row.toAddress).not.toMatch(/[\r\n]/);
});

it('keeps mail where the app shows it when there is no mail server', async () => {
  const kept = createNotify(core.core, null);
  await core.core.writer.commit((tx) => kept.enqueue(tx, notice()));
  await expect.poll(states).toEqual(['kept']);
  await kept.close();
});
