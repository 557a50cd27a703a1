import { useSyncExternalStore } from 'react';

interface Clock {
  subscribe: (listener: () => void) => () => void;
  read: () => number;
}

function createClock(everyMilliseconds: number): Clock {
  const listeners = new Set<() => void>();
  let value = Date.now();
  let timer: ReturnType<typeof setInterval> | undefined;
  const tick = () => {
    value = Date.now();
    listeners.forEach((listener) => listener());
  };
  return {
    subscribe(listener) {
      if (listeners.size === 0) {
        value = Date.now();
        timer = setInterval(tick, everyMilliseconds);
      }
      listeners.add(listener);
      return () => {
        listeners.delete(listener);
        if (listeners.size === 0) clearInterval(timer);
      };
    },
    read: () => value,
  };
}

const minutes = createClock(20_000);

/** Now, good to twenty seconds: for durations. */
export const useNow = (): number => useSyncExternalStore(minutes.subscribe, minutes.read);
