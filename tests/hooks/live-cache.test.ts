import { QueryClient, QueryObserver } from '@tanstack/react-query';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { LiveFrame } from '#shared/contract/live.ts';
import { keys } from '../../hooks/keys.ts';
import { pointsWithSamples, refetchAll, tapeWithRun, writeFrame } from '../../hooks/live-cache.ts';
import { makeAlarm, makeDevice, makeRun, makeSlot, makeTape, nowMs, testId } from '../helpers/client-fixtures.ts';

const systemId = testId(1);
const at = (offsetMs: number) => new Date(nowMs + offsetMs).toISOString();
const page = <Item>(...items: Item[]) => ({ items, next: null });
const frame = (type: LiveFrame['type'], data: unknown) => ({ seq: 1, systemId, type, data }) as LiveFrame;
const test = (id: number, offsetMs: number) => ({
  id: testId(id),
  systemId,
  at: at(offsetMs),
  quantity: 'nitrate' as const,
  value: 12,
  unit: 'mg/L NO3' as const,
  below: false,
  canonicalMgPerL: 12,
  note: '',
  by: 'Keeper',
  edited: false,
});

let client: QueryClient;
const refetched = () => vi.mocked(client.invalidateQueries).mock.calls.map(([filter]) => filter?.queryKey);

beforeEach(() => {
  vi.useFakeTimers();
  client = new QueryClient();
  vi.spyOn(client, 'invalidateQueries').mockResolvedValue();
});
afterEach(() => {
  client.clear();
  vi.useRealTimers();
});

describe('a run', () => {
  it('fills its own slot of the tape as it goes', () => {
    const tape = makeTape([makeSlot({ dueT: nowMs - 1_000_000 }), makeSlot()]);
    const next = tapeWithRun(tape, makeRun({ ml: 0.2 }));
    expect(next?.slots[1]).toMatchObject({ mark: 'running', deliveredMl: 0.2, runId: 'run-1' });
    expect(next?.slots[0]?.mark).toBe('planned');
    expect(next?.givenMl).toBeCloseTo(3.2);
  });

  it('counts its steps once, also when they come out of order', () => {
    const tape = makeTape([makeSlot()]);
    const after = [0.2, 0.4, 0.3].reduce((current, ml) => tapeWithRun(current, makeRun({ ml })) ?? current, tape);
    expect(after.slots[0]?.deliveredMl).toBe(0.4);
    expect(after.givenMl).toBeCloseTo(3.4);
  });

  it('leaves to the server how it counts once it has ended, and what no slot planned', () => {
    const tape = makeTape([makeSlot()]);
    expect(tapeWithRun(tape, makeRun({ endedAt: at(10) }))).toBeNull();
    expect(tapeWithRun(tape, makeRun({ dueAt: null, cause: 'button' }))).toBeNull();
  });

  it('asks for the tape and the status when it ends, once for many frames', async () => {
    client.setQueryData(keys.tape(systemId), makeTape([makeSlot()]));
    for (let step = 0; step < 5; step += 1) writeFrame(client, frame('run', makeRun({ endedAt: at(10) })));
    await vi.advanceTimersByTimeAsync(1000);
    expect(refetched().filter((key) => JSON.stringify(key) === JSON.stringify(keys.tape(systemId)))).toHaveLength(1);
    expect(refetched()).toContainEqual(keys.systemDetail(systemId));
  });

  it('stands once in the list of runs', () => {
    client.setQueryData(keys.runs(systemId), page());
    writeFrame(client, frame('run', makeRun({ ml: 0.1 })));
    writeFrame(client, frame('run', makeRun({ ml: 0.3 })));
    expect(client.getQueryData(keys.runs(systemId))).toEqual(page(makeRun({ ml: 0.3 })));
  });
});

describe('samples', () => {
  const series = { id: testId(300), systemId, deviceId: testId(41), channel: 'ph', name: null, quantity: 'ph', unit: 'pH', conflicts: 0 };

  it('move the newest value of their series, and late ones do not', () => {
    client.setQueryData(keys.series(systemId), page({ ...series, lastT: 1000, lastValue: 8.1 }));
    writeFrame(client, frame('samples', { seriesId: series.id, t: [3000, 2000], v: [8.3, 8.2] }));
    writeFrame(client, frame('samples', { seriesId: series.id, t: [1500], v: [7] }));
    expect(client.getQueryData(keys.series(systemId))).toEqual(page({ ...series, lastT: 3000, lastValue: 8.3 }));
  });

  it('of a series not seen before ask for the list', async () => {
    client.setQueryData(keys.series(systemId), page());
    writeFrame(client, frame('samples', { seriesId: series.id, t: [1], v: [1] }));
    await vi.advanceTimersByTimeAsync(1000);
    expect(refetched()).toContainEqual(keys.series(systemId));
  });

  it('lengthen raw points up to the end of their range', () => {
    const raw = { resolutionMs: 0, t: [1], min: [5], mean: [5], max: [5], count: [1] };
    const next = pointsWithSamples(raw, { t: [3, 2, 1, 99], v: [7, 6, 5, 9] }, 50);
    expect(next).toEqual({ resolutionMs: 0, t: [1, 2, 3], min: [5, 6, 7], mean: [5, 6, 7], max: [5, 6, 7], count: [1, 1, 1] });
  });

  it('leave points in buckets as they are', () => {
    const buckets = { resolutionMs: 60_000, t: [0], min: [5], mean: [5], max: [5], count: [6] };
    expect(pointsWithSamples(buckets, { t: [70_000], v: [6] }, 100_000)).toBe(buckets);
  });
});

describe('other frames', () => {
  it('put a test in its place in time, replace it, and take it out', () => {
    client.setQueryData(keys.tests(systemId), page(test(1, 0), test(2, -2000)));
    writeFrame(client, frame('test', test(3, -1000)));
    const ids = () => client.getQueryData<{ items: { id: string }[] }>(keys.tests(systemId))?.items.map((one) => one.id);
    expect(ids()).toEqual([testId(1), testId(3), testId(2)]);
    writeFrame(client, frame('test', { ...test(3, -3000), edited: true }));
    expect(ids()).toEqual([testId(1), testId(2), testId(3)]);
    writeFrame(client, frame('test', { ...test(3, -3000), deleted: true }));
    expect(ids()).toEqual([testId(1), testId(2)]);
  });

  it('take an alarm out once it is over and seen', () => {
    client.setQueryData(keys.alarms(systemId), page());
    writeFrame(client, frame('alarm', makeAlarm()));
    expect(client.getQueryData(keys.alarms(systemId))).toEqual(page(makeAlarm()));
    writeFrame(client, frame('alarm', makeAlarm({ state: 'normal' })));
    expect(client.getQueryData(keys.alarms(systemId))).toEqual(page());
  });

  it('bring the state of a device', () => {
    const device = makeDevice('idle');
    client.setQueryData(keys.devices(systemId), page(device));
    const state = makeDevice('stopped').state;
    writeFrame(client, frame('state', state));
    expect(client.getQueryData(keys.devices(systemId))).toEqual(page({ ...device, state }));
  });

  it('of a plan ask for the whole system again', async () => {
    writeFrame(client, frame('plan', { reason: 'stop' }));
    await vi.advanceTimersByTimeAsync(1000);
    expect(refetched()).toContainEqual(keys.system(systemId));
  });

  it('that tell of a gap ask for everything again', () => {
    writeFrame(client, frame('gap', {}));
    expect(client.invalidateQueries).toHaveBeenCalledWith();
  });

  it('change nothing that was never asked for', () => {
    writeFrame(client, frame('test', test(1, 0)));
    expect(client.getQueryData(keys.tests(systemId))).toBeUndefined();
  });
});

describe('what came in between', () => {
  it('is asked for again also where the first answer was still on its way', async () => {
    vi.mocked(client.invalidateQueries).mockRestore();
    const answers: ((answer: string) => void)[] = [];
    const observer = new QueryObserver(client, {
      queryKey: keys.tests(systemId),
      queryFn: () => new Promise<string>((resolve) => answers.push(resolve)),
    });
    const stop = observer.subscribe(() => undefined);
    refetchAll(client);
    expect(answers).toHaveLength(1);
    answers[0]?.('before the change');
    await vi.advanceTimersByTimeAsync(0);
    expect(answers).toHaveLength(2);
    answers[1]?.('with the change');
    await vi.advanceTimersByTimeAsync(0);
    expect(client.getQueryData(keys.tests(systemId))).toBe('with the change');
    expect(answers).toHaveLength(2);
    stop();
  });
});
