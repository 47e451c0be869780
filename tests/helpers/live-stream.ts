import { WebSocket } from 'ws';
import { livePath } from '#shared/contract/live.ts';

interface Frame {
  seq: number;
  type: string;
  systemId: string;
  data: unknown;
}

export interface LiveStream {
  /** Resolves with the first frames once so many have come. */
  frames(count: number): Promise<Frame[]>;
  /** Resolves with the close code. */
  closed: Promise<number>;
  isOpen(): boolean;
  cut(): void;
}

/** Opens the live stream. @throws {Error} with the status when the server refuses the upgrade. */
export function openLive(url: string, query: Record<string, string>, headers: Record<string, string> = {}): Promise<LiveStream> {
  const socket = new WebSocket(`${url.replace(/^http/, 'ws')}${livePath}?${new URLSearchParams(query).toString()}`, { headers });
  const received: Frame[] = [];
  const waiting = new Set<() => void>();
  socket.on('message', (text: Buffer) => {
    received.push(JSON.parse(text.toString()) as Frame);
    for (const look of waiting) look();
  });
  const closed = new Promise<number>((resolve) => socket.on('close', resolve));

  function frames(count: number): Promise<Frame[]> {
    return new Promise((resolve) => {
      const look = () => {
        if (received.length < count) return;
        waiting.delete(look);
        resolve(received.slice(0, count));
      };
      waiting.add(look);
      look();
    });
  }

  return new Promise((resolve, reject) => {
    socket.on('unexpected-response', (_, response) => reject(new Error(`The upgrade was refused with ${response.statusCode}`)));
    socket.on('error', reject);
    socket.on('open', () => resolve({ frames, closed, isOpen: () => socket.readyState === socket.OPEN, cut: () => socket.terminate() }));
  });
}
