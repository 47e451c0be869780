import { z } from 'zod';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';

/** How far the demo has come, kept in its job row: the anchor is the moment that its past leads up to. */
const progressSchema = z.object({ anchorMs: z.number().int(), stage: z.enum(['seeding', 'live']) });
export type DemoProgress = z.infer<typeof progressSchema>;

const JOB = 'demo';

/**
 * What was reached, or the start of a new demo where the database is still empty.
 * @returns null for a database that somebody else has begun: the demo must not mix itself into it.
 */
export function takeUpDemo(core: Core): Promise<DemoProgress | null> {
  return core.writer.commit((tx) => {
    const job = tx.first(query.selectFrom('job').select('cursor').where('name', '=', JOB));
    if (job !== undefined && job.cursor !== null) return progressSchema.parse(JSON.parse(job.cursor));
    if (tx.first(query.selectFrom('user').select('id').limit(1)) !== undefined) return null;
    const progress: DemoProgress = { anchorMs: core.clock.nowMs(), stage: 'seeding' };
    const cursor = JSON.stringify(progress);
    tx.run(query.insertInto('job').values({ name: JOB, leaseOwner: null, leaseUntilMs: 0, fencingToken: 0, cursor }));
    return progress;
  });
}

export async function keepDemoProgress(core: Core, progress: DemoProgress): Promise<void> {
  await core.writer.commit((tx) =>
    tx.run(
      query
        .updateTable('job')
        .set({ cursor: JSON.stringify(progress) })
        .where('name', '=', JOB),
    ),
  );
}
