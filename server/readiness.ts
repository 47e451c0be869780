import type { Core } from './core.ts';
import type { ReadinessChecks } from './http/local-routes.ts';

export interface ReadinessStates {
  broker: () => boolean;
  demo: () => boolean;
  running: () => boolean;
}

/** Ready is whoever can keep what comes in: the database takes a write, the broker is up, and the demo has its history. */
export function createReadiness(core: Core, states: ReadinessStates): ReadinessChecks {
  async function isWritable(): Promise<boolean> {
    const upsert = `insert into job (name, leaseOwner, leaseUntilMs, fencingToken, cursor) values ('readiness', null, ?, 0, null)
      on conflict (name) do update set leaseUntilMs = excluded.leaseUntilMs`;
    try {
      await core.writer.commit((tx) => tx.prepare(upsert).run(core.clock.nowMs()));
      return true;
    } catch (error) {
      core.log.error({ err: error }, 'the database takes no write');
      return false;
    }
  }

  return async () => ({ database: await isWritable(), broker: states.broker(), demo: states.demo(), running: states.running() });
}
