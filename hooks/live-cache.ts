import type { QueryClient } from '@tanstack/react-query';
import type { Alarm } from '#shared/contract/alarms.ts';
import type { Device, DeviceState } from '#shared/contract/devices.ts';
import type { LiveFrame } from '#shared/contract/live.ts';
import type { Points, Run, Series, Tape } from '#shared/contract/telemetry.ts';
import { keys } from './keys.ts';

interface Page<Item> {
  items: Item[];
  next: string | null;
}

/** `items` with `item` in the place of its older self, or put in order of `timeOf`, newest first. */
function upsert<Item extends { id: string }>(items: Item[], item: Item, timeOf: (item: Item) => number): Item[] {
  const others = items.filter((other) => other.id !== item.id);
  const place = others.findIndex((other) => timeOf(other) <= timeOf(item));
  return place === -1 ? [...others, item] : [...others.slice(0, place), item, ...others.slice(place)];
}

function updatePage<Item>(client: QueryClient, key: readonly unknown[], change: (items: Item[]) => Item[]): void {
  client.setQueryData<Page<Item>>(key, (page) => page && { ...page, items: change(page.items) });
}

/** Puts an alarm among those of its system; one that is over and seen leaves the list. */
export function putAlarm(client: QueryClient, alarm: Alarm): void {
  updatePage<Alarm>(client, keys.alarms(alarm.systemId), (items) =>
    alarm.state === 'normal' ? items.filter((other) => other.id !== alarm.id) : upsert(items, alarm, (one) => Date.parse(one.raisedAt)),
  );
}

/** The tape with what a run just said; null when no slot of the tape is its own, so that the tape must be asked for. */
export function tapeWithRun(tape: Tape, run: Run): Tape | null {
  const dueT = run.dueAt === null ? null : Date.parse(run.dueAt);
  const index = tape.slots.findIndex(
    (slot) => slot.runId === run.id || (slot.deviceId === run.deviceId && slot.head === run.head && slot.dueT === dueT),
  );
  const slot = tape.slots[index];
  // How an ended run counts (delivered, partial, held) is the server's to say.
  if (slot === undefined || run.endedAt !== null) return null;
  const deliveredMl = Math.max(slot.deliveredMl, run.ml);
  const slots = tape.slots.with(index, { ...slot, mark: 'running', deliveredMl, runId: run.id });
  return { ...tape, slots, givenMl: tape.givenMl + (deliveredMl - slot.deliveredMl) };
}

function takeRun(client: QueryClient, systemId: string, run: Run): void {
  updatePage<Run>(client, keys.runs(systemId), (items) => upsert(items, run, (one) => Date.parse(one.beganAt)));
  let isPlaced = false;
  client.setQueryData<Tape>(keys.tape(systemId), (tape) => {
    if (tape === undefined) return tape;
    const next = tapeWithRun(tape, run);
    isPlaced = next !== null;
    return next ?? tape;
  });
  if (isPlaced) return;
  refetch(client, [
    keys.tape(systemId),
    keys.systemDetail(systemId),
    keys.systems(),
    keys.reservoirs(systemId),
    keys.allDoses(systemId),
    keys.rules(systemId),
  ]);
}

function takeSamples(client: QueryClient, systemId: string, data: { seriesId: string; t: number[]; v: number[] }): void {
  const lastIndex = data.t.reduce((best, t, index) => (t >= (data.t[best] ?? -Infinity) ? index : best), 0);
  const lastT = data.t[lastIndex];
  const lastValue = data.v[lastIndex];
  if (lastT === undefined || lastValue === undefined) return;
  const known = client.getQueryData<Page<Series>>(keys.series(systemId));
  if (known !== undefined && !known.items.some((series) => series.id === data.seriesId)) refetch(client, [keys.series(systemId)]);
  updatePage<Series>(client, keys.series(systemId), (items) =>
    items.map((series) => (series.id === data.seriesId && lastT >= (series.lastT ?? -Infinity) ? { ...series, lastT, lastValue } : series)),
  );
  for (const [key, points] of client.getQueriesData<Points>({ queryKey: [...keys.allPoints(systemId), data.seriesId] })) {
    const toMs = Number(key[5]);
    if (points !== undefined) client.setQueryData<Points>(key, pointsWithSamples(points, data, toMs));
  }
}

/** Raw points with newer samples at their end; those in buckets stay as they are, and so does what came late. */
export function pointsWithSamples(points: Points, data: { t: number[]; v: number[] }, toMs: number): Points {
  if (points.resolutionMs !== 0) return points;
  const lastT = points.t.at(-1) ?? -Infinity;
  const newer = data.t
    .map((t, index) => ({ t, v: data.v[index] }))
    .filter((one): one is { t: number; v: number } => one.t > lastT && one.t < toMs && one.v !== undefined);
  if (newer.length === 0) return points;
  newer.sort((a, b) => a.t - b.t);
  const values = newer.map(({ v }) => v);
  return {
    resolutionMs: 0,
    t: [...points.t, ...newer.map(({ t }) => t)],
    min: [...points.min, ...values],
    mean: [...points.mean, ...values],
    max: [...points.max, ...values],
    count: [...points.count, ...newer.map(() => 1)],
  };
}

function takeState(client: QueryClient, systemId: string, state: DeviceState): void {
  updatePage<Device>(client, keys.devices(systemId), (items) =>
    items.map((device) => (device.id === state.deviceId ? { ...device, state } : device)),
  );
  refetch(client, [keys.systemDetail(systemId), keys.systems(), keys.tape(systemId), keys.heads(systemId)]);
}

const waiting = new WeakMap<QueryClient, Map<string, readonly unknown[]>>();

/** Asks again, at most about once a second for the same key, however many frames ask for it. */
function refetch(client: QueryClient, wanted: readonly (readonly unknown[])[]): void {
  const pending = waiting.get(client) ?? new Map<string, readonly unknown[]>();
  if (pending.size === 0) {
    setTimeout(() => {
      const due = [...pending.values()];
      pending.clear();
      for (const queryKey of due) void client.invalidateQueries({ queryKey });
    }, 300);
  }
  waiting.set(client, pending);
  for (const key of wanted) pending.set(JSON.stringify(key), key);
}

/** Writes a frame of the live stream into the cache: the one place where that is done. */
export function writeFrame(client: QueryClient, frame: LiveFrame): void {
  const { systemId } = frame;
  switch (frame.type) {
    case 'samples':
      return takeSamples(client, systemId, frame.data);
    case 'run':
      return takeRun(client, systemId, frame.data);
    case 'state':
      return takeState(client, systemId, frame.data);
    case 'test': {
      const { deleted, ...test } = frame.data;
      updatePage<typeof test>(client, keys.tests(systemId), (items) =>
        deleted === true ? items.filter((other) => other.id !== test.id) : upsert(items, test, (one) => Date.parse(one.at)),
      );
      return refetch(client, [keys.systemDetail(systemId), keys.systems()]);
    }
    case 'event': {
      const { deleted, ...event } = frame.data;
      return updatePage<typeof event>(client, keys.events(systemId), (items) =>
        deleted === true ? items.filter((other) => other.id !== event.id) : upsert(items, event, (one) => Date.parse(one.at)),
      );
    }
    case 'alarm':
      putAlarm(client, frame.data);
      return refetch(client, [
        keys.alarm(frame.data.id),
        keys.alarmLog(systemId),
        keys.systemDetail(systemId),
        keys.systems(),
        keys.heads(systemId),
        keys.rules(systemId),
      ]);
    case 'plan':
      return refetch(client, [keys.system(systemId), keys.systems()]);
    case 'gap':
      return refetchAll(client);
  }
}

/** What came in between is lost: everything on the screen is asked for again, the rest when it is next shown. */
export function refetchAll(client: QueryClient): void {
  const unanswered = client
    .getQueryCache()
    .findAll({ fetchStatus: 'fetching' })
    .filter((query) => query.state.data === undefined);
  void client.invalidateQueries();
  for (const query of unanswered) {
    // A first answer that is on its way may have left the server before the stream opened. A failure is in the query's own state.
    const again = () => client.invalidateQueries({ queryKey: query.queryKey, exact: true });
    query.promise?.then(again, () => undefined);
  }
}
