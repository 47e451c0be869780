import { useEffect, useState } from 'react';

/** The time, renewed every `everyMs`: for ages ("4 min ago"), which change while nothing happens. */
export function useNow(everyMs = 10_000): number {
  const [nowMs, setNowMs] = useState(() => Date.now());
  useEffect(() => {
    const timer = setInterval(() => setNowMs(Date.now()), everyMs);
    return () => clearInterval(timer);
  }, [everyMs]);
  return nowMs;
}
