import { send } from '../lib/api.ts';
import { createOutbox } from '../lib/outbox.ts';
import { session } from '../lib/session.ts';
import { withLock } from '../lib/with-lock.ts';
import { keys } from './keys.ts';
import { queryClient } from './query-client.ts';

/** The outbox of this browser. What was sent shows up by refetching its system. */
export const outbox = createOutbox({
  storage: localStorage,
  send,
  lock: (work) => withLock('outbox', work),
  userId: () => {
    const state = session.get();
    return state.status === 'signed-in' ? state.user.id : null;
  },
  nowMs: () => Date.now(),
  random: () => Math.random(),
  onSent: (entry) => {
    void queryClient.invalidateQueries({ queryKey: keys.system(entry.systemId) });
  },
});
