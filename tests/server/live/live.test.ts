import { connect } from 'node:net';
import { once } from 'node:events';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { liveFrameSchema } from '#shared/contract/live.ts';
import { recordChange } from '../../../server/changes/record-change.ts';
import { manualClock, type ManualClock } from '../../helpers/core.ts';
import { type LiveStream, openLive } from '../../helpers/live-stream.ts';
import { type Household, startTestServer, type TestPerson, type TestServer } from '../../helpers/server.ts';

let clock: ManualClock;
let server: TestServer;
let house: Household;
const streams: LiveStream[] = [];

beforeEach(async () => {
  clock = manualClock();
  server = await startTestServer({ clock, live: { maxBufferedBytes: 100_000 } });
  house = await server.household();
});

afterEach(async () => {
  for (const stream of streams.splice(0)) stream.cut();
  await server.close();
});

async function ticketOf(person: TestPerson, systemIds: string[]): Promise<string> {
  return (await person.api('createLiveTicket', { body: { systemIds } })).ticket;
}

async function open(query: Record<string, string>, headers?: Record<string, string>): Promise<LiveStream> {
  const stream = await openLive(server.url, query, headers);
  streams.push(stream);
  return stream;
}

const follow = async (person: TestPerson, systemIds: string[], since?: number) =>
  open({ ticket: await ticketOf(person, systemIds), ...(since === undefined ? {} : { since: String(since) }) });

/** Commits changes whose reason says which they are. */
function change(systemId: string, ...reasons: string[]): Promise<void> {
  return server.core.writer.commit((tx) => {
    for (const reason of reasons) recordChange(tx, { systemId, type: 'plan', atMs: clock.nowMs(), data: { reason } });
  });
}

async function newestSeq(): Promise<number> {
  const row = await server.core.reader.selectFrom('change').select('seq').orderBy('seq', 'desc').limit(1).executeTakeFirst();
  return row?.seq ?? 0;
}

const reasonsOf = (frames: { data: unknown }[]) => frames.map((frame) => (frame.data as { reason: string }).reason);

describe('a live stream', () => {
  it('sends what is committed, in order, as frames of the contract, to all who follow the system', async () => {
    const viewer = await server.member(house.siteId, 'viewer');
    const [first, second] = [await follow(house.owner, [house.systemId]), await follow(viewer, [house.systemId])];
    await change(house.systemId, 'one', 'two');
    await change(house.systemId, 'three');
    for (const stream of [first, second]) {
      const frames = await stream.frames(3);
      expect(reasonsOf(frames)).toEqual(['one', 'two', 'three']);
      expect(frames.every((frame) => liveFrameSchema.safeParse(frame).success)).toBe(true);
      expect(frames.map((frame) => frame.seq)).toEqual([...frames.map((frame) => frame.seq)].sort((a, b) => a - b));
    }
  });

  it('sends nothing of systems that were not asked for', async () => {
    const other = await server.household('Long pier');
    const stream = await follow(house.owner, [house.systemId]);
    await change(other.systemId, 'not for you');
    await change(house.systemId, 'for you');
    expect(reasonsOf(await stream.frames(1))).toEqual(['for you']);
  });

  it('resumes where it was cut, without loss or repetition', async () => {
    await change(house.systemId, 'seen');
    const since = await newestSeq();
    await change(house.systemId, 'missed 1', 'missed 2');
    const stream = await follow(house.owner, [house.systemId], since);
    await change(house.systemId, 'new');
    expect(reasonsOf(await stream.frames(3))).toEqual(['missed 1', 'missed 2', 'new']);
  });

  it('says gap for each system when what was missed is no longer kept', async () => {
    await change(house.systemId, 'seen');
    const since = await newestSeq();
    await change(house.systemId, 'missed');
    clock.advance(25 * 3_600_000);
    await server.context.jobs.run();
    house.owner = await signInAgain(house.owner);
    const stream = await follow(house.owner, [house.systemId], since);
    expect(await stream.frames(1)).toMatchObject([{ type: 'gap', systemId: house.systemId, data: {} }]);
    await change(house.systemId, 'new');
    expect(reasonsOf((await stream.frames(2)).slice(1))).toEqual(['new']);
  });

  it('says gap when more was missed than is worth replaying', async () => {
    const since = await newestSeq();
    await change(house.systemId, ...Array.from({ length: 5_001 }, (_, n) => `missed ${n}`));
    const stream = await follow(house.owner, [house.systemId], since);
    expect(await stream.frames(1)).toMatchObject([{ type: 'gap', seq: await newestSeq() }]);
  });

  it('says gap to a browser that saw more than there is: the server was restored from a backup', async () => {
    const stream = await follow(house.owner, [house.systemId], 1_000_000);
    expect(await stream.frames(1)).toMatchObject([{ type: 'gap' }]);
  });

  it('cuts a browser that does not read, instead of keeping everything for it', async () => {
    const ticket = await ticketOf(house.owner, [house.systemId]);
    const socket = connect(server.httpPort, '127.0.0.1');
    const handshake = [
      `GET /api/live?ticket=${ticket} HTTP/1.1`,
      `Host: 127.0.0.1:${server.httpPort}`,
      'Connection: Upgrade',
      'Upgrade: websocket',
      'Sec-WebSocket-Version: 13',
      'Sec-WebSocket-Key: dGhlIHNhbXBsZSBub25jZQ==',
    ];
    socket.write(`${handshake.join('\r\n')}\r\n\r\n`);
    await once(socket, 'readable');
    await expect.poll(() => server.context.live.connections()).toBe(1);
    const long = 'x'.repeat(500_000);
    await expect
      .poll(
        async () => {
          await change(house.systemId, long);
          return server.context.live.connections();
        },
        { interval: 5, timeout: 20_000 },
      )
      .toBe(0);
    socket.destroy();
  });
});

/** After a long time on the clock: a session as new. */
async function signInAgain(person: TestPerson): Promise<TestPerson> {
  const again = await server.person('owner');
  await server.join(again, house.siteId, 'owner');
  expect(again.id).not.toBe(person.id);
  return again;
}

describe('a ticket', () => {
  it('is good once', async () => {
    const ticket = await ticketOf(house.owner, [house.systemId]);
    await open({ ticket });
    await expect(open({ ticket })).rejects.toThrow('401');
  });

  it('is good for 30 s', async () => {
    const ticket = await ticketOf(house.owner, [house.systemId]);
    clock.advance(30_000);
    await expect(open({ ticket })).rejects.toThrow('401');
  });

  it('is nothing that one could make up, or leave out', async () => {
    await expect(open({ ticket: 'x'.repeat(43) })).rejects.toThrow('401');
    await expect(open({})).rejects.toThrow('401');
  });

  it('is refused for a system of a site that one is not in, whatever one’s role elsewhere', async () => {
    const other = await server.household('Long pier');
    for (const systemIds of [[other.systemId], [house.systemId, other.systemId], ['0190a000-0000-7000-8000-000000000000']]) {
      expect(await house.owner.api.problem('createLiveTicket', { body: { systemIds } })).toMatchObject({ status: 404 });
    }
  });

  it('does not outlive the session that asked for it', async () => {
    const ticket = await ticketOf(house.owner, [house.systemId]);
    await house.owner.api('signOut');
    const stream = await open({ ticket });
    expect(await stream.closed).toBe(4401);
  });

  it('does not outlive the role that allowed it', async () => {
    const viewer = await server.member(house.siteId, 'viewer');
    const ticket = await ticketOf(viewer, [house.systemId]);
    await house.owner.api('removeMember', { params: { siteId: house.siteId, userId: viewer.id } });
    const stream = await open({ ticket });
    expect(await stream.closed).toBe(4403);
  });
});

describe('the stream closes', () => {
  it('with 4401 when its session signs out, and only then', async () => {
    const [mine, other] = [await server.member(house.siteId, 'keeper'), await server.member(house.siteId, 'keeper')];
    const [stream, kept] = [await follow(mine, [house.systemId]), await follow(other, [house.systemId])];
    await mine.api('signOut');
    expect(await stream.closed).toBe(4401);
    await change(house.systemId, 'still here');
    expect(reasonsOf(await kept.frames(1))).toEqual(['still here']);
  });

  it('with 4403 when the member is taken out of the site, and not when another role is given', async () => {
    const member = await server.member(house.siteId, 'keeper');
    const params = { siteId: house.siteId, userId: member.id };
    const stream = await follow(member, [house.systemId]);
    await house.owner.api('setRole', { params, body: { role: 'viewer' } });
    await change(house.systemId, 'viewers see this too');
    expect(await stream.frames(1)).toHaveLength(1);
    await house.owner.api('removeMember', { params });
    expect(await stream.closed).toBe(4403);
  });

  it('with 1001 when the server stops', async () => {
    const stream = await follow(house.owner, [house.systemId]);
    await server.context.live.close();
    expect(await stream.closed).toBe(1001);
    server.context.live.close = async () => {};
  });
});

describe('an upgrade is refused', () => {
  it('to a page of another site', async () => {
    const ticket = await ticketOf(house.owner, [house.systemId]);
    await expect(open({ ticket }, { origin: 'https://elsewhere.example' })).rejects.toThrow('403');
    const stream = await open({ ticket }, { origin: server.url });
    expect(stream.isOpen()).toBe(true);
  });

  it('for a sequence number that is none', async () => {
    const ticket = await ticketOf(house.owner, [house.systemId]);
    await expect(open({ ticket, since: '-1' })).rejects.toThrow('422');
  });
});
