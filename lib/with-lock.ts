/** Runs `work` while no other tab of this app holds the same lock; where the browser knows no locks, at once. */
export async function withLock<T>(name: string, work: () => Promise<T>): Promise<T> {
  if (!('locks' in navigator) || navigator.locks === undefined) return work();
  return navigator.locks.request(`steadfall-${name}`, work);
}
