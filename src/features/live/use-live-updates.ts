import { useEffect } from 'react';
import { useQueryClient } from '@tanstack/react-query';
import type { QueryClient } from '@tanstack/react-query';
import { noteFreshness } from '../../lib/live';
import { api } from '../../lib/paths';
import type { ChangedEvent } from '../../lib/wire';
import { createThrottle } from './throttle';

const pollEvery = 20_000;
/** Lists of what may have moved; forms and the session are left alone. */
const moving = ['equipment', 'fleet', 'map'];

/**
 * Keeps what is on screen true while it is drawn: renews what an event names, and asks again
 * every twenty seconds when there is no event stream.
 */
export function useLiveUpdates(isSignedIn: boolean): void {
  const client = useQueryClient();
  useEffect(() => (isSignedIn ? follow(client) : undefined), [client, isSignedIn]);
}

function follow(client: QueryClient): () => void {
  const units = new Set<string>();
  const renewMoving = createThrottle(1500, () => {
    const changed = [...units];
    units.clear();
    renew(client, changed);
  });
  const everything = createThrottle(3000, () => {
    for (const key of [...moving, 'alerts', 'watches', 'unit'])
      void client.invalidateQueries({ queryKey: [key] });
  });
  const renewAll = () => everything.ask();
  const heard = () => noteFreshness({ link: 'live', heardAt: Date.now() });
  const source = new EventSource(api.events);
  source.addEventListener('ready', () => {
    heard();
    renewAll();
  });
  source.addEventListener('changed', (event) => {
    heard();
    const { unitIds } = JSON.parse(event.data as string) as ChangedEvent;
    unitIds.forEach((id) => units.add(id));
    renewMoving.ask();
  });
  source.addEventListener('alerts', () => {
    heard();
    void client.invalidateQueries({ queryKey: ['alerts'] });
  });
  source.addEventListener('reset', () => {
    heard();
    renewAll();
  });
  source.addEventListener('error', () => noteFreshness({ link: 'polling' }));
  const poll = setInterval(() => {
    if (source.readyState !== EventSource.OPEN) renewAll();
    // Nothing shows whether a silent stream still lives; one small answer does.
    else void client.invalidateQueries({ queryKey: ['alerts', 'count'] });
  }, pollEvery);
  return () => {
    source.close();
    clearInterval(poll);
    renewMoving.stop();
    everything.stop();
  };
}

function renew(client: QueryClient, unitIds: string[]): void {
  for (const key of moving) void client.invalidateQueries({ queryKey: [key] });
  for (const unitId of unitIds) void client.invalidateQueries({ queryKey: ['unit', unitId] });
}
