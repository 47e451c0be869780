import type { MqttClient } from 'mqtt';
import { type OrderPayload, orderPayloadSchema, type SchedulePayload, schedulePayloadSchema } from '#shared/mqtt/payloads.ts';
import { topicOf } from '#shared/mqtt/topics.ts';
import { connectClient } from './broker.ts';
import { eventually } from './eventually.ts';

/** What a pump does with an order: carry it out, say no, or say nothing. */
export type Manner = 'obeys' | 'refuses' | 'silent';

/** A pump over a real connection, as obedient as a test wants it. Its memory outlasts its connections. */
export interface ScriptedPump {
  manner: Manner;
  /** Orders and schedules as they arrived, repeats included. */
  orders: OrderPayload[];
  schedules: SchedulePayload[];
  stoppedHeads: Set<number>;
  connect(port: number): Promise<void>;
  /** Breaks the connection off without a word. */
  drop(): Promise<void>;
  receipt(order: string, outcome: 'done' | 'refused' | 'expired', why?: string): Promise<void>;
  sayState(): Promise<void>;
  /** Waits for the next order of this kind that has not been waited for. */
  next(what: OrderPayload['do']): Promise<OrderPayload>;
}

export function scriptedPump(credentials: { username: string; password: string }, heads: number[] = [1]): ScriptedPump {
  const deviceId = credentials.username;
  let client: MqttClient | null = null;
  let waitedFor = 0;

  async function publish(word: 'state' | 'receipt', payload: object, retain: boolean): Promise<void> {
    if (client === null) throw new Error('The pump is not connected');
    await client.publishAsync(topicOf(deviceId, word), JSON.stringify(payload), { qos: 1, retain });
  }

  async function carryOut(order: OrderPayload): Promise<void> {
    if (pump.manner === 'silent') return;
    if (pump.manner === 'refuses') return pump.receipt(order.id, 'refused', 'clock');
    if (order.do === 'stop') pump.stoppedHeads.add(order.head);
    if (order.do === 'resume') pump.stoppedHeads.delete(order.head);
    await pump.receipt(order.id, 'done');
    await pump.sayState();
  }

  function take(topic: string, payload: Buffer): void {
    const parsed: unknown = JSON.parse(payload.toString());
    if (topic === topicOf(deviceId, 'schedule')) {
      pump.schedules.push(schedulePayloadSchema.parse(parsed));
      if (pump.manner !== 'silent') ignoreClosed(pump.sayState());
      return;
    }
    const order = orderPayloadSchema.parse(parsed);
    pump.orders.push(order);
    ignoreClosed(carryOut(order));
  }

  /** What a dropped connection takes with it is part of the script. */
  function ignoreClosed(saying: Promise<void>): void {
    saying.catch((error: unknown) => {
      if (client?.connected === true) throw error;
    });
  }

  const pump: ScriptedPump = {
    manner: 'obeys',
    orders: [],
    schedules: [],
    stoppedHeads: new Set(),
    async connect(port) {
      client = await connectClient(port, credentials);
      client.on('message', take);
      await client.subscribeAsync([topicOf(deviceId, 'schedule'), topicOf(deviceId, 'order')], { qos: 1 });
      await pump.sayState();
    },
    async drop() {
      const dropped = client;
      client = null;
      await dropped?.endAsync(true);
    },
    receipt: (order, outcome, why) => publish('receipt', { order, atMs: Date.now(), outcome, why }, false),
    sayState() {
      const states = heads.map((head) => ({
        head,
        state: pump.stoppedHeads.has(head) ? 'stopped' : 'idle',
        odometerMl: 100,
        odometerEpoch: 0,
      }));
      const scheduleVersion = pump.schedules.at(-1)?.version ?? null;
      return publish('state', { online: true, atMs: Date.now(), scheduleVersion, heads: states }, true);
    },
    async next(what) {
      let found: OrderPayload | undefined;
      await eventually(() => {
        const index = pump.orders.findIndex((order, at) => at >= waitedFor && order.do === what);
        if (index === -1) return false;
        found = pump.orders[index];
        waitedFor = index + 1;
        return true;
      }, `the pump gets an order to ${what}`);
      if (found === undefined) throw new Error('unreachable');
      return found;
    },
  };
  return pump;
}
