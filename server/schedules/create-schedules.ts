import type { Role } from '#shared/domain/role.ts';
import { topicOf } from '#shared/mqtt/topics.ts';
import type { Actor } from '../audit/record-audit.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import type { DevicePublisher } from '../orders/device-publisher.ts';
import { createWorkLoop } from '../orders/work-loop.ts';
import { putSchedule, type ScheduleBody } from './put-schedule.ts';
import { type Revision, reviseSchedule } from './revise-schedule.ts';

export interface Schedules {
  /** Sets doses by hand and has the pumps told. Resolves once it is committed; the pump proves it by its state. */
  put(systemId: string, body: ScheduleBody, actor: Actor, role: Role): Promise<void>;
  /** {@link reviseSchedule} inside the caller's unit; the new version is published after its commit. */
  revise(tx: Transaction, revision: Revision): number | null;
  /** To be called inside a unit that revised a schedule: it is published after its commit. */
  request(): void;
  /** Publishes what the broker has not yet taken; resolves when it has. */
  publishDue(): Promise<void>;
  /** Publishes the newest version of every pump: for the start, since the broker keeps nothing over a restart. */
  republishAll(): Promise<void>;
  close(): Promise<void>;
}

const RETRY_EVERY_MS = 1_000;

/** Doses by schedule, from the person who sets them to the retained message of each pump. */
export function createSchedules(core: Core, publisher: DevicePublisher): Schedules {
  async function publish({ deviceId, version, body }: { deviceId: string; version: number; body: string }): Promise<void> {
    await publisher.publish(topicOf(deviceId, 'schedule'), body, { retain: true, qos: 1 });
    const nowMs = core.clock.nowMs();
    await core.writer.commit((tx) =>
      tx.run(
        query
          .updateTable('scheduleVersion')
          .set({ publishedAtMs: nowMs })
          .where('deviceId', '=', deviceId)
          .where('version', '<=', version)
          .where('publishedAtMs', 'is', null),
      ),
    );
  }

  const newestOf = (deviceId: string) =>
    core.reader
      .selectFrom('scheduleVersion')
      .select(['deviceId', 'version', 'body'])
      .where('deviceId', '=', deviceId)
      .orderBy('version', 'desc')
      .limit(1)
      .executeTakeFirstOrThrow();

  async function publishNewest(deviceIds: string[]): Promise<void> {
    // One pump whose message is not taken keeps no other from getting its own.
    const results = await Promise.allSettled(deviceIds.map(async (deviceId) => publish(await newestOf(deviceId))));
    const failures = results.flatMap((result): unknown[] => (result.status === 'rejected' ? [result.reason] : []));
    if (failures.length > 0) throw new AggregateError(failures, 'Schedules could not be published');
  }

  /** Set at the start, and cleared only once every pump's schedule was taken. */
  let isRepublishing = false;

  async function publishPending(): Promise<void> {
    const everything = isRepublishing;
    const all = core.reader.selectFrom('scheduleVersion').select('deviceId').distinct();
    const rows = await (everything ? all : all.where('publishedAtMs', 'is', null)).execute();
    await publishNewest(rows.map((row) => row.deviceId));
    if (everything) isRepublishing = false;
  }

  // One loop for both, so that no older version is ever published after a newer one.
  const loop = createWorkLoop({
    name: 'Publishing schedules',
    writer: core.writer,
    log: core.log,
    everyMs: RETRY_EVERY_MS,
    work: publishPending,
  });

  return {
    put: (systemId, body, actor, role) =>
      core.writer.commit((tx) => {
        putSchedule(tx, { systemId, body, actor, role, nowMs: core.clock.nowMs() });
        loop.request();
      }),
    revise(tx, revision) {
      const version = reviseSchedule(tx, revision);
      if (version !== null) loop.request();
      return version;
    },
    request: () => loop.request(),
    publishDue: () => loop.run(),
    republishAll() {
      isRepublishing = true;
      return loop.run();
    },
    close: () => loop.close(),
  };
}
