import { useEffect, useState } from 'react';

/** This device's clock, ms, read again every so many ms: for "nothing since". */
export function useNow(everyMs: number): number {
  const [nowMs, setNowMs] = useState(() => Date.now());
  useEffect(() => {
    const timer = setInterval(() => setNowMs(Date.now()), everyMs);
    return () => clearInterval(timer);
  }, [everyMs]);
  return nowMs;
}
