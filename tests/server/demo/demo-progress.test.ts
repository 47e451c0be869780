import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { addUser } from '../../../server/auth/users.ts';
import { keepDemoProgress, takeUpDemo } from '../../../server/demo/demo-progress.ts';
import { startDemo } from '../../../server/demo/start-demo.ts';
import { type ManualClock, manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';

describe('how far the demo has come', () => {
  let test: TestCore;
  let clock: ManualClock;
  beforeEach(async () => {
    clock = manualClock();
    test = await openTestCore(clock, { DEMO: '1' });
  });
  afterEach(() => test.close());

  it('begins on an empty database, now', async () => {
    expect(await takeUpDemo(test.core)).toEqual({ anchorMs: clock.nowMs(), stage: 'seeding' });
  });

  it('goes on from the moment at which it began, however often it is interrupted', async () => {
    const first = await takeUpDemo(test.core);
    clock.advance(86_400_000);
    expect(await takeUpDemo(test.core)).toEqual(first);
  });

  it('is known to be told once it was', async () => {
    const first = await takeUpDemo(test.core);
    if (first === null) throw new Error('the database was empty');
    await keepDemoProgress(test.core, { ...first, stage: 'live' });
    expect(await takeUpDemo(test.core)).toEqual({ ...first, stage: 'live' });
  });

  it('does not mix into a database that somebody has begun without it', async () => {
    await test.core.writer.commit((tx) =>
      addUser(tx, { email: 'somebody@reef.example', name: 'Somebody', passwordHash: 'none', nowMs: clock.nowMs() }),
    );
    const said: string[] = [];
    const demo = await startDemo({
      core: test.core,
      mqttUrl: 'mqtt://127.0.0.1:1',
      publishSchedules: () => Promise.resolve(),
      print: (line) => void said.push(line),
    });
    expect(demo.isReady()).toBe(true);
    expect(demo.signIns).toBeNull();
    expect(said).toEqual([expect.stringContaining('begun without the demo')]);
    expect(await test.core.reader.selectFrom('site').select('id').execute()).toEqual([]);
    await demo.close();
  });
});
