import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { backoffMs } from '../../lib/backoff.ts';
import { openLiveSocket } from '../../lib/live-socket.ts';

class FakeSocket {
  onopen: (() => void) | null = null;
  onmessage: ((event: { data: unknown }) => void) | null = null;
  onclose: ((event: { code: number }) => void) | null = null;
  isClosed = false;
  close() {
    this.isClosed = true;
    this.onclose?.({ code: 1000 });
  }
  frame(frame: unknown) {
    this.onmessage?.({ data: JSON.stringify(frame) });
  }
}

const systemId = '0190a000-0000-7000-8000-000000000001';
const plan = (seq: number) => ({ seq, systemId, type: 'plan', data: { reason: 'schedule' } });

let sockets: FakeSocket[];
let addresses: string[];
const heard = { frame: vi.fn(), gap: vi.fn(), status: vi.fn(), roleLost: vi.fn() };
const askTicket = vi.fn<() => Promise<string | null>>();

function open() {
  return openLiveSocket({
    askTicket,
    openSocket: (address) => {
      addresses.push(address);
      const socket = new FakeSocket();
      sockets.push(socket);
      return socket as Partial<WebSocket> as WebSocket;
    },
    onFrame: heard.frame,
    onGap: heard.gap,
    onStatus: heard.status,
    onRoleLost: heard.roleLost,
    origin: 'http://127.0.0.1:4000',
    random: () => 1,
  });
}

const last = () => {
  const socket = sockets.at(-1);
  if (socket === undefined) throw new Error('no socket was opened');
  return socket;
};

beforeEach(() => {
  vi.useFakeTimers();
  sockets = [];
  addresses = [];
  vi.resetAllMocks();
  askTicket.mockImplementation(() => Promise.resolve(`ticket-${addresses.length + 1}`));
});
afterEach(() => vi.useRealTimers());

describe('the live socket', () => {
  it('opens with a fresh ticket and hands frames on', async () => {
    open();
    await vi.advanceTimersByTimeAsync(0);
    expect(addresses).toEqual(['ws://127.0.0.1:4000/api/live?ticket=ticket-1']);
    last().onopen?.();
    last().frame(plan(7));
    expect(heard.status).toHaveBeenLastCalledWith(true);
    expect(heard.frame).toHaveBeenCalledWith(plan(7));
  });

  it('comes back from the last frame it saw', async () => {
    open();
    await vi.advanceTimersByTimeAsync(0);
    last().onopen?.();
    last().frame(plan(7));
    last().onclose?.({ code: 1006 });
    expect(heard.status).toHaveBeenLastCalledWith(false);
    await vi.advanceTimersByTimeAsync(500);
    expect(addresses[1]).toBe('ws://127.0.0.1:4000/api/live?ticket=ticket-2&since=7');
    heard.gap.mockClear();
    last().onopen?.();
    expect(heard.gap).not.toHaveBeenCalled();
  });

  it('asks for everything anew once the first stream is open, for what changed since the first fetch', async () => {
    open();
    await vi.advanceTimersByTimeAsync(0);
    expect(heard.gap).not.toHaveBeenCalled();
    last().onopen?.();
    expect(heard.gap).toHaveBeenCalledTimes(1);
    last().frame(plan(7));
    expect(heard.gap).toHaveBeenCalledTimes(1);
  });

  it('asks for everything anew when it comes back with nothing to resume from', async () => {
    open();
    await vi.advanceTimersByTimeAsync(0);
    last().onopen?.();
    last().onclose?.({ code: 1006 });
    await vi.advanceTimersByTimeAsync(500);
    last().onopen?.();
    expect(heard.gap).toHaveBeenCalledTimes(2);
  });

  it('takes a gap, and a frame that it does not know, as a reason to fetch anew', async () => {
    open();
    await vi.advanceTimersByTimeAsync(0);
    last().frame({ seq: 3, systemId, type: 'gap', data: {} });
    last().frame({ seq: 4, systemId, type: 'weather', data: {} });
    last().onmessage?.({ data: '{broken' });
    expect(heard.gap).toHaveBeenCalledTimes(3);
    expect(heard.frame).not.toHaveBeenCalled();
  });

  it('waits longer after each failure', async () => {
    askTicket.mockRejectedValue(new Error('no network'));
    open();
    await vi.advanceTimersByTimeAsync(0);
    await vi.advanceTimersByTimeAsync(499);
    expect(askTicket).toHaveBeenCalledTimes(1);
    await vi.advanceTimersByTimeAsync(1);
    expect(askTicket).toHaveBeenCalledTimes(2);
    await vi.advanceTimersByTimeAsync(999);
    expect(askTicket).toHaveBeenCalledTimes(2);
    await vi.advanceTimersByTimeAsync(1);
    expect(askTicket).toHaveBeenCalledTimes(3);
  });

  it('tries at once when the network is back', async () => {
    askTicket.mockRejectedValueOnce(new Error('no network'));
    const socket = open();
    await vi.advanceTimersByTimeAsync(0);
    socket.retryNow();
    await vi.advanceTimersByTimeAsync(0);
    expect(sockets).toHaveLength(1);
  });

  it('says that a role was lost, and asks again for what is left', async () => {
    open();
    await vi.advanceTimersByTimeAsync(0);
    last().onclose?.({ code: 4403 });
    expect(heard.roleLost).toHaveBeenCalledTimes(1);
    await vi.advanceTimersByTimeAsync(500);
    expect(sockets).toHaveLength(2);
  });

  it('stops when nobody is signed in, and when it is closed', async () => {
    askTicket.mockResolvedValueOnce(null);
    open();
    await vi.advanceTimersByTimeAsync(60_000);
    expect(sockets).toHaveLength(0);

    const second = open();
    await vi.advanceTimersByTimeAsync(0);
    second.close();
    await vi.advanceTimersByTimeAsync(60_000);
    expect(sockets).toHaveLength(1);
    expect(last().isClosed).toBe(true);
  });
});

describe('the wait before a new try', () => {
  it('doubles, is spread, and is at most half a minute', () => {
    expect([backoffMs(0, 0), backoffMs(0, 1), backoffMs(3, 1), backoffMs(50, 1)]).toEqual([250, 500, 4000, 30_000]);
  });
});
