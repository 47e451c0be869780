import { liveCloseCodes, liveFrameSchema, livePath, type LiveFrame } from '#shared/contract/live.ts';
import { backoffMs } from './backoff.ts';

export interface LiveSocketParts {
  /** Asks for a ticket for the systems watched. Null: nobody is signed in, so stop trying. */
  askTicket: () => Promise<string | null>;
  openSocket: (address: string) => WebSocket;
  onFrame: (frame: LiveFrame) => void;
  /** Frames in between are no longer kept, or this stream starts without a frame to go on from: refetch. */
  onGap: () => void;
  onStatus: (open: boolean) => void;
  onRoleLost: () => void;
  origin: string;
  random: () => number;
}

/** A live stream that comes back by itself, from the last frame it saw, until it is closed. */
export function openLiveSocket(parts: LiveSocketParts): { close(): void; retryNow(): void } {
  let closed = false;
  let socket: WebSocket | null = null;
  let lastSeq: number | null = null;
  let attempt = 0;
  let timer: ReturnType<typeof setTimeout> | null = null;

  function later(): void {
    if (closed || timer !== null) return;
    timer = setTimeout(
      () => {
        timer = null;
        void connect();
      },
      backoffMs(attempt, parts.random()),
    );
    attempt += 1;
  }

  function receive(event: MessageEvent): void {
    const parsed = typeof event.data === 'string' ? liveFrameSchema.safeParse(parseJson(event.data)) : null;
    if (parsed === null || !parsed.success) {
      // A frame of a newer server: what it told is not lost when everything is fetched again.
      parts.onGap();
      return;
    }
    lastSeq = Math.max(lastSeq ?? 0, parsed.data.seq);
    if (parsed.data.type === 'gap') parts.onGap();
    else parts.onFrame(parsed.data);
  }

  async function connect(): Promise<void> {
    let ticket: string | null;
    try {
      ticket = await parts.askTicket();
    } catch {
      // The request has already told the connection store that nothing was heard.
      later();
      return;
    }
    if (closed || ticket === null) return;
    const query = new URLSearchParams({ ticket, ...(lastSeq === null ? {} : { since: String(lastSeq) }) });
    const opened = parts.openSocket(`${parts.origin.replace(/^http/, 'ws')}${livePath}?${query.toString()}`);
    socket = opened;
    opened.onopen = () => {
      attempt = 0;
      parts.onStatus(true);
      // With nothing to resume from, what changed between the first fetch and now came to nobody.
      if (lastSeq === null) parts.onGap();
    };
    opened.onmessage = receive;
    opened.onclose = (event) => {
      if (socket === opened) socket = null;
      parts.onStatus(false);
      if (closed) return;
      if (event.code === liveCloseCodes.roleLost) parts.onRoleLost();
      later();
    };
  }

  void connect();
  return {
    close() {
      closed = true;
      if (timer !== null) clearTimeout(timer);
      socket?.close();
    },
    retryNow() {
      if (closed || timer === null) return;
      clearTimeout(timer);
      timer = null;
      attempt = 0;
      void connect();
    },
  };
}

function parseJson(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch {
    return undefined;
  }
}
