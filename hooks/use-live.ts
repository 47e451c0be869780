import { useQueryClient } from '@tanstack/react-query';
import { useEffect } from 'react';
import { ApiError } from '../lib/api-problem.ts';
import { call } from '../lib/api.ts';
import { connection } from '../lib/connection.ts';
import { openLiveSocket } from '../lib/live-socket.ts';
import { keys } from './keys.ts';
import { refetchAll, writeFrame } from './live-cache.ts';

async function askTicket(systemIds: string[]): Promise<string | null> {
  try {
    return (await call('createLiveTicket', { body: { systemIds } })).ticket;
  } catch (error) {
    if (error instanceof ApiError && error.problem.kind === 'signed-out') return null;
    throw error;
  }
}

/** Keeps the cache fresh from the live stream of these systems. Mounted once, in the signed-in layout. */
export function useLive(systemIds: readonly string[]): void {
  const client = useQueryClient();
  const joined = [...systemIds].sort().join(',');
  useEffect(() => {
    if (joined === '') return undefined;
    const socket = openLiveSocket({
      askTicket: () => askTicket(joined.split(',')),
      openSocket: (address) => new WebSocket(address),
      onFrame: (frame) => {
        connection.heard();
        writeFrame(client, frame);
      },
      onGap: () => refetchAll(client),
      onStatus: (open) => connection.setLive(open),
      onRoleLost: () => {
        void client.invalidateQueries({ queryKey: keys.me() });
        void client.invalidateQueries({ queryKey: keys.systems() });
      },
      origin: window.location.origin,
      random: () => Math.random(),
    });
    const retry = () => socket.retryNow();
    window.addEventListener('online', retry);
    return () => {
      window.removeEventListener('online', retry);
      socket.close();
      connection.setLive(null);
    };
  }, [client, joined]);
}
