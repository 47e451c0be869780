import { session } from './session.ts';

const channelName = 'steadfall-session';

/** Tells the other tabs that the person signed out here. */
export function tellOtherTabs(): void {
  const channel = new BroadcastChannel(channelName);
  channel.postMessage('signed-out');
  channel.close();
}

/** Signs this tab out when another one did. Returns how to stop listening. */
export function followOtherTabs(onSignedOut: () => void): () => void {
  const channel = new BroadcastChannel(channelName);
  channel.onmessage = () => {
    session.forget();
    onSignedOut();
  };
  return () => channel.close();
}
