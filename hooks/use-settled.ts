import { useEffect, useState } from 'react';

/**
 * The value, once it has not changed for `quietMs` and nobody holds it: what is asked of the server follows this and not each
 * frame of a drag.
 */
export function useSettled<Value>(value: Value, quietMs: number, isHeld = false): Value {
  const [settled, setSettled] = useState(value);
  useEffect(() => {
    if (isHeld) return undefined;
    const timer = setTimeout(() => setSettled(value), quietMs);
    return () => clearTimeout(timer);
  }, [value, quietMs, isHeld]);
  return settled;
}
