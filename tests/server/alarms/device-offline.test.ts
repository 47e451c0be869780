import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { evidenceOf } from '../../../server/alarms/alarm-row.ts';
import { type Bench, openBench } from './alarm-bench.ts';

let bench: Bench;

beforeEach(async () => {
  bench = await openBench();
  await bench.alarms.start();
});

afterEach(() => bench.close());

describe('a device', () => {
  it('that is back within ten seconds calls nobody', async () => {
    await bench.hear(true);
    await bench.hear(false);
    await bench.pass(9_000);
    await bench.hear(true);
    await bench.pass(20_000);
    expect(await bench.all()).toEqual([]);
  });

  it('that stays away is an alarm after ten seconds, and stops nothing', async () => {
    await bench.hear(true);
    await bench.hear(false);
    await bench.pass(10_000);
    const [alarm] = await bench.open();
    expect(alarm).toMatchObject({
      code: 'device-offline',
      target: `device:${bench.pumpId}`,
      limitKind: 'soft',
      priority: 'medium',
      interlock: 0,
    });
    expect(alarm === undefined ? {} : evidenceOf(alarm)).toMatchObject({ deviceId: bench.pumpId, deviceName: 'Pump' });
    expect(bench.port.stops).toEqual([]);
  });

  it('that is back for ten seconds is no alarm any more, once somebody saw it', async () => {
    await bench.hear(true);
    await bench.hear(false);
    await bench.pass(10_000);
    const [alarm] = await bench.open();
    if (alarm === undefined) throw new Error('no alarm');
    await bench.alarms.acknowledge(alarm.id, bench.userId);
    await bench.hear(true);
    await bench.pass(9_000);
    expect(await bench.open()).toMatchObject([{ active: 1 }]);
    await bench.pass(1_000);
    expect(await bench.open()).toEqual([]);
  });

  it('that was never heard is no alarm', async () => {
    await bench.pass(20_000, 5_000);
    expect(await bench.all()).toEqual([]);
  });

  it('whose delay runs while the server restarts still calls in time', async () => {
    await bench.hear(true);
    await bench.hear(false);
    await bench.pass(4_000);
    await bench.restart();
    await bench.pass(6_000);
    expect(await bench.open()).toHaveLength(1);
  });
});
