import { useSyncExternalStore } from 'react';

/** How fresh the screen is: `live` by events, `polling` without them, `lost` without any answer. */
export interface Freshness {
  link: 'live' | 'polling' | 'lost';
  /** When the server last said anything, in epoch milliseconds. */
  heardAt: number;
  /** How far the reckoning of movements is behind the reads; 0 caught up. */
  projectorLagMs: number;
}

let current: Freshness = { link: 'polling', heardAt: Date.now(), projectorLagMs: 0 };
/** What the link was before answers stopped coming. */
let before: Freshness['link'] = 'polling';
const listeners = new Set<() => void>();

/** Notes what the link has just shown; whoever draws freshness is told. */
export function noteFreshness(change: Partial<Freshness>): void {
  current = { ...current, ...change };
  listeners.forEach((listener) => listener());
}

/** An answer came, by whatever way. */
export const noteAnswer = (): void =>
  noteFreshness({ link: current.link === 'lost' ? before : current.link, heardAt: Date.now() });

/** A request got no answer at all. */
export function noteNoAnswer(): void {
  if (current.link !== 'lost') before = current.link;
  noteFreshness({ link: 'lost' });
}

const subscribe = (listener: () => void) => {
  listeners.add(listener);
  return () => {
    listeners.delete(listener);
  };
};

/** The freshness of this window; draws again when it changes. */
export const useFreshness = (): Freshness => useSyncExternalStore(subscribe, () => current);

const staleAfter = 60_000;
const pastTenseAfter = 300_000;

/** How old what stands on the screen is: over a minute it is said, over five the sentence turns to the past. */
export function ageWord(freshness: Freshness, now: number): 'fresh' | 'stale' | 'past' {
  const age = Math.max(now - freshness.heardAt, freshness.projectorLagMs);
  if (age > pastTenseAfter) return 'past';
  return age > staleAfter ? 'stale' : 'fresh';
}
