import { useEffect } from 'react';
import { useQueryClient } from '@tanstack/react-query';
import type { QueryClient } from '@tanstack/react-query';
import { noteFreshness } from '../../lib/live';
import { openEventStream } from './event-stream';
import { createThrottle } from './throttle';

const pollEvery = 20_000;
/** Lists of what may have moved; forms and the session are left alone. */
const moving = ['equipment', 'fleet', 'map'];
const all = [...moving, 'alerts', 'watches', 'unit'];

/**
 * Keeps what is on screen true while it is drawn: renews what an event names, and asks again
 * every twenty seconds when there is no event stream.
 */
export function useLiveUpdates(isSignedIn: boolean): void {
  const client = useQueryClient();
  useEffect(() => (isSignedIn ? follow(client) : undefined), [client, isSignedIn]);
}

function follow(client: QueryClient): () => void {
  const renew = (keys: readonly string[][]) => {
    for (const queryKey of keys) void client.invalidateQueries({ queryKey });
  };
  const units = new Set<string>();
  const changed = createThrottle(1500, () => {
    renew([...moving.map((key) => [key]), ...[...units].map((unitId) => ['unit', unitId])]);
    units.clear();
  });
  const everything = createThrottle(3000, () => renew(all.map((key) => [key])));
  const heard = () => noteFreshness({ link: 'live', heardAt: Date.now() });
  let wasDown = false;
  const stream = openEventStream({
    onOpen: (isAnew) => {
      heard();
      if (isAnew || wasDown) everything.ask();
      wasDown = false;
    },
    onChanged: (unitIds) => {
      heard();
      unitIds.forEach((unitId) => units.add(unitId));
      changed.ask();
    },
    onAlerts: () => {
      heard();
      renew([['alerts'], ['watches']]);
    },
    onDown: () => {
      wasDown = true;
      noteFreshness({ link: 'polling' });
    },
  });
  const poll = setInterval(() => {
    stream.revive();
    // Nothing shows whether a silent stream still lives; one small answer does.
    renew(stream.isOpen() ? [['alerts', 'count']] : all.map((key) => [key]));
  }, pollEvery);
  return () => {
    stream.close();
    clearInterval(poll);
    changed.stop();
    everything.stop();
  };
}
