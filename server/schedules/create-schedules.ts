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
  /** Pumps whose newest schedule goes out again although the broker had it before. */
  const toRepublish = new Set<string>();
  /** One publication a pump at a time, so that no older version ever follows a newer one; none waits for another pump. */
  const underWay = new Map<string, Promise<void>>();
  /** Pumps that got a newer version while one was under way. */
  const behind = new Set<string>();

  async function publishNewest(deviceId: string): Promise<void> {
    const { version, body } = await core.reader
      .selectFrom('scheduleVersion')
      .select(['version', 'body'])
      .where('deviceId', '=', deviceId)
      .orderBy('version', 'desc')
      .limit(1)
      .executeTakeFirstOrThrow();
    await publisher.publish(topicOf(deviceId, 'schedule'), body, { retain: true, qos: 1 });
    toRepublish.delete(deviceId);
    const nowMs = core.clock.nowMs();
    const markPublished = query
      .updateTable('scheduleVersion')
      .set({ publishedAtMs: nowMs })
      .where('deviceId', '=', deviceId)
      .where('version', '<=', version)
      .where('publishedAtMs', 'is', null);
    await core.writer.commit((tx) => tx.run(markPublished));
  }

  function start(deviceId: string): void {
    const publication = publishNewest(deviceId)
      .catch((error: unknown) => core.log.error({ error, deviceId }, 'A schedule could not be published, and is tried again'))
      .finally(() => {
        underWay.delete(deviceId);
        if (behind.delete(deviceId)) void loop.run();
      });
    underWay.set(deviceId, publication);
  }

  const loop = createWorkLoop({
    name: 'Publishing schedules',
    writer: core.writer,
    log: core.log,
    everyMs: RETRY_EVERY_MS,
    async work() {
      const due = await core.reader
        .selectFrom('scheduleVersion')
        .select('deviceId')
        .distinct()
        .where('publishedAtMs', 'is', null)
        .execute();
      for (const deviceId of new Set([...due.map((row) => row.deviceId), ...toRepublish])) {
        if (underWay.has(deviceId)) behind.add(deviceId);
        else start(deviceId);
      }
    },
  });

  async function publishDue(): Promise<void> {
    await loop.run();
    await Promise.all(underWay.values());
  }

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
    publishDue,
    async republishAll() {
      const rows = await core.reader.selectFrom('scheduleVersion').select('deviceId').distinct().execute();
      for (const row of rows) toRepublish.add(row.deviceId);
      await publishDue();
    },
    close: () => loop.close(),
  };
}
