import { createIngest } from '../../server/ingest/create-ingest.ts';
import type { BenchPlace } from './bench-place.ts';
import { type Ratio, ratioOf } from './ratio.ts';

const ROUNDS = 5;
const TOGETHER = 3_000;
const ONE_BY_ONE = 300;
/** As many devices as wait for an acknowledgement at once. */
const IN_FLIGHT = 200;

/** One sample a message, as most probes send: what group commit gains where every acknowledgement means "on disk". */
export async function benchGroupCommit(place: BenchPlace): Promise<Ratio> {
  const { core } = place;
  const ingest = createIngest(core, { onReceipt: () => {}, onState: () => {}, onRun: () => {} });
  const { deviceId } = await place.addPump();
  const startSeconds = Math.floor(core.clock.nowMs() / 1000) - 86_400;
  let sent = 0;

  async function send(): Promise<void> {
    const payload = Buffer.from(JSON.stringify([{ n: 'ph', u: 'pH', v: 8 + (sent % 50) / 100, t: startSeconds + sent }]));
    sent += 1;
    await ingest.receive({ deviceId, word: 'senml', payload, receivedMs: core.clock.nowMs(), isWill: false });
  }

  /** Acknowledged samples per millisecond, of so many senders of whom each waits for its acknowledgement. */
  async function rate(senders: number, samples: number): Promise<number> {
    const beganMs = performance.now();
    const each = async () => {
      for (let index = 0; index < samples / senders; index += 1) await send();
    };
    await Promise.all(Array.from({ length: senders }, each));
    return samples / (performance.now() - beganMs);
  }

  await rate(IN_FLIGHT, TOGETHER); // Compiles and warms what both use.
  const rounds: number[] = [];
  for (let round = 0; round < ROUNDS; round += 1) {
    const alone = await rate(1, ONE_BY_ONE);
    rounds.push((await rate(IN_FLIGHT, TOGETHER)) / alone);
  }
  const { many } = await core.reader
    .selectFrom('sample')
    .select((of) => of.fn.countAll<number>().as('many'))
    .executeTakeFirstOrThrow();
  if (many !== sent) throw new Error(`${sent} samples were acknowledged, and ${many} are stored`);
  const means = `acknowledged samples per second at synchronous=FULL: ${IN_FLIGHT} messages in flight against one at a time, each a commit of its own`;
  return ratioOf('group-commit', means, rounds);
}
