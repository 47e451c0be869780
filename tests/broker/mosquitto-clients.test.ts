import { execFile, spawn } from 'node:child_process';
import { once } from 'node:events';
import { promisify } from 'node:util';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openTestBroker, type TestBroker } from '../helpers/broker.ts';
import { eventually } from '../helpers/eventually.ts';

/** The command line clients that Debian packages, written by other people from the same standard. */
const run = promisify(execFile);

let opened: TestBroker;

beforeEach(async () => {
  opened = await openTestBroker();
});

afterEach(() => opened.close());

const signIn = ({ username, password }: { username: string; password: string }) => [
  '-h',
  '127.0.0.1',
  '-p',
  String(opened.broker.port),
  '-u',
  username,
  '-P',
  password,
  '-V',
  '311',
];

describe('mosquitto_pub', () => {
  it('sends a measurement, and exits once it is acknowledged', async () => {
    const device = opened.device();
    const pack = '[{"n":"water","u":"Cel","v":25.1}]';
    await run('mosquitto_pub', [
      ...signIn(device),
      '-i',
      device.username,
      '-q',
      '1',
      '-t',
      `steadfall/${device.username}/senml`,
      '-m',
      pack,
    ]);
    expect(opened.received.map((message) => [message.word, message.payload.toString()])).toEqual([['senml', pack]]);
  });

  it('is told that it is not authorised with a wrong password', async () => {
    const device = opened.device();
    const failed = run('mosquitto_pub', [
      ...signIn({ ...device, password: 'wrong' }),
      '-i',
      device.username,
      '-q',
      '1',
      '-t',
      `steadfall/${device.username}/senml`,
      '-m',
      '[]',
    ]);
    await expect(failed).rejects.toThrow(/bad user name or password/i);
  });

  it('is cut off when it publishes outside its device', async () => {
    const device = opened.device();
    const other = opened.device();
    const lines = spawn(
      'mosquitto_pub',
      [...signIn(device), '-i', device.username, '-q', '1', '-t', `steadfall/${other.username}/senml`, '-l'],
      { stdio: ['pipe', 'ignore', 'pipe'] },
    );
    lines.stdin.write('[]\n');
    await eventually(() => opened.happened.includes(`disconnected ${device.username}`), 'it is cut off');
    lines.kill('SIGKILL');
    await once(lines, 'close');
    expect(opened.received).toEqual([]);
  });

  it('sends a will when it is killed', async () => {
    const device = opened.device();
    const topic = `steadfall/${device.username}/state`;
    const client = spawn(
      'mosquitto_pub',
      [
        ...signIn(device),
        '-i',
        device.username,
        '-q',
        '1',
        '-t',
        topic,
        '-l',
        '--will-topic',
        topic,
        '--will-payload',
        '{"online":false}',
        '--will-qos',
        '1',
        '--will-retain',
      ],
      { stdio: ['pipe', 'ignore', 'ignore'] },
    );
    client.stdin.write('{"online":true}\n');
    await eventually(() => opened.received.length === 1, 'the state arrives');
    client.kill('SIGKILL');
    await eventually(() => opened.received.length === 2, 'the will arrives');
    expect(opened.received.map((message) => message.isWill)).toEqual([false, true]);
  });
});

describe('mosquitto_sub', () => {
  it('hears its retained schedule and an order', async () => {
    const device = opened.device();
    const own = `steadfall/${device.username}`;
    await opened.broker.publish(`${own}/schedule`, '{"version":1,"heads":[]}', { retain: true, qos: 1 });
    const listening = run('mosquitto_sub', [
      ...signIn(device),
      '-i',
      device.username,
      '-q',
      '1',
      '-t',
      `${own}/schedule`,
      '-t',
      `${own}/order`,
      '-C',
      '2',
      '-F',
      '%r %t %p',
    ]);
    await eventually(() => opened.happened.includes(`listening ${device.username}`), 'it listens');
    await opened.broker.publish(`${own}/order`, '{"id":"o1"}', { retain: false, qos: 1 });
    const { stdout } = await listening;
    expect(stdout.trim().split('\n')).toEqual([`1 ${own}/schedule {"version":1,"heads":[]}`, `0 ${own}/order {"id":"o1"}`]);
  });

  it('is refused every other topic', async () => {
    const device = opened.device();
    const refused = await run('mosquitto_sub', [...signIn(device), '-i', device.username, '-t', 'steadfall/#']);
    expect(refused.stderr).toMatch(/denied/i);
  });
});
