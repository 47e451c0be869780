import { useEffect, useState } from 'react';

/** The value, once it has not changed for `quietMs`: what is asked of the server follows this and not each frame of a drag. */
export function useSettled<Value>(value: Value, quietMs: number): Value {
  const [settled, setSettled] = useState(value);
  useEffect(() => {
    const timer = setTimeout(() => setSettled(value), quietMs);
    return () => clearTimeout(timer);
  }, [value, quietMs]);
  return settled;
}
